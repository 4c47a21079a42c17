package cases

import (
	"math"
	"strings"

	"hushframe/core/known"
	"hushframe/core/mechanics/laminate"
)

// upper lists a symmetric matrix row by row.
func upper(m [3][3]float64) []float64 {
	return []float64{m[0][0], m[0][1], m[0][2], m[1][1], m[1][2], m[2][2]}
}

// Rows B-QBAR-*: the reduced stiffness of a turned ply.
func turnedPlies(t known.T, row known.Row) []float64 {
	var c struct {
		Properties known.Constants
		Angle      float64 `json:"angle_deg"`
	}
	row.Decode(t, &c)
	return upper(c.Properties.Material().Reduced(c.Angle * math.Pi / 180))
}

// Rows B-CLT-*: A, B, D, uncorrected transverse shear and inertia, or the moduli they imply.
func stacks(t known.T, row known.Row) []float64 {
	s, err := laminate.FactoredStack(row.Plies(t), 1)
	if err != nil {
		t.Fatalf("row %s: %v", row.ID, err)
	}
	switch row.ID[strings.LastIndex(row.ID, "-")+1:] {
	case "A":
		return upper(s.A)
	case "B":
		return upper(s.B)
	case "D":
		return upper(s.D)
	case "SHEAR":
		return []float64{s.Shear[1][1], s.Shear[0][1], s.Shear[0][0], s.Mass, s.Coupling, s.Rotary}
	case "ENG":
		in, flex := s.Moduli()
		return []float64{in.Ex, in.Ey, in.Gxy, in.Nuxy, flex.Ex, flex.Ey, flex.Gxy}
	}
	t.Fatalf("row %s: no such quantity", row.ID)
	return nil
}

// Rows B-SHEARCYL-*: transverse shear from the equilibrium of stresses, and the shear factor it implies.
func shearByEquilibrium(t known.T, row known.Row) []float64 {
	plies := row.Plies(t)
	s, err := laminate.Stack(plies)
	if err != nil {
		t.Fatalf("row %s: %v", row.ID, err)
	}
	plain, err := laminate.FactoredStack(plies, 1)
	if err != nil {
		t.Fatalf("row %s: %v", row.ID, err)
	}
	return []float64{s.Shear[0][0], s.Shear[0][0] / plain.Shear[0][0]}
}
