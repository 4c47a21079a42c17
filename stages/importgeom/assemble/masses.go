package assemble

import (
	"strings"

	"hushframe/core/mechanics/airframe"
)

// Mass is one line of the mass table.
type Mass struct {
	Name, Material string
	Number         int
	Mass           float64 // kg, of all of them
	Structure      bool    // plate, standoff or bolt
}

// Masses lists plates, then bolts by group, standoffs by name and material with their screws, and bodies.
func (a *Assembly) Masses() []Mass { return Masses(&a.Geometry, &a.Properties) }

// Masses lists the masses of an airframe, with alike standoffs, screws and bolts as one. The geometry
// names the groups of bolts; without it (nil) all bolts are one group.
func Masses(g *airframe.Geometry, p *airframe.Properties) []Mass {
	group := map[string]string{}
	if g != nil {
		for _, b := range g.Bolts {
			group[b.Name] = " " + b.Group
		}
	}
	var out []Mass
	add := func(m Mass) {
		for i := range out {
			if out[i].Name == m.Name && out[i].Material == m.Material {
				out[i].Mass += m.Mass
				out[i].Number += m.Number
				return
			}
		}
		out = append(out, m)
	}
	for _, pl := range p.Plates {
		material := pl.Material
		if material == "" {
			material = "ply stack"
		}
		add(Mass{"plate " + pl.Plate, material, 1, pl.Mass, true})
	}
	for _, b := range p.Bolts {
		add(Mass{"bolts" + group[b.Bolt], "", 1, b.Mass, true})
	}
	for _, s := range p.Standoffs {
		add(Mass{"standoff " + base(s.Standoff), s.Material, 1, s.Mass, true})
	}
	for _, b := range p.Bodies {
		if name, ok := p.ScrewOf(b.Name); ok {
			add(Mass{"screws of standoff " + base(name), "", 1, b.Mass, true})
			continue
		}
		add(Mass{b.Kind + " " + b.Name, "", 1, b.Mass, false})
	}
	return out
}

// base takes the number off a name that stands for one of several.
func base(name string) string {
	i := strings.LastIndexByte(name, '-')
	if i < 1 || i == len(name)-1 || strings.Trim(name[i+1:], "0123456789") != "" {
		return name
	}
	return name[:i]
}
