package sparse_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

func TestFactorSolvesShiftedLattice(t *testing.T) {
	l := trial.NewLattice(12, 8, 5e-3, 2e-3, false)
	order := sparse.MinimumDegree(l.K.Pattern())
	// A shift below the spectrum leaves a definite matrix, one inside it an indefinite one.
	for _, shift := range []float64{-1e6, 1e9} {
		a := sparse.Combine(1, l.K, -shift, l.M)
		f, err := sparse.Factorise(a, order, 2)
		if err != nil {
			t.Fatal(err)
		}
		r := rand.New(rand.NewPCG(1, 2))
		x, b := make([]float64, 5*a.N), make([]float64, 5*a.N)
		for i := range x {
			x[i] = r.Float64() - 0.5
		}
		a.MulBlock(b, x, 5)
		f.Solve(b, 5)
		for i := range x {
			if math.Abs(x[i]-b[i]) > 1e-6 {
				t.Fatalf("shift %g: component %d is %g, want %g", shift, i, b[i], x[i])
			}
		}
	}
}
