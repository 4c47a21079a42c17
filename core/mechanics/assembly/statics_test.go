package assembly_test

import (
	"strconv"
	"testing"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/numeric/sparse"
)

func number(t *testing.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// solveStatic solves K u = f of a supported structure.
func solveStatic(t *testing.T, s *assembly.System, f []float64) []float64 {
	t.Helper()
	factor, err := sparse.Factorise(s.K, s.Ordering(), 2)
	if err != nil {
		t.Fatal(err)
	}
	u := append([]float64(nil), f...)
	factor.Solve(u, 1)
	return u
}

// tube is a solid round bar.
func tube(diameter, e, nu, rho float64) beam.Section { return beam.Tube(diameter, 0, e, nu, rho) }
