package eigen

import (
	"errors"
	"fmt"
)

// chooseShift factorises at a first shift that makes A positive definite.
func (s *solver) chooseShift() error {
	sigma := s.opt.Shift
	if scale := s.p.scale(); scale > 0 && sigma < -1e3*scale {
		return fmt.Errorf("eigen: shift %.3g is too far below the spectrum, which reaches to about %.3g, to tell values apart", sigma, scale)
	}
	if sigma == 0 {
		// Far enough from zero that rigid motions do not drown in rounding, near enough that the lowest elastic values
		// are well apart as seen from there: a hundredth of the limit, or a guess that adapt corrects. In the bending of
		// sheets the lowest value is to the highest about as one to the number of unknowns squared.
		n := float64(s.p.order())
		sigma = -max(s.p.scale()*max(1/n/n, leastShift), s.opt.Limit/100)
		if sigma == 0 {
			sigma = -1 // K is zero
		}
	}
	return s.shiftTo(sigma)
}

// shiftTo factorises at σ, or further down while K-σM is singular or indefinite there: where K alone holds nothing, the
// little that σM adds may be less than the rounding errors of K.
func (s *solver) shiftTo(sigma float64) error {
	p, st := s.p, &s.res.Status
	var err error
	for try := range 5 {
		if try > 0 {
			if s.opt.Shift != 0 {
				break
			}
			sigma *= 100
			st.note("the shift was moved down to %.3g: %v", sigma, err)
		}
		var neg int
		neg, err = p.setShift(sigma)
		if err == nil && neg == 0 {
			return nil
		}
		var singular *SingularError
		if err != nil && !errors.As(err, &singular) {
			return err
		}
		if err == nil {
			err = &IndefiniteError{
				Matrix: "K or M", Unknown: p.factor.Stats.FirstNegative,
				Detail: fmt.Sprintf("K-σM has %d negative pivots at σ = %.3g", neg, sigma),
			}
		}
	}
	return err
}

// leastShift is the part of the scale of the pencil below which rounding in K, some 1e-16 of it, could matter.
const leastShift = 1e-11

// Within these bounds the number of steps hardly depends on the shift (measured on sheets and chains). A shift much
// nearer to zero loses digits of the elastic values to the rigid ones; one far below them makes all look alike.
const (
	nearest  = 1e-3 // of the lowest elastic value
	farthest = 50   // times the lowest elastic value
)

// settleShift makes the first steps of a search and begins it anew from a better shift while the present one turns out to
// be far from the lowest elastic value.
func (s *solver) settleShift(q *search) (*search, error) {
	const looks, steps = 6, 3
	for range looks {
		if _, err := q.run(s.ctx, s.enough, steps); err != nil {
			return nil, err
		}
		to := s.betterShift(q)
		if to == 0 {
			continue
		}
		s.res.Status.note("the shift was moved from %.3g to %.3g, nearer to the lowest elastic value", s.p.shift, to)
		if err := s.shiftTo(to); err != nil {
			return nil, err
		}
		block := q.block
		q = nil
		s.p.collect()
		q = s.newSearch(block)
	}
	return q, nil
}

// betterShift returns a shift much better than the present one, or zero.
func (s *solver) betterShift(q *search) float64 {
	const rigid = 6
	sigma, least := s.p.shift, leastShift*s.p.scale()
	// However inexact, the k-th Ritz value is no less than the k-th eigenvalue (Courant and Fischer), so that the
	// first one beyond the rigid ones is a bound. Zero is none: there may be more than six null vectors.
	for k := rigid; k < len(q.pairs) && q.pairs[k].theta > 0; k++ {
		if v := q.value(k); v > 1e-6*-sigma {
			if bound := max(v, least); -sigma > farthest*bound {
				return -bound
			}
			break
		}
	}
	// From too near, the lowest values come at once, and nothing but an elastic one known well counts.
	for k, pair := range q.pairs {
		v, doubt := q.value(k), pair.residual/(pair.theta*pair.theta)
		if pair.theta > 0 && v > max(1e-4*-sigma, least) && doubt < 0.1*v {
			if to := max(0.3*v, least); -sigma < nearest*v && to > 2*-sigma {
				return -to
			}
			break
		}
	}
	return 0
}
