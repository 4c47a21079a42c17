package modal

import (
	"context"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/dense"
	"hushframe/core/numeric/eigen"
)

// loads lists the unit loads whose static answers the basis must contain: six components at every
// rotor hub and at the gyro, and a pair of opposite forces at the ends of every spring of a mount.
func (b *span) loads(places []Place) (all []float64, count int) {
	s := b.system
	for _, p := range places {
		if p.Kind != "rotor" && p.Kind != "gyro" {
			continue
		}
		for c := range 6 {
			f := make([]float64, s.N)
			var unit [6]float64
			unit[c] = 1
			s.Load(f, p.Body, p.Point, unit)
			all = append(all, f...)
			count++
		}
	}
	problem := s.Problem()
	for i := range problem.Springs {
		sp := &problem.Springs[i]
		if problem.Groups[sp.Group].Kind != assembly.MountGroup {
			continue
		}
		for c, k := range sp.Stiffness {
			if k == 0 || math.IsInf(k, 1) {
				continue
			}
			f := make([]float64, s.N)
			for side, body := range []int{sp.A, sp.B} {
				if body == assembly.Ground {
					continue
				}
				var force [6]float64
				axis := sp.Axes[c%3]
				for j := range 3 {
					force[c/3*3+j] = float64(2*side-1) * axis[j]
				}
				s.Load(f, body, sp.Point, force)
			}
			all = append(all, f...)
			count++
		}
	}
	return all, count
}

const (
	// settled is the error of a static answer, relative, at which refinement ends. What it spoils in the
	// response is of the order of its square, for the Ritz step takes the best of the answers.
	settled = 0.02
	// mostSweeps bounds refinement where the shift is far below the few modes kept.
	mostSweeps = 8
	// dependent is the flexibility, of loads scaled to unit own flexibility, below which a combination
	// of static answers adds nothing.
	dependent = 1e-10
	// balanced is what is left of a load, over the load, that counts as nothing.
	balanced = 1e-7
	// massless is the modal mass, relative to the greatest, below which a combination of static answers
	// has no frequency worth a number.
	massless = 1e-12
)

// residuals appends residual vectors. The loads lose the parts that rigid-body acceleration and the
// kept modes balance: P f = f - M Φ Φᵀ f. K x = P f is solved with the factor of A = K - σM, σ < 0, at
// hand by x ← A⁻¹(P f - σ M x): without parts along kept modes the error shrinks by at least
// -σ/(λ - σ) each time, λ the highest kept value. A Ritz step in the span of the answers makes them
// orthogonal in M and K.
func (b *span) residuals(ctx context.Context, places []Place, res *eigen.Result) error {
	f, count := b.loads(places)
	if count == 0 {
		return nil
	}
	sigma, highest := res.Shift, res.Values[len(res.Values)-1]
	rate := -sigma / (highest - sigma)
	if f, count = b.left(f, count); count == 0 {
		return nil
	}
	right := slices.Clone(f) // A x
	x, mx := make([]float64, len(f)), make([]float64, len(f))
	for err, sweep := rate, 1; ; err, sweep = err*rate, sweep+1 {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		copy(x, right)
		res.Factor.SolveThreads(x, count, b.threads)
		b.project(x, count)
		b.multiply(mx, x, count)
		if err <= settled || sweep == mostSweeps {
			break
		}
		for i := range right {
			right[i] = f[i] - sigma*mx[i]
		}
	}
	// K x = A x + σ M x.
	mass, stiff := make([]float64, count*count), make([]float64, count*count)
	dense.Gram(count, count, b.n, mx, x, mass, b.threads)
	dense.Gram(count, count, b.n, right, x, stiff, b.threads)
	for i, m := range mass {
		stiff[i] += sigma * m
	}
	pairs := ritz(symmetric(count, stiff), symmetric(count, mass))
	var combinations, frequency []float64
	for _, r := range pairs {
		combinations = append(combinations, r.combination...)
		frequency = append(frequency, math.Sqrt(r.value)/(2*math.Pi))
	}
	dense.Rotate(len(pairs), count, b.n, combinations, x, b.threads)
	return b.extend(Residual, frequency, x[:len(pairs)*b.n])
}

// left takes from the loads what the vectors so far balance, and drops those of
// which nothing but rounding is left: where the vectors are all that the structure has.
func (b *span) left(f []float64, count int) ([]float64, int) {
	size := func(k int) (most float64) {
		for _, x := range f[k*b.n : (k+1)*b.n] {
			most = max(most, math.Abs(x))
		}
		return most
	}
	before := make([]float64, count)
	for k := range count {
		before[k] = size(k)
	}
	b.balance(f, count)
	kept := 0
	for k := range count {
		if size(k) > balanced*before[k] {
			copy(f[kept*b.n:], f[k*b.n:(k+1)*b.n])
			kept++
		}
	}
	return f[:kept*b.n], kept
}

// symmetric returns the mean of a matrix and its transpose.
func symmetric(n int, a []float64) *mat.SymDense {
	s := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			s.SetSym(i, j, (a[i*n+j]+a[j*n+i])/2)
		}
	}
	return s
}

type ritzPair struct {
	value       float64 // ω²
	combination []float64
}

// ritz finds combinations of static answers, of energy matrix flex and mass matrix
// mass, that are orthogonal in both, by ascending ω².
func ritz(flex, mass *mat.SymDense) []ritzPair {
	n := flex.SymmetricDim()
	scale := make([]float64, n)
	for i := range n {
		if d := flex.At(i, i); d > 0 {
			scale[i] = 1 / math.Sqrt(d)
		}
	}
	scaled := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			scaled.SetSym(i, j, flex.At(i, j)*scale[i]*scale[j])
		}
	}
	var eig mat.EigenSym
	if !eig.Factorize(scaled, true) {
		return nil
	}
	var vectors mat.Dense
	eig.VectorsTo(&vectors)
	values := eig.Values(nil)
	var kept []int
	for k, v := range values {
		if v > dependent*values[n-1] {
			kept = append(kept, k)
		}
	}
	if len(kept) == 0 {
		return nil
	}
	// Columns of t have unit energy and none in common.
	t := mat.NewDense(n, len(kept), nil)
	for c, k := range kept {
		for i := range n {
			t.Set(i, c, vectors.At(i, k)*scale[i]/math.Sqrt(values[k]))
		}
	}
	var mt, tmt mat.Dense
	mt.Mul(mass, t)
	tmt.Mul(t.T(), &mt)
	reduced := mat.NewSymDense(len(kept), nil)
	for i := range kept {
		for j := range i + 1 {
			reduced.SetSym(i, j, (tmt.At(i, j)+tmt.At(j, i))/2)
		}
	}
	var second mat.EigenSym
	if !second.Factorize(reduced, true) {
		return nil
	}
	var turn, all mat.Dense
	second.VectorsTo(&turn)
	all.Mul(t, &turn)
	mu := second.Values(nil) // 1/ω², ascending
	var out []ritzPair
	for c := len(mu) - 1; c >= 0; c-- {
		if !(mu[c] > massless*mu[len(mu)-1]) {
			break
		}
		r := ritzPair{value: 1 / mu[c]}
		for i := range n {
			r.combination = append(r.combination, all.At(i, c)/math.Sqrt(mu[c]))
		}
		out = append(out, r)
	}
	return out
}
