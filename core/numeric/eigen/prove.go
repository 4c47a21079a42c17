package eigen

import (
	"math"
)

// found are eigenpairs by rising λ.
type found struct {
	values, residuals []float64
	x                 []float64
	rigid             []bool
}

// searchAll searches, compares with the count, and searches again in the complement while some are missing.
func (s *solver) searchAll() error {
	p, opt, st := s.p, s.opt, &s.res.Status
	n := p.order()
	block := opt.Block
	var f *found
	for attempt := range maxAttempts {
		st.Attempts = attempt + 1
		room := min(n, max(2*s.need+2*block, 4*block, 40)) + block
		s.current = newSearch(p, s.locked, s.theta, block, room, uint64(attempt+1), opt, st)
		reached, err := s.current.run(s.ctx, s.enough, maxSteps)
		if err != nil {
			return err
		}
		leading := s.current.leading()
		if !reached && !st.Exhausted {
			st.note("after %d steps only %d of %d pairs have converged", st.Steps, leading, s.need)
		}
		x, theta := s.current.take(leading)
		s.current = nil
		f = s.finish(x, theta)
		s.progress(0.9)
		again, err := s.prove(f, reached)
		if err != nil {
			return err
		}
		if !again {
			break
		}
		block *= 2
		s.locked, s.theta = f.x, make([]float64, len(f.values))
		for k, v := range f.values {
			s.theta[k] = 1 / (v - p.shift)
		}
		st.Exhausted = false
	}
	s.deliver(f)
	s.progress(1)
	return nil
}

// enough says whether a search may stop.
func (s *solver) enough(q *search) bool {
	leading := q.leading()
	if s.need > 0 {
		s.progress(0.4 + 0.5*math.Min(1, float64(leading)/float64(s.need)))
	}
	if leading < s.need {
		return false
	}
	if s.opt.Limit > 0 && s.below < 0 {
		// Without a count beforehand, one pair above the limit tells that all below it have come.
		return leading > 0 && s.p.shift+1/q.pairs[leading-1].theta > s.opt.Limit
	}
	return true
}

// finish multiplies candidates by the operator once more, which tells their residuals and frees them from null vectors
// of M, and makes them orthonormal again from the lowest λ up.
func (s *solver) finish(x, theta []float64) *found {
	p := s.p
	n, count := p.order(), len(theta)
	f := &found{values: make([]float64, count), residuals: make([]float64, count), x: x}
	mx, y, my := make([]float64, count*n), make([]float64, count*n), make([]float64, count*n)
	p.mass(mx, x, count)
	copy(y, mx)
	p.solve(y, count)
	p.mass(my, y, count)
	before := make([]float64, count)
	for k := range count {
		xk, mk, yk, zk := x[k*n:][:n], mx[k*n:][:n], y[k*n:][:n], my[k*n:][:n]
		// The Rayleigh quotient of the operator is right to the square of the error of the vector.
		t := inner(yk, mk) / inner(xk, mk)
		sum := 0.0
		for i := range yk {
			sum += (yk[i] - t*xk[i]) * (zk[i] - t*mk[i])
		}
		f.values[k], f.residuals[k] = p.shift+1/t, math.Sqrt(max(0, sum))/t
		for i := range yk {
			yk[i] /= t
			zk[i] /= t
		}
		before[k] = norm(yk, zk)
	}
	keep, _, _ := gramSchmidt(y, my, count, n, before)
	if len(keep) < count {
		panic("eigen: converged vectors are dependent")
	}
	f.x = y
	order := byRisingValue(f.values)
	sorted := &found{x: make([]float64, count*n)}
	for at, k := range order {
		sorted.values = append(sorted.values, f.values[k])
		sorted.residuals = append(sorted.residuals, f.residuals[k])
		copy(sorted.x[at*n:][:n], f.x[k*n:][:n])
	}
	return sorted
}

// prove counts at a shift in a gap and says whether a further search is due.
func (s *solver) prove(f *found, reached bool) (again bool, err error) {
	p, st := s.p, &s.res.Status
	st.Proved = false
	shift, below, ok := s.gap(f)
	if !ok {
		st.note("no gap above the wanted values in which to count")
		return false, nil
	}
	for try := range 3 {
		count, sure := s.below, s.below >= 0 && shift == s.opt.Limit*(1+1e-9)
		if !sure {
			count, sure, err = p.count(shift)
			if err != nil {
				return false, err
			}
		}
		st.CountShift, st.Counted, st.Found = shift, count, below
		if sure {
			st.Proved = count == below
			if count > below {
				s.need = max(s.need, count+1)
				st.note("%d of %d values below %.6g were missing: searched again", count-below, count, shift)
				return reached || st.Exhausted, nil
			}
			if count < below {
				st.note("%d values found below %.6g but %d counted", below, shift, count)
			}
			return false, nil
		}
		st.note("the count at %.6g cannot be trusted", shift)
		shift = shift * (1 + 1e-4*float64(try+1))
		below = countBelow(f.values, shift)
	}
	return false, nil
}

func countBelow(values []float64, s float64) int {
	c := 0
	for _, v := range values {
		if v < s {
			c++
		}
	}
	return c
}

// gap returns a shift for the count, above all wanted values and away from every value found, and how many found are
// below it.
func (s *solver) gap(f *found) (shift float64, below int, ok bool) {
	const least = 1e-5
	n := len(f.values)
	if s.below >= 0 && s.opt.Modes <= s.below {
		shift = s.opt.Limit * (1 + 1e-9)
		clear := true
		for _, v := range f.values {
			clear = clear && math.Abs(v-shift) > least*shift
		}
		if clear {
			return shift, countBelow(f.values, shift), true
		}
	}
	wanted := s.wanted(f)
	for k := max(wanted, 1); k < n; k++ {
		lo, hi := f.values[k-1], f.values[k]
		if hi-lo > least*math.Abs(hi) && hi > 0 {
			return (lo + hi) / 2, k, true
		}
	}
	if n == 0 {
		return 0, 0, false
	}
	// Nothing found above: all there are, or as far as the search got.
	last := f.values[n-1]
	return last + max(1e-3*math.Abs(last), -1e-3*s.p.shift), n, true
}

// wanted is how many of the values found were asked for.
func (s *solver) wanted(f *found) int {
	w := min(s.opt.Modes, len(f.values))
	if s.opt.Limit > 0 {
		for w < len(f.values) && f.values[w] <= s.opt.Limit {
			w++
		}
	}
	return w
}

// deliver fills in the result.
func (s *solver) deliver(f *found) {
	p, st, res := s.p, &s.res.Status, s.res
	n := p.order()
	w := s.wanted(f)
	res.Shift, res.Factor = p.shift, p.factor
	res.Values, res.Residuals = f.values[:w], f.residuals[:w]
	for k := range w {
		x := f.x[k*n:][:n:n]
		fixSign(x)
		res.Vectors = append(res.Vectors, x)
	}
	for k := range s.rigid {
		res.Values[k] = 0
	}
	enough := len(f.values) >= s.opt.Modes || st.Exhausted
	if s.opt.Limit > 0 && !st.Exhausted {
		enough = enough && (st.Proved || len(f.values) > 0 && f.values[len(f.values)-1] > s.opt.Limit)
	}
	st.Converged = enough
}
