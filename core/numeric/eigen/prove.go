package eigen

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"hushframe/core/numeric/dense"
)

// searchAll searches, compares with the count, and searches again in the complement while some are missing.
func (s *solver) searchAll() error {
	opt, st := s.opt, &s.res.Status
	block := opt.Block
	adaptable := opt.Shift == 0 && opt.Limit == 0
	for {
		if err := s.p.resume(); err != nil {
			return err
		}
		s.p.collect()
		st.Attempts++
		q := s.newSearch(block)
		if adaptable {
			var err error
			if q, err = s.settleShift(q); err != nil {
				return err
			}
			adaptable = false
		}
		reached, err := q.run(s.ctx, s.enough, maxSteps)
		if err != nil {
			return err
		}
		st.Exhausted = q.exhausted
		if !reached && !q.exhausted {
			st.note("after %d steps only %d of %d pairs have converged", st.Steps, q.leading(), s.need)
		}
		s.known = s.finish(q)
		if err := s.checkSigns(); err != nil {
			return err
		}
		s.progress(0.9)
		again, err := s.prove(reached || q.exhausted)
		if err != nil {
			return err
		}
		if !again {
			break
		}
		// A block as wide as what is missing can hold every copy of a repeated value.
		block = max(2*block, min(st.Counted-st.Found, 64))
	}
	s.deliver()
	if opt.Static {
		if err := s.p.resume(); err != nil {
			return err
		}
		s.res.Factor = s.p.factor
	}
	s.progress(1)
	return nil
}

func (s *solver) newSearch(block int) *search {
	room := min(s.p.order(), max(3*s.need+2*block, 4*block, 40)) + block
	return newSearch(s.p, s.known, block, room, uint64(s.res.Status.Attempts), s.opt.Tol, &s.res.Status)
}

// enough says whether a search may stop.
func (s *solver) enough(q *search) bool {
	if s.res.Status.Attempts > 1 {
		return s.mended(q)
	}
	leading := q.leading()
	s.progress(0.4 + 0.5*math.Min(1, float64(leading)/float64(max(1, s.need))))
	if leading < s.need {
		return false
	}
	if s.opt.Limit > 0 && s.below < 0 {
		// Without a count beforehand, one pair above the limit tells that all below it have come.
		return leading > 0 && q.value(leading-1) > s.opt.Limit
	}
	return true
}

// mended says whether a search in the complement of what is known has brought all it can below the shift of the count: it
// has a pair above, and all before that have converged.
func (s *solver) mended(q *search) bool {
	for k, pair := range q.pairs {
		switch {
		case pair.locked:
		case !q.converged(pair):
			return false
		case q.value(k) > s.res.Status.CountShift:
			return true
		}
	}
	return false
}

// finish multiplies the converged pairs by the operator once more, which tells their residuals and frees them from null
// vectors of M, and makes them orthonormal again from the lowest λ up.
func (s *solver) finish(q *search) *pairs {
	const chunk = 8
	p := s.p
	n, count := p.order(), q.leading()
	rigid := make([]bool, count)
	for k := range count {
		rigid[k] = q.pairs[k].locked && s.known.rigid[q.pairs[k].at]
	}
	x := q.take(count)
	q.b, q.work = nil, nil
	p.collect()
	out := &pairs{}
	b := newBasis(p, count)
	mx, y, my := make([]float64, chunk*n), make([]float64, chunk*n), make([]float64, chunk*n)
	for from := 0; from < count; from += chunk {
		size := min(chunk, count-from)
		part := x[from*n:][:size*n]
		p.mass(mx, part, size)
		copy(y, mx[:size*n])
		p.solve(y, size)
		p.mass(my, y, size)
		values, residuals := make([]float64, size), make([]float64, size)
		dense.Parallel(p.threads, size, func(k int) {
			theta, residual := quotient(part[k*n:][:n], mx[k*n:][:n], y[k*n:][:n], my[k*n:][:n])
			values[k], residuals[k] = p.shift+1/theta, residual
			if rigid[from+k] {
				values[k] = 0
			}
			if !(theta > 0) {
				clear(y[k*n:][:n])
				clear(my[k*n:][:n]) // no mass: rounding has made it a null vector of M
			}
		})
		keep, _, _ := b.append(y, my, size, 0)
		for _, k := range keep {
			out.values = append(out.values, values[k])
			out.residuals = append(out.residuals, residuals[k])
			out.rigid = append(out.rigid, rigid[from+k])
		}
		if len(keep) < size {
			s.res.Status.note("%d vectors without mass or depending on others were dropped", size-len(keep))
		}
	}
	out.x = b.vectors()
	return out.sorted(n)
}

// quotient returns the Rayleigh quotient θ of the operator for a vector x of unit norm, right to the square of the error
// of x, and the residual ‖y-θx‖/θ, given mx = M·x, y = A⁻¹·mx and my = M·y.
func quotient(x, mx, y, my []float64) (theta, residual float64) {
	theta = inner(y, mx) / inner(x, mx)
	sum := 0.0
	for i := range y {
		sum += (y[i] - theta*x[i]) * (my[i] - theta*mx[i])
	}
	return theta, math.Sqrt(max(0, sum)) / theta
}

// sorted returns the pairs by rising λ.
func (f *pairs) sorted(n int) *pairs {
	order := make([]int, len(f.values))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(f.values[a], f.values[b]) })
	if slices.IsSorted(order) {
		return f
	}
	out := &pairs{x: make([]float64, len(f.x))}
	for at, k := range order {
		out.values = append(out.values, f.values[k])
		out.residuals = append(out.residuals, f.residuals[k])
		out.rigid = append(out.rigid, f.rigid[k])
		copy(out.x[at*n:][:n], f.x[k*n:][:n])
	}
	return out
}

