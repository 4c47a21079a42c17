package cases

import (
	"context"
	"math"
	"strconv"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
)

// threads of every solution; results do not depend on it.
const threads = 2

func assemble(t known.T, p *assembly.Problem) *assembly.System {
	t.Helper()
	s, err := assembly.Assemble(context.Background(), p, threads)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// solve finds eigenpairs and insists on the proof that none is missing.
func solve(t known.T, s *assembly.System, opt eigen.Options) *eigen.Result {
	t.Helper()
	opt.Threads = threads
	res, err := eigen.Lowest(context.Background(), s.K, s.M, s.Ordering(), opt)
	if err != nil {
		t.Fatal(err)
	}
	if !res.Status.Converged || !(res.Status.Proved || res.Status.Exhausted) {
		t.Fatalf("the eigensolver ended with %+v", res.Status)
	}
	return res
}

// elastic returns the count lowest frequencies (rad/s) after those of rigid motions, or all there are.
func elastic(t known.T, p *assembly.Problem, count, rigid int) []float64 {
	t.Helper()
	res := solve(t, assemble(t, p), eigen.Options{Modes: rigid + count})
	if len(res.Values) <= rigid {
		t.Fatalf("there are %d eigenvalues", len(res.Values))
	}
	for _, v := range res.Values[:rigid] {
		if math.Abs(v) > 1e-6*res.Values[rigid] {
			t.Errorf("a rigid motion has %g of the first elastic eigenvalue", v/res.Values[rigid])
		}
	}
	var omega []float64
	for _, v := range res.Values[rigid:min(len(res.Values), rigid+count)] {
		omega = append(omega, math.Sqrt(max(v, 0)))
	}
	return omega
}

// static solves K u = f of a supported structure.
func static(t known.T, s *assembly.System, f []float64) []float64 {
	t.Helper()
	factor, err := sparse.Factorise(s.K, s.Ordering(), threads)
	if err != nil {
		t.Fatal(err)
	}
	u := append([]float64(nil), f...)
	factor.Solve(u, 1)
	return u
}

func byName(t known.T, name string) element.Type {
	t.Helper()
	for _, kind := range shell.Types() {
		if kind.Describe().Name == name {
			return kind
		}
	}
	t.Fatalf("no element type %s", name)
	return nil
}

func scaled(values []float64, c float64) []float64 {
	out := make([]float64, len(values))
	for i, v := range values {
		out[i] = c * v
	}
	return out
}

func number(t known.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}
