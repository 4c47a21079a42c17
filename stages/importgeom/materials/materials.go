// Package materials is the built-in table of materials.
//
// The values are typical ones, from memory of handbook ranges and data sheets; none is measured. Scatter is a
// judgement of how far a bought part may lie from them (relative standard uncertainty of the moduli), loss factors are
// those of the material alone, without joints. A frame that matters should give its own values.
//
// Moduli in Pa, density in kg/m³.
package materials

import (
	"sort"

	"hushframe/core/mechanics/airframe"
)

const (
	gpa = 1e9
	mpa = 1e6
)

func orthotropic(name string, e, nu, g12, g13, density, loss, scatter float64, origin string) airframe.Material {
	return airframe.Material{Name: name, E1: e, E2: e, E3: through, Nu12: nu, G12: g12, G13: g13, G23: g13, Density: density,
		LossFactor: loss, Typical: true, Scatter: scatter, Origin: origin}
}

// through is the modulus through the thickness of a laminate, for which the resin counts: 7 to 11 GPa.
const through = 9 * gpa

func isotropic(name string, e, nu, density, loss, scatter float64, origin string) airframe.Material {
	g := e / (2 * (1 + nu))
	return airframe.Material{Name: name, E1: e, E2: e, E3: e, Nu12: nu, G12: g, G13: g, G23: g, Density: density,
		LossFactor: loss, Isotropic: true, Typical: true, Scatter: scatter, Origin: origin}
}

var table = []airframe.Material{
	orthotropic("carbon-0-90", 60*gpa, 0.05, 4.5*gpa, 3*gpa, 1550, 0.008, 0.12,
		"woven or cross-ply standard-modulus carbon in epoxy, fibre volume 50 to 60 %; typical handbook range 50 to 70 GPa, from memory"),
	orthotropic("carbon-quasi-isotropic", 45*gpa, 0.31, 17.2*gpa, 3.2*gpa, 1550, 0.009, 0.12,
		"0/±45/90 standard-modulus carbon in epoxy, fibre volume 50 to 60 %; typical handbook range 40 to 52 GPa, from memory"),
	orthotropic("glass", 22*gpa, 0.14, 4*gpa, 3*gpa, 1850, 0.014, 0.15,
		"woven E-glass in epoxy (circuit-board grade); typical handbook range 18 to 26 GPa, from memory"),
	isotropic("aluminium", 70*gpa, 0.33, 2700, 0.001, 0.02,
		"wrought alloys; typical handbook range 68 to 72 GPa, from memory"),
	isotropic("steel", 205*gpa, 0.29, 7850, 0.001, 0.03,
		"carbon and alloy steels; stainless ones are 5 % lower; typical handbook range 190 to 210 GPa, from memory"),
	isotropic("titanium", 113*gpa, 0.34, 4430, 0.001, 0.03,
		"the common alloy with 6 % aluminium and 4 % vanadium; typical handbook range 110 to 117 GPa, from memory"),
	isotropic("nylon", 2.2*gpa, 0.4, 1140, 0.04, 0.3,
		"polyamide 6 or 66; 3 GPa dry, under 1.5 GPa saturated with water; typical data-sheet range, from memory"),
	isotropic("tpu-printed", 60*mpa, 0.45, 1150, 0.25, 0.5,
		"printed thermoplastic polyurethane of about 95 Shore A, solid infill; stiffness depends on rate and print; typical data-sheet range, from memory"),
	isotropic("petg-printed", 1.8*gpa, 0.38, 1240, 0.03, 0.2,
		"printed glycol-modified polyester, solid infill, loaded along the lines; typical data-sheet range 1.5 to 2.1 GPa, from memory"),
}

// Find gives the material of a name.
func Find(name string) (airframe.Material, bool) {
	for _, m := range table {
		if m.Name == name {
			return m, true
		}
	}
	return airframe.Material{}, false
}

// Names lists the materials, sorted.
func Names() []string {
	var names []string
	for _, m := range table {
		names = append(names, m.Name)
	}
	sort.Strings(names)
	return names
}
