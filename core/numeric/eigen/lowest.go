package eigen

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"time"

	"hushframe/core/numeric/sparse"
)

func sortPairs(p []pair) {
	slices.SortStableFunc(p, func(a, b pair) int { return cmp.Compare(b.theta, a.theta) })
}

// Most block multiplications in one search and most searches.
const (
	maxSteps    = 400
	maxAttempts = 4
)

// Lowest finds the lowest eigenpairs of K·φ = λ·M·φ that the options ask for. order is the elimination order for
// K-σM, on the union of the two patterns.
//
// The error is a *IndefiniteError, *SingularError or *RigidError when the pencil is not what the package doc asks for,
// and the cause of ctx when that is done. A search that did not converge or whose count disagrees is not an error: see
// Status.
func Lowest(ctx context.Context, k, m *sparse.Symmetric, order sparse.Ordering, opt Options) (*Result, error) {
	if k.N != m.N {
		panic("eigen: K and M differ in order")
	}
	if !(opt.Limit > 0) && opt.Modes <= 0 {
		return nil, errors.New("eigen: neither Limit nor Modes is positive")
	}
	if opt.Shift > 0 || math.IsNaN(opt.Shift) || math.IsInf(opt.Limit, 0) {
		return nil, fmt.Errorf("eigen: shift %g is not negative or limit %g not finite", opt.Shift, opt.Limit)
	}
	if opt.Block <= 0 {
		opt.Block = 8
	}
	if opt.Tol <= 0 {
		opt.Tol = 1e-9
	}
	if opt.Threads <= 0 {
		opt.Threads = runtime.GOMAXPROCS(0)
	}
	began := time.Now()
	res := &Result{}
	res.Stats.Unknowns = k.N
	s := &solver{
		ctx: ctx, opt: &opt, res: res,
		p: &pencil{k: k, m: m, threads: opt.Threads, stats: &res.Stats},
	}
	if err := s.solve(order); err != nil {
		return nil, err
	}
	res.Stats.TotalSeconds = time.Since(began).Seconds()
	return res, nil
}

// solver is one call of Lowest.
type solver struct {
	ctx  context.Context
	opt  *Options
	p    *pencil
	res  *Result
	done float64 // progress told so far

	need    int // leading pairs to converge
	below   int // eigenvalues ≤ Limit by a count beforehand, -1 when not known
	locked  []float64
	theta   []float64
	rigid   int
	current *search
}

func (s *solver) progress(fraction float64) {
	if s.opt.Progress != nil && fraction > s.done {
		s.done = fraction
		s.opt.Progress(fraction)
	}
}

func (s *solver) solve(order sparse.Ordering) error {
	p, opt, st := s.p, s.opt, &s.res.Status
	if err := p.check(); err != nil {
		return err
	}
	analysis, err := sparse.Analyse(sparse.Combine(1, p.k, 1, p.m).Pattern(), order)
	if err != nil {
		return err
	}
	p.analysis = analysis
	if p.scale() == 0 && p.order() > 0 {
		if maxAbs(p.m.Val) == 0 {
			// Without mass there is no finite eigenvalue.
			st.Converged, st.Exhausted = true, true
			st.note("M is zero: there are no finite eigenvalues")
			return nil
		}
	}
	s.progress(0.02)
	if err := cancelled(s.ctx); err != nil {
		return err
	}
	s.below = -1
	if opt.Limit > 0 {
		count, sure, err := p.count(opt.Limit * (1 + 1e-9))
		if err != nil {
			return err
		}
		if sure {
			s.below = count
		}
		s.progress(0.2)
	}
	s.need = 0
	if opt.Modes > 0 {
		s.need = opt.Modes + 1
	}
	s.need = max(s.need, s.below+1)
	if err := s.chooseShift(); err != nil {
		return err
	}
	if err := s.lockRigid(); err != nil {
		return err
	}
	return s.searchAll()
}

func maxAbs(x []float64) float64 {
	m := 0.0
	for _, v := range x {
		m = max(m, math.Abs(v))
	}
	return m
}

// chooseShift factorises at a shift that makes A positive definite.
func (s *solver) chooseShift() error {
	p, opt, st := s.p, s.opt, &s.res.Status
	sigma := opt.Shift
	if sigma == 0 {
		// Far enough from zero that rigid motions do not drown in rounding, near enough that the lowest elastic values
		// are well apart as seen from there.
		sigma = -max(1e-10*p.scale(), opt.Limit/100, math.SmallestNonzeroFloat64)
		if p.scale() == 0 {
			sigma = -1
		}
	}
	for range 4 {
		neg, err := p.setShift(sigma)
		if err != nil {
			return err
		}
		if neg == 0 {
			s.progress(0.4)
			return nil
		}
		if opt.Shift != 0 {
			break
		}
		st.note("%d values below the shift %.3g: moved further down", neg, sigma)
		sigma *= 100
	}
	return &IndefiniteError{
		Matrix: "K or M", Unknown: p.factor.Stats.FirstNegative,
		Detail: fmt.Sprintf("K-σM has negative pivots at σ = %.3g", p.shift),
	}
}

// lockRigid checks the null vectors given and puts them, M-orthonormal, first among the locked vectors.
func (s *solver) lockRigid() error {
	p := s.p
	n := p.order()
	if len(s.opt.Rigid) == 0 {
		return nil
	}
	y, size := make([]float64, n), make([]float64, n)
	w := make([]float64, 0, len(s.opt.Rigid)*n)
	for v, r := range s.opt.Rigid {
		if len(r) != n {
			panic("eigen: Rigid vector of wrong length")
		}
		p.k.MulVec(y, r)
		absolute(p.k, size, r)
		for i := range y {
			// Rounding of element matrices leaves some 1e-12; a wrong vector leaves more than one part in a million.
			if !(math.Abs(y[i]) <= 1e-6*size[i]) {
				return &RigidError{Vector: v, Unknown: i, Ratio: math.Abs(y[i]) / size[i]}
			}
		}
		w = append(w, r...)
	}
	b := newBasis(p, len(s.opt.Rigid))
	kept, _, _ := b.append(w, len(s.opt.Rigid))
	if kept < len(s.opt.Rigid) {
		s.res.Status.note("%d of %d rigid vectors given depend on the others or have no mass", len(s.opt.Rigid)-kept, len(s.opt.Rigid))
	}
	s.rigid = kept
	s.locked = b.v[:kept*n]
	s.theta = slices.Repeat([]float64{-1 / p.shift}, kept)
	return nil
}

// absolute computes y = |A|·|x|.
func absolute(a *sparse.Symmetric, y, x []float64) {
	clear(y)
	for j := range a.N {
		for q := a.Ptr[j]; q < a.Ptr[j+1]; q++ {
			i, v := int(a.Row[q]), math.Abs(a.Val[q])
			y[i] += v * math.Abs(x[j])
			if i != j {
				y[j] += v * math.Abs(x[i])
			}
		}
	}
}
