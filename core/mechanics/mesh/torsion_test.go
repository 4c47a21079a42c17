package mesh_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/outline"
	"hushframe/core/numeric/sparse"
)

// level is the frame of a plate in the airframe's x-y plane.
var level = airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}

// twist returns how far (rad) one end of a strip turns against the other under 1 N·m about its axis. Both ends are held
// rigidly, warping included.
func twist(t *testing.T, length, width, thickness float64, section laminate.Section, size float64) float64 {
	t.Helper()
	kind := shell.QuadraticTriangle()
	const grip = 2e-3
	pad := func(name string, x float64) airframe.Patch {
		return airframe.Patch{Name: name, Shape: airframe.Rectangle, Centre: outline.Point{X: x}, Width: 2 * grip, Height: 2 * width}
	}
	g := &airframe.Geometry{
		Plates: []airframe.Plate{{Name: "strip", Frame: level, Thickness: thickness,
			Region: outline.NewRegion(outline.Rectangle(outline.Point{X: length / 2}, length+2*grip, width, 0))}},
		Patches: []airframe.Patch{pad("root", -grip), pad("tip", length+grip)},
	}
	m, err := mesh.Build(context.Background(), g, mesh.Options{Size: size, Element: kind.Describe().Name})
	if err != nil {
		t.Fatal(err)
	}
	inf := math.Inf(1)
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
	s, err := assembly.Assemble(context.Background(), p, 1)
	if err != nil {
		t.Fatal(err)
	}
	f, err := sparse.Factorise(s.K, s.Ordering(), 1)
	if err != nil {
		t.Fatal(err)
	}
	y := make([]float64, s.N)
	at := assembly.Vec{length, 0, 0}
	s.Load(y, 1, at, [6]float64{3: 1})
	f.Solve(y, 1)
	return s.Motion(1, at, y)[3]
}

// Torsion of strips with free edges, against the rigidity of a long strip by first-order shear theory. The difference
// of two lengths leaves out what the grips add. The formula is that of rows A-FSDT-STRIP-* of testdata/known, whose third
// row has a width of 1.7 thicknesses and another shear modulus across; the tolerance is theirs, 1 %.
func TestTorsionOfStrips(t *testing.T) {
	const g = 5e9
	check := func(thickness, width, gxy, gxz, size, want float64) {
		t.Helper()
		m := laminate.Material{E1: 60e9, E2: 60e9, G12: gxy, G13: gxz, G23: gxz, Density: 1}
		section, err := laminate.Homogeneous(m, thickness, 0)
		if err != nil {
			t.Fatal(err)
		}
		short := twist(t, 3*width, width, thickness, section, size)
		long := twist(t, 6*width, width, thickness, section, size)
		got := 3 * width / (long - short)
		if e := got/want - 1; !(math.Abs(e) < 0.01) {
			t.Errorf("thickness %g m, width %g m, size %g m: rigidity %.2f %% off", thickness, width, size, 100*e)
		}
	}
	for _, c := range []struct{ thickness, size float64 }{{2e-3, 3e-3}, {2e-3, 5e-3}, {2e-3, 10e-3}, {5e-3, 5e-3}} {
		for _, ratio := range []float64{2, 2.5, 3, 4, 6, 8, 9.9} {
			w := ratio * c.thickness
			q := w / 2 * math.Sqrt(10) / c.thickness // √(A55/D66) with shear factor 5/6 and equal shear moduli
			check(c.thickness, w, g, g, c.size, g*w*math.Pow(c.thickness, 3)/3*(1-math.Tanh(q)/q))
		}
	}
	for _, row := range known.Rows(t, "A_beams.json", "A-FSDT-STRIP-") {
		var c struct {
			Width     float64 `json:"width_m"`
			Thickness float64 `json:"thickness_m"`
			Gxy       float64 `json:"Gxy_Pa"`
			Gxz       float64 `json:"Gxz_Pa"`
		}
		row.Decode(t, &c)
		check(c.Thickness, c.Width, c.Gxy, c.Gxz, 5e-3, row.Values[0])
	}
}
