package eigen

import (
	"context"
	"math"
	"testing"

	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

// Through restarts and long after the first pairs have converged, which is when they want to come back, the basis stays
// M-orthonormal and the projected matrix is that of the operator.
func TestBasisStaysOrthonormal(t *testing.T) {
	k, _, _ := trial.Grid(30, 30)
	mass := make([]float64, k.N)
	for i := range mass {
		mass[i] = 1 + math.Sin(float64(i))/2
	}
	for _, block := range []int{1, 3, 8} {
		p := &pencil{ctx: context.Background(), k: k, m: trial.Diagonal(mass), lean: trial.Diagonal(mass), threads: 1, stats: &Stats{}}
		var err error
		if p.analysis, err = sparse.Analyse(k.Pattern(), sparse.MinimumDegree(k.Pattern())); err != nil {
			t.Fatal(err)
		}
		if _, err := p.setShift(-1e-4); err != nil {
			t.Fatal(err)
		}
		var st Status
		s := newSearch(p, &pairs{}, block, 40+block, 1, 1e-9, &st)
		if _, err := s.run(context.Background(), func(*search) bool { return false }, 150/block); err != nil {
			t.Fatal(err)
		}
		if st.Restarts < 3 {
			t.Fatalf("block %d: only %d restarts", block, st.Restarts)
		}
		n, v := k.N, s.b.vectors()
		z, y := make([]float64, len(v)), make([]float64, len(v))
		p.mass(z, v, s.b.count)
		copy(y, z)
		p.solve(y, s.b.count)
		for i := range s.b.count {
			for j := range s.b.count {
				want := 0.0
				if i == j {
					want = 1
				}
				if got := inner(v[i*n:][:n], z[j*n:][:n]); math.Abs(got-want) > 1e-13 {
					t.Errorf("block %d: product of %d and %d is %g", block, i, j, got)
				}
				// The last block's own columns are not known yet.
				if i <= j && j < s.start {
					if got, stored := inner(y[j*n:][:n], z[i*n:][:n]), s.h[i*s.room+j]; math.Abs(got-stored) > 1e-9*s.pairs[0].theta {
						t.Errorf("block %d: entry (%d, %d) of the operator is %g, stored %g", block, i, j, got, stored)
					}
				}
			}
		}
	}
}
