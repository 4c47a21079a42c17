package sparse_test

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"hushframe/core/numeric/sparse"
)

// A factorisation in the memory of another has the bits of one in fresh memory, also after one that failed.
func TestRefactoriseForgetsWhatWasThere(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 3))
	s := randomSymmetric(r, 120, 300) // indefinite: pivots are exchanged and come in pairs
	an, err := sparse.Analyse(s.Pattern(), randomOrder(r, s.N))
	if err != nil {
		t.Fatal(err)
	}
	other := &sparse.Symmetric{N: s.N, Ptr: s.Ptr, Row: s.Row, Val: make([]float64, len(s.Val))}
	for i := range other.Val {
		other.Val[i] = r.NormFloat64()
	}
	f := factorise(t, an, s)
	solution(f) // makes the workspace that later solutions use again
	if f.Stats.Exchanges == 0 || f.Stats.TwoByTwo == 0 {
		t.Fatalf("the matrix asks nothing of the pivoting: %+v", f.Stats)
	}
	bad := &sparse.Symmetric{N: s.N, Ptr: s.Ptr, Row: s.Row, Val: slices.Clone(s.Val)}
	for j := range s.N / 2 { // unheld unknowns, found half-way
		for p := s.Ptr[j]; p < s.Ptr[j+1]; p++ {
			bad.Val[p] = 0
		}
	}
	for _, next := range []*sparse.Symmetric{other, bad, s} {
		err := f.Refactorise(context.Background(), next, 2)
		if next == bad {
			var pivot *sparse.PivotError
			if !errors.As(err, &pivot) {
				t.Fatal(err)
			}
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		fresh := factorise(t, an, next)
		if !slices.Equal(solution(f), solution(fresh)) {
			t.Error("solutions differ from those of a fresh factorisation")
		}
		n1, z1, p1 := f.Inertia()
		if n2, z2, p2 := fresh.Inertia(); n1 != n2 || z1 != z2 || p1 != p2 || f.Stats.SmallestPivot != fresh.Stats.SmallestPivot || f.Stats.Exchanges != fresh.Stats.Exchanges {
			t.Errorf("inertia %d %d %d and %+v, fresh %d %d %d and %+v", n1, z1, p1, f.Stats, n2, z2, p2, fresh.Stats)
		}
		x, back := solution(f), make([]float64, s.N)
		next.MulVec(back, x)
		for i, v := range back {
			if math.Abs(v-float64(i+1)) > 1e-6*float64(s.N) {
				t.Fatalf("component %d of A·x is %g", i, v)
			}
		}
	}
}

func factorise(t *testing.T, an *sparse.Analysis, s *sparse.Symmetric) *sparse.Factor {
	t.Helper()
	f, err := an.Factorise(context.Background(), s, 2)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// solution solves for the right-hand side 1, 2, 3, …
func solution(f *sparse.Factor) []float64 {
	x := make([]float64, f.Stats.Unknowns)
	for i := range x {
		x[i] = float64(i + 1)
	}
	f.Solve(x, 1)
	return x
}
