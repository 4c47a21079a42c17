package eigen

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"time"

	"hushframe/core/numeric/sparse"
)

const (
	maxSteps    = 400 // block multiplications in one search
	maxAttempts = 4   // searches from new vectors
)

// Lowest finds the lowest eigenpairs of K·φ = λ·M·φ that the options ask for. order is the elimination order for
// K-σM, on the union of the two patterns.
//
// The error is a *IndefiniteError, *SingularError or *RigidError when the pencil is not what the package doc asks for, a
// *TooManyError before a search that would be larger than allowed, and the cause of ctx when that is done first. A search that did not converge or whose count disagrees is not an error:
// see Status.
func Lowest(ctx context.Context, k, m *sparse.Symmetric, order sparse.Ordering, opt Options) (*Result, error) {
	return lowest(ctx, k, m, order, opt, (*pencil).count)
}

// lowest is Lowest with a way to count the eigenvalues below a shift, which also tells whether that can be trusted.
func lowest(ctx context.Context, k, m *sparse.Symmetric, order sparse.Ordering, opt Options, count counter) (*Result, error) {
	if k.N != m.N {
		panic("eigen: K and M differ in order")
	}
	if err := opt.complete(); err != nil {
		return nil, err
	}
	began := time.Now()
	res := &Result{}
	res.Stats.Unknowns = k.N
	s := &solver{
		ctx: ctx, opt: &opt, res: res, below: -1, count: count,
		p: &pencil{ctx: ctx, k: k, m: m, lean: m.DropZeros(), threads: opt.Threads, stats: &res.Stats},
	}
	if err := s.solve(order); err != nil {
		return nil, err
	}
	res.Stats.TotalSeconds = time.Since(began).Seconds()
	return res, nil
}

// complete fills in defaults and refuses what makes no sense.
func (o *Options) complete() error {
	if !(o.Limit > 0) {
		o.Limit = 0
	}
	if o.Limit == 0 && o.Modes <= 0 {
		return errors.New("eigen: neither Limit nor Modes is positive")
	}
	if !(o.Shift <= 0) || math.IsInf(o.Shift, 0) || math.IsInf(o.Limit, 0) {
		return fmt.Errorf("eigen: shift %g is not below zero or limit %g not finite", o.Shift, o.Limit)
	}
	o.Modes = max(o.Modes, 0)
	if o.Block <= 0 {
		o.Block = 8
	}
	if !(o.Tol > 0) {
		o.Tol = 1e-9
	}
	if o.Threads <= 0 {
		o.Threads = runtime.GOMAXPROCS(0)
	}
	return nil
}

// counter returns the number of eigenvalues below a shift and whether it can be trusted.
type counter func(p *pencil, shift float64) (count int, sure bool, err error)

// solver is one call of Lowest.
type solver struct {
	ctx  context.Context
	opt  *Options
	p    *pencil
	res  *Result
	done float64 // progress told so far

	count counter
	need  int    // leading pairs to converge
	below int    // eigenvalues below countAt by a count beforehand, -1 when not known
	known *pairs // M-orthonormal pairs known already, by rising λ
}

// pairs are eigenpairs by rising λ, their vectors stored one after another.
type pairs struct {
	values, residuals []float64
	rigid             []bool // whether the vector was given as a null vector of K
	x                 []float64
}

func (s *solver) progress(fraction float64) {
	if s.opt.Progress != nil && fraction > s.done {
		s.done = fraction
		s.opt.Progress(fraction)
	}
}

// countAt is the shift just above the limit at which eigenvalues are counted beforehand.
func (s *solver) countAt() float64 { return s.opt.Limit * (1 + 1e-9) }

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
	p.collect()
	if massless(p.m) {
		st.Converged, st.Exhausted = true, true
		st.note("M is zero: there are no finite eigenvalues")
		return nil
	}
	s.progress(0.02)
	if opt.Limit > 0 {
		count, sure, err := s.count(p, s.countAt())
		if err != nil {
			return err
		}
		if sure {
			s.below = count
		}
		if sure && opt.Most > 0 && count > opt.Most {
			return &TooManyError{Counted: count, Most: opt.Most}
		}
		s.progress(0.2)
	}
	// One more than is wanted, to have a gap to count in.
	s.need = max(opt.Modes, s.below) + 1
	if err := s.chooseShift(); err != nil {
		return err
	}
	s.progress(0.4)
	if err := s.lockRigid(); err != nil {
		return err
	}
	return s.searchAll()
}

func massless(m *sparse.Symmetric) bool {
	for _, v := range m.Val {
		if v != 0 {
			return false
		}
	}
	return true
}
