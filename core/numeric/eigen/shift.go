package eigen

import (
	"fmt"
	"math"
)

// chooseShift factorises at a first shift that makes A positive definite.
func (s *solver) chooseShift() error {
	sigma := s.opt.Shift
	if sigma == 0 {
		// Far enough from zero that rigid motions do not drown in rounding, near enough that the lowest elastic values
		// are well apart as seen from there: a hundredth of the limit, or a guess that adapt corrects.
		sigma = -max(1e-10*s.p.scale(), s.opt.Limit/100)
		if sigma == 0 {
			sigma = -1 // K is zero
		}
	}
	return s.shiftTo(sigma)
}

// shiftTo factorises at σ, or further down while eigenvalues that should be zero have come out below σ.
func (s *solver) shiftTo(sigma float64) error {
	p, st := s.p, &s.res.Status
	for range 4 {
		neg, err := p.setShift(sigma)
		if err != nil {
			return err
		}
		if neg == 0 {
			return nil
		}
		if s.opt.Shift != 0 {
			break
		}
		st.note("%d eigenvalues are below the shift %.3g: it was moved further down", neg, sigma)
		sigma *= 100
	}
	return &IndefiniteError{
		Matrix: "K or M", Unknown: p.factor.Stats.FirstNegative,
		Detail: fmt.Sprintf("K-σM has negative pivots at σ = %.3g", p.shift),
	}
}

// Within these bounds the number of steps hardly depends on the shift (measured on sheets and chains). A shift much
// nearer to zero loses digits of the elastic values to the rigid ones; one far below them makes all look alike.
const (
	nearest  = 1e-3 // of the lowest elastic value
	farthest = 50   // times the lowest elastic value
)

// adapt looks at the first Ritz values and moves the shift when it turns out to be far from the lowest elastic value. It
// says whether it did.
func (s *solver) adapt(q *search) (moved bool, err error) {
	sigma := s.p.shift
	lowest := math.Inf(1)
	for _, pair := range q.pairs {
		// Rigid values are zero up to rounding, far below the shift.
		if v := sigma + 1/pair.theta; pair.theta > 0 && v > 1e-4*-sigma {
			lowest = min(lowest, v)
		}
	}
	if math.IsInf(lowest, 1) || -sigma >= nearest*lowest && -sigma <= farthest*lowest {
		return false, nil
	}
	// Never so near that rounding in K, about 1e-16 of its scale, could matter.
	to := -max(0.3*lowest, 1e-13*s.p.scale())
	if to/sigma > 0.5 && to/sigma < 2 {
		return false, nil
	}
	s.res.Status.note("the shift was moved from %.3g to %.3g, nearer to the lowest elastic value", sigma, to)
	return true, s.shiftTo(to)
}