// checkSigns refuses a K with a negative eigenvalue that rounding cannot explain: one that is not small against the
// terms that make up φᵀKφ.
func (s *solver) checkSigns() error {
	n := s.p.order()
	size := make([]float64, n)
	for k, v := range s.known.values {
		if v >= 0 {
			break
		}
		if s.known.residuals[k] > 1e-6 {
			continue // nothing can be said of it
		}
		x := s.known.x[k*n:][:n]
		sumOfTerms(s.p.k, size, x)
		terms, at := 0.0, 0
		for i := range x {
			terms += size[i] * math.Abs(x[i])
			if math.Abs(x[i]) > math.Abs(x[at]) {
				at = i
			}
		}
		if v < -max(1e-11*terms, 1e-9*-s.p.shift) {
			return &IndefiniteError{Matrix: "K", Unknown: at, Detail: fmt.Sprintf("the pencil has the eigenvalue %.6g", v)}
		}
	}
	return nil
}

// prove counts eigenvalues below a shift in a gap and says whether a further search is due.
func (s *solver) prove(complete bool) (again bool, err error) {
	p, st, values := s.p, &s.res.Status, s.known.values
	st.Proved = false
	shift, ok := s.gap()
	if !ok {
		st.note("nothing was found to count below")
		return false, nil
	}
	for try := range 3 {
		count, sure := s.below, s.below >= 0 && shift == s.countAt()
		if !sure {
			count, sure, err = s.count(p, shift)
			if err != nil {
				return false, err
			}
		}
		found := countBelow(values, shift)
		st.CountShift, st.Counted, st.Found, st.Trusted = shift, count, found, sure
		switch {
		case sure && count == found:
			st.Proved = true
			return false, nil
		case sure && count > found:
			if complete && st.Attempts < maxAttempts {
				s.need = max(s.need, count+1)
				st.note("%d of %d eigenvalues below %.6g were missing: searched again", count-found, count, shift)
				return true, nil
			}
			st.note("%d eigenvalues found below %.6g but %d counted", found, shift, count)
			return false, nil
		case sure:
			// As many orthonormal vectors with quotients below the shift prove as many eigenvalues (Courant and Fischer).
			st.note("%d eigenvalues found below %.6g but only %d counted: the count is wrong", found, shift, count)
		default:
			st.note("the count at %.6g cannot be trusted: moved", shift)
		}
		shift *= 1 + 1e-4*float64(try+1)
	}
	if n := len(values); s.opt.Limit > 0 && n > 0 && values[n-1] <= s.opt.Limit && st.Attempts < maxAttempts && !st.Exhausted {
		// The search relied on a count beforehand that is worth nothing, and has not seen beyond the limit.
		s.below, s.need = -1, n+1
		return true, nil
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

// gap returns a shift for the count: above all wanted values and away from every value found.
func (s *solver) gap() (shift float64, ok bool) {
	const least = 1e-5 // relative width of a gap worth counting in
	values, st := s.known.values, &s.res.Status
	n := len(values)
	if s.below >= s.opt.Modes {
		at := s.countAt()
		if !slices.ContainsFunc(values, func(v float64) bool { return math.Abs(v-at) <= least*at }) {
			return at, true
		}
	}
	if n == 0 {
		return 0, false
	}
	// Null values differ by rounding alone; there is no counting between them.
	rounding := max(1e-12*s.p.scale(), 1e-6*-s.p.shift)
	for k := max(s.wanted(), 1); k < n; k++ {
		if lo, hi := values[k-1], values[k]; hi-lo > max(least*hi, rounding) {
			return (lo + hi) / 2, true
		}
	}
	last := values[n-1]
	if st.Exhausted {
		// If these are all that exist, there are no more below a much higher shift.
		return max(10*last, -1e3*s.p.shift, s.p.scale()), true
	}
	return last + max(1e-3*last, -0.5*s.p.shift), true
}

// wanted is how many of the known pairs were asked for.
func (s *solver) wanted() int {
	values := s.known.values
	w := min(s.opt.Modes, len(values))
	if s.opt.Limit > 0 {
		for w < len(values) && values[w] <= s.opt.Limit {
			w++
		}
	}
	return w
}

// deliver fills in the result.
func (s *solver) deliver() {
	p, st, res, f := s.p, &s.res.Status, s.res, s.known
	n, w := p.order(), s.wanted()
	res.Shift = p.shift
	res.Values, res.Residuals = f.values[:w:w], f.residuals[:w:w]
	for k := range w {
		x := f.x[k*n:][:n:n]
		fixSign(x)
		res.Vectors = append(res.Vectors, x)
	}
	worst := 0.0
	for _, r := range res.Residuals {
		worst = max(worst, r)
	}
	if worst > 100*s.opt.Tol {
		st.note("rounding leaves a residual of %.2g", worst)
	}
	missing := st.Trusted && st.Counted > st.Found
	st.Exhausted = st.Exhausted && !missing
	if st.Exhausted && w < s.opt.Modes {
		st.note("the pencil has only %d finite eigenvalues", len(f.values))
	}
	switch {
	case missing || worst > 1000*s.opt.Tol:
	case st.Exhausted:
		st.Converged = true
	case s.opt.Limit == 0 || st.Proved:
		st.Converged = len(f.values) >= s.opt.Modes
	default:
		st.Converged = len(f.values) > s.opt.Modes && f.values[len(f.values)-1] > s.opt.Limit
	}
}
