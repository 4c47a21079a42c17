package sparse_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

func TestTry(t *testing.T) {
	l := trial.NewLattice(20, 20, 5e-3, 2e-3, false)
	a := sparse.Combine(1, l.K, 1e4, l.M)
	p := a.Pattern()
	n := a.N
	ord := sparse.MinimumDegree(p)
	f, err := sparse.Factorise(a, ord, 2)
	if err != nil {
		t.Fatal(err)
	}
	neg, zero, pos := f.Inertia()
	t.Logf("n %d nnz %d stats %+v inertia %d %d %d", n, len(a.Row), f.Stats, neg, zero, pos)
	r := rand.New(rand.NewPCG(1, 2))
	x := make([]float64, 5*n)
	for i := range x {
		x[i] = r.Float64() - 0.5
	}
	b := make([]float64, 5*n)
	a.MulBlock(b, x, 5)
	f.Solve(b, 5)
	worst := 0.0
	for i := range x {
		worst = math.Max(worst, math.Abs(x[i]-b[i]))
	}
	t.Log(worst)
	a = sparse.Combine(1, l.K, -1e7, l.M)
	f, err = sparse.Factorise(a, ord, 2)
	if err != nil {
		t.Fatal(err)
	}
	neg, zero, pos = f.Inertia()
	t.Logf("%+v inertia %d %d %d", f.Stats, neg, zero, pos)
	a.MulBlock(b, x, 5)
	f.Solve(b, 5)
	worst = 0.0
	for i := range x {
		worst = math.Max(worst, math.Abs(x[i]-b[i]))
	}
	t.Log(worst)
}
