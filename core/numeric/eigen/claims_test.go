package eigen_test

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

// outerProducts adds count products v·vᵀ of random v on size random unknowns: a matrix of that rank or less.
func outerProducts(r *rand.Rand, n, count, size int) *sparse.Symmetric {
	elements := make([][]int32, count)
	for e := range elements {
		elements[e] = make([]int32, size)
		for i := range size {
			elements[e][i] = int32(r.IntN(n))
		}
	}
	a := sparse.NewAssembler(n, elements)
	for e := range elements {
		var packed []float64
		v := make([]float64, size)
		for i := range size {
			v[i] = r.NormFloat64()
			for j := range i + 1 {
				packed = append(packed, v[i]*v[j])
			}
		}
		a.Add(e, packed)
	}
	return a.Matrix()
}

// finiteValues solves the pencil in dense form: the eigenvalues θ of L⁻¹·M·L⁻ᵀ with L·Lᵀ = K+M give λ = 1/θ-1, and θ = 0
// belongs to null vectors of M. ok is false when K+M is close to singular.
func finiteValues(k, m *mat.SymDense) (values []float64, ok bool) {
	n := k.SymmetricDim()
	a := mat.NewSymDense(n, nil)
	a.AddSym(k, m)
	var e mat.EigenSym
	if !e.Factorize(a, false) {
		return nil, false
	}
	if v := e.Values(nil); v[0] < 1e-6*v[n-1] {
		return nil, false
	}
	var chol mat.Cholesky
	var l mat.TriDense
	var half, c mat.Dense
	if !chol.Factorize(a) {
		return nil, false
	}
	chol.LTo(&l)
	if half.Solve(&l, m) != nil || c.Solve(&l, half.T()) != nil {
		return nil, false
	}
	s := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			s.SetSym(i, j, (c.At(i, j)+c.At(j, i))/2)
		}
	}
	if !e.Factorize(s, false) {
		return nil, false
	}
	theta := e.Values(nil)
	for i := n - 1; i >= 0 && theta[i] > 1e-11; i-- {
		values = append(values, 1/theta[i]-1)
	}
	return values, true
}

// Pencils of random rank, with null vectors in K and M of all sorts, any block size and any number of wanted values: a
// result that calls itself converged and proved must be right, and most must.
func TestClaimsAreTrue(t *testing.T) {
	const trials = 400
	regular, claimed := 0, 0
	for seed := range uint64(trials) {
		r := rand.New(rand.NewPCG(seed, 9))
		n := 1 + r.IntN(60)
		k := outerProducts(r, n, 1+r.IntN(2*n), 1+r.IntN(4))
		m := outerProducts(r, n, 1+r.IntN(2*n), 1+r.IntN(4))
		if r.IntN(2) == 0 {
			m = sparse.Combine(1, m, 1, outerProducts(r, n, 3*n, 1))
		}
		opt := eigen.Options{Modes: 1 + r.IntN(n+2), Block: 1 + r.IntN(9)}
		if r.IntN(2) == 0 {
			opt.Limit = math.Exp(6*r.Float64() - 3)
		}
		want, ok := finiteValues(trial.Full(k), trial.Full(m))
		if !ok {
			continue
		}
		regular++
		order := sparse.MinimumDegree(sparse.Combine(1, k, 1, m).Pattern())
		res, err := eigen.Lowest(context.Background(), k, m, order, opt)
		if err != nil || !res.Status.Converged || !res.Status.Proved {
			continue
		}
		claimed++
		count := min(opt.Modes, len(want))
		for opt.Limit > 0 && count < len(want) && want[count] <= opt.Limit {
			count++
		}
		if len(res.Values) != count {
			t.Errorf("seed %d: %d values, want %d: %+v", seed, len(res.Values), count, res.Status)
			continue
		}
		for i, v := range res.Values {
			// A relative error of θ is one of (1+λ)² of λ.
			if math.Abs(v-want[i]) > 1e-8*(1+want[i])*(1+want[i]) {
				t.Errorf("seed %d: value %d is %g, want %g: %+v", seed, i, v, want[i], res.Status)
			}
		}
	}
	if regular < trials/2 || claimed < regular*9/10 {
		t.Errorf("of %d trials %d were regular and %d claimed success", trials, regular, claimed)
	}
}
