package modal

import (
	"context"
	"math"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/eigen"
)

// loads lists the unit loads whose static answers the basis must contain: six components at every
// rotor hub and at the gyro, and a pair of opposite forces at the ends of every spring of a mount.
func (b *builder) loads(places []Place) [][]float64 {
	s := b.system
	var all [][]float64
	for _, p := range places {
		if p.Kind != "rotor" && p.Kind != "gyro" {
			continue
		}
		for c := range 6 {
			f := make([]float64, s.N)
			var unit [6]float64
			unit[c] = 1
			s.Load(f, p.Body, p.Point, unit)
			all = append(all, f)
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
			all = append(all, f)
		}
	}
	return all
}

const (
	// settled is the error of a static answer, relative, at which refinement ends.
	settled = 1e-6
	// dependent is the flexibility, of loads scaled to unit own flexibility, below which a combination
	// of static answers adds nothing.
	dependent = 1e-10
	// massless is the modal mass, relative to the greatest, below which a combination of static answers
	// has no frequency worth a number.
	massless = 1e-12
)

// residuals appends residual vectors. The loads lose the parts that rigid-body acceleration and the
// kept modes balance: P f = f - M Φ Φᵀ f. K x = P f is solved with the factor of A = K - σM, σ < 0, at
// hand by x ← A⁻¹(P f - σ M x): without parts along kept modes the error shrinks by at least
// -σ/(λ - σ) each time, λ the highest kept value. A Ritz step in the span of the answers makes them
// orthogonal in M and K.
func (b *builder) residuals(ctx context.Context, places []Place, res *eigen.Result) error {
	s := b.system
	f := b.loads(places)
	if len(f) == 0 {
		return nil
	}
	n, count := s.N, len(f)
	rate := -res.Shift / (res.Values[len(res.Values)-1] - res.Shift)
	x, p := make([]float64, n*count), make([]float64, n*count)
	for j := range f {
		b.balance(f[j])
		copy(p[n*j:], f[j])
	}
	mx := make([]float64, n*count)
	for err := 1.0; err > settled; err *= rate {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		s.M.MulBlock(mx, x, count)
		for i := range x {
			x[i] = p[i] - res.Shift*mx[i]
		}
		res.Factor.SolveThreads(x, count, b.threads)
		for j := range count {
			b.project(x[n*j : n*(j+1)])
		}
	}
	column := func(j int) []float64 { return x[n*j : n*(j+1)] }

	flex, mass := mat.NewSymDense(count, nil), mat.NewSymDense(count, nil)
	s.M.MulBlock(mx, x, count)
	for i := range count {
		for j := range i + 1 {
			flex.SetSym(i, j, (inner(f[i], column(j))+inner(f[j], column(i)))/2)
			mass.SetSym(i, j, inner(mx[n*i:n*(i+1)], column(j)))
		}
	}
	for _, r := range ritz(flex, mass) {
		y := make([]float64, n)
		for j, c := range r.combination {
			axpy(y, c, column(j))
		}
		b.append(Residual, math.Sqrt(r.value)/(2*math.Pi), y)
	}
	return nil
}

// balance replaces a load by f - M Φ Φᵀ f.
func (b *builder) balance(f []float64) {
	for v := range b.vectors {
		axpy(f, -inner(b.vectors[v], f), b.masses[v])
	}
}

type ritzPair struct {
	value       float64 // ω²
	combination []float64
}

// ritz finds combinations of static answers, of flexibility (energy) matrix flex and mass matrix
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
