package cases

import (
	"context"
	"fmt"
	"math"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/outline"
)

// barLength is the length (m) of the bars.
const barLength = 0.1

// twistedBar clamps one end of a bar of beams and puts a unit moment about its axis on the other. It returns the twist of its end (rad) and the greatest shear stress at its clamp (Pa).
func twistedBar(t known.T, section beam.Section) (twist, stress float64) {
	t.Helper()
	var f frame
	a, b := f.point(0, 0, 0), f.point(barLength, 0, 0)
	f.member("bar", section, assembly.Vec{0, 1, 0}, a, b, 4)
	f.hold(a, "xyzXYZ")
	s := assemble(t, &f.Problem)
	load := unitForce(s, int(b), 3)
	u := static(t, s, load)
	return dotted(load, u), s.BeamStresses(u)[0][0].Torsion
}

// ratioOf reads the width over the thickness from a label.
func ratioOf(t known.T, row known.Row, label string) (ratio float64) {
	t.Helper()
	if _, err := fmt.Sscanf(label, "b/t=%g", &ratio); err != nil {
		t.Fatalf("row %s: label %q: %v", row.ID, label, err)
	}
	return ratio
}

// Row A-TORSION-J: St Venant's constant over width times thickness cubed.
func torsionConstants(t known.T, row known.Row) []float64 {
	const thickness, e, nu = 2e-3, 70e9, 0.3
	var got []float64
	for _, label := range row.Labels {
		ratio := ratioOf(t, row, label)
		twist, _ := twistedBar(t, beam.Rectangle(ratio*thickness, thickness, e, nu, 2700))
		got = append(got, barLength/twist/(e/(2*(1+nu)))/(ratio*math.Pow(thickness, 4)))
	}
	return got
}

// Row A-TORSION-TAU: the torque over the greatest shear stress, over width times thickness squared.
func torsionStresses(t known.T, row known.Row) []float64 {
	const thickness = 2e-3
	var got []float64
	for _, label := range row.Labels {
		ratio := ratioOf(t, row, label)
		_, stress := twistedBar(t, beam.Rectangle(ratio*thickness, thickness, 70e9, 0.3, 2700))
		got = append(got, 1/stress/(ratio*math.Pow(thickness, 3)))
	}
	return got
}

// Rows A-ORTHO-TORSION-*: an orthotropic bar twists like an isotropic one that is wider by √(Gxz/Gxy).
func orthotropicBars(t known.T, row known.Row) []float64 {
	var c struct {
		Width     float64 `json:"width_y_m"`
		Thickness float64 `json:"thickness_z_m"`
		Gxy       float64 `json:"Gxy_Pa"`
		Gxz       float64 `json:"Gxz_Pa"`
	}
	row.Decode(t, &c)
	wider := math.Sqrt(c.Gxz / c.Gxy)
	s := beam.Rectangle(c.Width, c.Thickness, 60e9, 0, 1500)
	s.GJ = c.Gxy / wider * beam.TorsionConstant(c.Width*wider, c.Thickness)
	twist, _ := twistedBar(t, s)
	return []float64{barLength / twist}
}

// Rows A-FSDT-STRIP-*: the rigidity of a narrow strip with free edges as the mesh stage meshes it.
func narrowStrips(t known.T, row known.Row) []float64 {
	var c struct {
		Width     float64 `json:"width_m"`
		Thickness float64 `json:"thickness_m"`
		Gxy       float64 `json:"Gxy_Pa"`
		Gxz       float64 `json:"Gxz_Pa"`
	}
	row.Decode(t, &c)
	m := laminate.Material{E1: 60e9, E2: 60e9, G12: c.Gxy, G13: c.Gxz, G23: c.Gxz, Density: 1}
	section, err := laminate.Homogeneous(m, c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	const size = 5e-3 // the default of the mesh stage
	rigidity := StripRigidity(t, c.Width, c.Thickness, section, size)
	if c.Width < 2*c.Thickness {
		// Narrower, first-order shear theory itself is 2 % off St Venant's: the value is left out.
		return []float64{rigidity}
	}
	return []float64{rigidity, rigidity}
}

// StripRigidity returns the torsional rigidity (N·m²) of a plate strip of the given width and thickness (m) on the mesh
// that the mesh stage makes with elements of the given size (m): the difference of the twists of strips six and three
// times as long as wide, which leaves out what their rigid grips add.
func StripRigidity(t known.T, width, thickness float64, section laminate.Section, size float64) float64 {
	t.Helper()
	short := stripTwist(t, 3*width, width, thickness, section, size)
	long := stripTwist(t, 6*width, width, thickness, section, size)
	return 3 * width / (long - short)
}

// stripTwist returns how far (rad) one end of a strip turns against the other under 1 N·m about its axis. Both ends are
// held rigidly, warping included.
func stripTwist(t known.T, length, width, thickness float64, section laminate.Section, size float64) float64 {
	t.Helper()
	kind := shell.QuadraticTriangle()
	const grip = 2e-3
	pad := func(name string, x float64) airframe.Patch {
		return airframe.Patch{Name: name, Shape: airframe.Rectangle, Centre: outline.Point{X: x}, Width: 2 * grip, Height: 2 * width}
	}
	g := &airframe.Geometry{
		Plates: []airframe.Plate{{Name: "strip", Thickness: thickness,
			Frame:  airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}},
			Region: outline.NewRegion(outline.Rectangle(outline.Point{X: length / 2}, length+2*grip, width, 0))}},
		Patches: []airframe.Patch{pad("root", -grip), pad("tip", length+grip)},
	}
	m, err := mesh.Build(context.Background(), g, mesh.Options{Size: size, Element: kind.Describe().Name})
	if err != nil {
		t.Fatal(err)
	}
	p := &assembly.Problem{
		Groups: []assembly.Group{{Name: "strip", Kind: assembly.PartGroup}, {Name: "vice", Kind: assembly.JointGroup}},
		Plates: []assembly.PlatePart{{Type: kind, Axes: assembly.Global, Section: section, Elements: m.Triangles}},
		Bodies: []assembly.Body{{Name: "root", Nodes: m.Patches[0].Nodes}, {Name: "tip", Nodes: m.Patches[1].Nodes}},
		Springs: []assembly.Spring{{Group: 1, A: 0, B: assembly.Ground, Axes: assembly.Global,
			Stiffness: [6]float64{inf, inf, inf, inf, inf, inf}}},
	}
	for _, n := range m.Nodes {
		p.Nodes = append(p.Nodes, assembly.Vec(n))
	}
	s := assemble(t, p)
	load := make([]float64, s.N)
	at := assembly.Vec{length, 0, 0}
	s.Load(load, 1, at, [6]float64{3: 1})
	return s.Motion(1, at, static(t, s, load))[3]
}
