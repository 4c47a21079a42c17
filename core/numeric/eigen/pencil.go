package eigen

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"runtime"
	"time"

	"hushframe/core/numeric/dense"
	"hushframe/core/numeric/sparse"
)

// pencil holds the two matrices and the factorisation that make the operator A⁻¹M.
type pencil struct {
	ctx      context.Context
	k, m     *sparse.Symmetric
	lean     *sparse.Symmetric // M without its zeros, for products
	analysis *sparse.Analysis
	factor   *sparse.Factor // at the shift; nil while there is none
	spare    *sparse.Factor // memory for the next factorisation
	shift    float64
	threads  int
	stats    *Stats
}

func (p *pencil) order() int { return p.k.N }

// factorise returns the factorisation of K-sM, in the memory of the last one: there is never more than one.
func (p *pencil) factorise(s float64) (*sparse.Factor, error) {
	p.stats.Factorisations++
	p.letGo()
	p.collect()
	a := sparse.Combine(1, p.k, -s, p.m)
	f := p.spare
	p.spare = nil
	if f == nil {
		return p.analysis.Factorise(p.ctx, a, p.threads)
	}
	return f, f.Refactorise(p.ctx, a, p.threads)
}

// letGo gives up the factorisation at the shift but not its memory.
func (p *pencil) letGo() {
	if p.factor != nil {
		p.spare, p.factor = p.factor, nil
	}
}

// collect frees what is no longer used before the next phase needs as much: the collector left alone would let the
// memory held grow to twice what is in use, most of which here are a few large arrays. It takes a few milliseconds, which
// small problems are spared.
func (p *pencil) collect() {
	if p.order() > 10000 {
		runtime.GC()
	}
}

// resume makes the operator at the shift again if the factorisation had to go.
func (p *pencil) resume() error {
	if p.factor != nil {
		return nil
	}
	_, err := p.setShift(p.shift)
	return err
}

// setShift makes the operator for σ < 0. It returns how many eigenvalues of A are not positive.
func (p *pencil) setShift(sigma float64) (int, error) {
	defer since(time.Now(), &p.stats.FactorSeconds)
	f, err := p.factorise(sigma)
	if err != nil {
		var pivot *sparse.PivotError
		if errors.As(err, &pivot) {
			return 0, &SingularError{Unknown: pivot.Unknown, Cause: err}
		}
		return 0, err
	}
	p.factor, p.shift = f, sigma
	p.stats.Factor = f.Stats
	neg, _, _ := f.Inertia()
	return neg, nil
}

// mass computes y = M·x for count vectors.
func (p *pencil) mass(y, x []float64, count int) { p.multiply(p.lean, y, x, count) }

func (p *pencil) multiply(a *sparse.Symmetric, y, x []float64, count int) {
	const group = 4
	n := p.order()
	dense.Parallel(p.threads, (count+group-1)/group, func(g int) {
		from, to := g*group*n, min((g+1)*group, count)*n
		a.MulBlock(y[from:to], x[from:to], (to-from)/n)
	})
}

// solve overwrites count vectors with A⁻¹ times them.
func (p *pencil) solve(x []float64, count int) {
	defer since(time.Now(), &p.stats.SolveSeconds)
	p.factor.SolveThreads(x[:count*p.order()], count, p.threads)
	p.stats.Solves += count
}

// since adds the seconds that have passed.
func since(began time.Time, sum *float64) { *sum += time.Since(began).Seconds() }

// check looks for what makes a pencil senseless before any work is done.
func (p *pencil) check() error {
	for _, a := range []*sparse.Symmetric{p.k, p.m} {
		if err := a.Check(); err != nil {
			return err
		}
	}
	for j, d := range p.m.Diagonal() {
		if d < 0 {
			return &IndefiniteError{Matrix: "M", Unknown: j, Detail: "its diagonal entry is negative"}
		}
	}
	for j, d := range p.k.Diagonal() {
		if d < 0 {
			return &IndefiniteError{Matrix: "K", Unknown: j, Detail: "its diagonal entry is negative"}
		}
	}
	return nil
}

// scale is the sum of the diagonal of K over that of M: a typical large λ, since the stiffest and heaviest unknowns
// (displacements, not rotations) dominate both.
func (p *pencil) scale() float64 {
	k, m := 0.0, 0.0
	for _, d := range p.k.Diagonal() {
		k += d
	}
	for _, d := range p.m.Diagonal() {
		m += d
	}
	if k == 0 || m == 0 {
		return 0
	}
	return k / m
}

// count returns the number of eigenvalues below s, and whether the factorisation it comes from is good enough to be
// believed: no pivot of doubtful sign, and a solve that gives back a known vector. The factorisation at the shift, if
// any, is lost: see resume.
func (p *pencil) count(s float64) (int, bool, error) {
	defer since(time.Now(), &p.stats.CountSeconds)
	f, err := p.factorise(s)
	if err != nil {
		var pivot *sparse.PivotError
		if errors.As(err, &pivot) {
			return 0, false, nil
		}
		return 0, false, err
	}
	p.spare = f
	neg, zero, _ := f.Inertia()
	return neg, zero == 0 && p.solveError(f, s) <= 1e-3, nil
}

// solveError is the relative error with which a factorisation of K-sM gives back a random vector, each component
// weighed by the root of the diagonal so that its unit does not matter. The part of the error along an eigenvector near
// s is the shift of its eigenvalue by rounding over its distance from s.
func (p *pencil) solveError(f *sparse.Factor, s float64) float64 {
	n := p.order()
	x, y, z := make([]float64, n), make([]float64, n), make([]float64, n)
	fillRandom(x, 0x5eed)
	weight := p.k.Diagonal()
	for i, m := range p.m.Diagonal() {
		if weight[i] += math.Abs(s) * m; weight[i] == 0 {
			weight[i] = 1
		}
		x[i] /= math.Sqrt(weight[i])
	}
	p.k.MulVec(y, x)
	p.m.MulVec(z, x)
	for i := range y {
		y[i] -= s * z[i]
	}
	f.Solve(y, 1)
	wrong, size := 0.0, 0.0
	for i := range x {
		wrong += (x[i] - y[i]) * (x[i] - y[i]) * weight[i]
		size += x[i] * x[i] * weight[i]
	}
	return math.Sqrt(wrong / size)
}

// fillRandom fills with uniform numbers in [-1, 1) from a fixed generator.
func fillRandom(x []float64, seed uint64) {
	r := rand.New(rand.NewPCG(seed, 0))
	for i := range x {
		x[i] = 2*r.Float64() - 1
	}
}

// fixSign makes the component of largest magnitude, the first of equals, positive.
func fixSign(x []float64) {
	at := 0
	for i, v := range x {
		if math.Abs(v) > math.Abs(x[at]) {
			at = i
		}
	}
	if len(x) > 0 && x[at] < 0 {
		for i := range x {
			x[i] = -x[i]
		}
	}
}
