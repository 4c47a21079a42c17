package mesh_test

import (
	"math"
	"testing"

	"hushframe/core/known/cases"
	"hushframe/core/mechanics/laminate"
)

// Torsion of strips with free edges, against the rigidity of a long strip by first-order shear theory. The difference
// of two lengths leaves out what the grips add. The formula is that of rows A-FSDT-STRIP-* of testdata/known, whose
// own dimensions core/known/cases checks; the tolerance is theirs, 1 %.
func TestTorsionOfStrips(t *testing.T) {
	const g = 5e9
	check := func(thickness, width, gxy, gxz, size, want float64) {
		t.Helper()
		m := laminate.Material{E1: 60e9, E2: 60e9, G12: gxy, G13: gxz, G23: gxz, Density: 1}
		section, err := laminate.Homogeneous(m, thickness, 0)
		if err != nil {
			t.Fatal(err)
		}
		got := cases.StripRigidity(t, width, thickness, section, size)
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
}
