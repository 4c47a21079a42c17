package eigen

import (
	"cmp"
	"context"
	"errors"
	"math"
	"slices"
	"time"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/numeric/dense"
)

// pair is a candidate eigenpair of the operator: θ and its vector's place in a basis.
type pair struct {
	theta    float64
	residual float64 // estimate of ‖A⁻¹Mx-θx‖ in the norm of M
	at       int     // column of the rotation, or number of the locked vector
	locked   bool
}

// search is a block Lanczos process in the complement of known pairs, whose vectors come first in the basis.
type search struct {
	p      *pencil
	b      *basis
	locked []float64 // θ of the known pairs
	tol    float64
	block  int
	room   int // most vectors beyond the locked ones
	seed   uint64
	status *Status

	h          []float64 // operator on the vectors beyond the locked ones, upper triangle, room by room
	start, end int       // last block, counted without the locked ones
	coupled    int       // first vector of the basis to which the recurrence couples the last block
	pairs      []pair    // of all vectors but the block just appended, by falling θ
	rotation   *mat.Dense
	work       []float64 // room for the block at hand
	exhausted  bool      // nothing is left outside the basis
}

func newSearch(p *pencil, known *pairs, block, room int, seed uint64, tol float64, st *Status) *search {
	s := &search{p: p, tol: tol, block: block, room: room, seed: seed << 32, status: st}
	for _, v := range known.values {
		s.locked = append(s.locked, 1/(v-p.shift))
	}
	s.b = newBasis(p, len(s.locked)+room)
	copy(s.b.v, known.x)
	s.b.count = len(s.locked)
	s.h = make([]float64, room*room)
	return s
}

// value is the λ of the k-th pair.
func (s *search) value(k int) float64 { return s.p.shift + 1/s.pairs[k].theta }

// begin puts a block of random vectors, multiplied by the operator, at the end of the basis. It returns false when
// nothing is left outside the basis.
func (s *search) begin() bool {
	n := s.p.order()
	count := min(s.block, s.room-s.end)
	x, w := make([]float64, count*n), make([]float64, count*n)
	s.seed++
	fillRandom(x, s.seed)
	s.p.mass(w, x, count)
	s.p.solve(w, count)
	keep, _, _ := s.b.append(w, nil, count, 0)
	s.start, s.end = s.end, s.end+len(keep)
	s.coupled = 0
	return len(keep) > 0
}

// run iterates until enough says so of the leading pairs, nothing is left, or steps have been made. It returns whether
// enough was reached.
func (s *search) run(ctx context.Context, enough func(s *search) bool, steps int) (bool, error) {
	if s.end == 0 && !s.exhausted {
		s.exhausted = !s.begin()
		if err := s.ritz(nil, 0); err != nil {
			return false, err
		}
	}
	for range steps {
		if enough(s) {
			return true, nil
		}
		if s.exhausted {
			return false, nil
		}
		if ctx.Err() != nil {
			return false, context.Cause(ctx)
		}
		if err := s.step(); err != nil {
			return false, err
		}
		if at := s.b.negative; at >= 0 {
			return false, &IndefiniteError{Matrix: "M", Unknown: at, Detail: "a vector has a negative square in its norm"}
		}
	}
	return enough(s), nil
}

// step multiplies the last block by the operator, appends what is new and finds the Ritz pairs.
func (s *search) step() error {
	n, l := s.p.order(), len(s.locked)
	count := s.end - s.start
	if cap(s.work) < count*n {
		s.work = make([]float64, count*n)
	}
	w := s.work[:count*n]
	copy(w, s.b.tail) // M times the last block
	s.p.solve(w, count)
	keep, c, r := s.b.append(w, nil, count, s.coupled)
	kept := len(keep)
	s.status.Steps++
	for i := range s.end {
		for j := range count {
			s.h[i*s.room+s.start+j] = c[(l+i)*count+j]
		}
	}
	if err := s.ritz(r, kept); err != nil {
		return err
	}
	s.coupled = l + s.start
	s.start, s.end = s.end, s.end+kept
	if s.end+max(kept, s.block) > s.room {
		s.restart(kept)
	}
	if kept == 0 {
		s.exhausted = !s.begin()
	}
	return nil
}

// ritz finds the Ritz pairs of the first end vectors, the last block being start..end with coefficients r (kept by
// end-start) along the vectors after it.
func (s *search) ritz(r []float64, kept int) error {
	defer since(time.Now(), &s.p.stats.RitzSeconds)
	m, count := s.end, s.end-s.start
	s.pairs = s.pairs[:0]
	for k, theta := range s.locked {
		s.pairs = append(s.pairs, pair{theta: theta, at: k, locked: true})
	}
	s.rotation = nil
	if m > 0 {
		sym := mat.NewSymDense(m, nil)
		for i := range m {
			for j := i; j < m; j++ {
				v := s.h[i*s.room+j]
				if i >= s.start {
					v = (v + s.h[j*s.room+i]) / 2
				}
				sym.SetSym(i, j, v)
			}
		}
		var e mat.EigenSym
		if !e.Factorize(sym, true) {
			return errors.New("eigen: the entries of K and M are too far apart in size to be worked with")
		}
		values := e.Values(nil)
		s.rotation = &mat.Dense{}
		e.VectorsTo(s.rotation)
		for k, theta := range values {
			sum := 0.0
			for i := range kept {
				t := 0.0
				for j := range count {
					t += r[i*count+j] * s.rotation.At(s.start+j, k)
				}
				sum += t * t
			}
			s.pairs = append(s.pairs, pair{theta: theta, residual: math.Sqrt(sum), at: k})
		}
	}
	slices.SortStableFunc(s.pairs, func(a, b pair) int { return cmp.Compare(b.theta, a.theta) })
	return nil
}

// infinite is the ratio to the largest θ below which a θ cannot be told from that of a null vector of M.
const infinite = 1e-13

// leading is the number of pairs from the largest θ on that have converged without a gap.
func (s *search) leading() int {
	for k, q := range s.pairs {
		if !s.converged(q) || q.theta < infinite*s.pairs[0].theta {
			return k
		}
	}
	return len(s.pairs)
}

// converged judges a pair by its residual. Nothing below the rounding errors of the largest θ can be asked for.
func (s *search) converged(q pair) bool {
	return q.locked || q.theta > 0 && q.residual <= max(s.tol*q.theta, 1e-15*s.pairs[0].theta)
}

// restart replaces the vectors before the block just appended, of kept vectors, by the best Ritz vectors, about half of
// the room. How they are coupled with that block comes out when it is multiplied.
func (s *search) restart(kept int) {
	n, l := s.p.order(), len(s.locked)
	old := s.start // vectors before the appended block
	keep := min((s.room-s.block)*3/5, old)
	rows := make([]float64, 0, keep*old)
	var theta []float64
	for _, q := range s.pairs {
		if q.locked || len(theta) == keep {
			continue
		}
		for i := range old {
			rows = append(rows, s.rotation.At(i, q.at))
		}
		theta = append(theta, q.theta)
	}
	dense.Rotate(keep, old, n, rows, s.b.v[l*n:], s.p.threads)
	copy(s.b.v[(l+keep)*n:(l+keep+kept)*n], s.b.v[(l+old)*n:(l+old+kept)*n])
	clear(s.h)
	for k, t := range theta {
		s.h[k*s.room+k] = t
	}
	s.start, s.end = keep, keep+kept
	s.coupled = 0
	s.b.count = l + s.end
	s.status.Restarts++
	// The pairs now are the kept vectors themselves.
	s.rotation = identity(keep)
	kth := 0
	out := s.pairs[:0]
	for _, q := range s.pairs {
		if !q.locked {
			if kth == keep {
				continue
			}
			q.at = kth
			kth++
		}
		out = append(out, q)
	}
	s.pairs = out
}

func identity(n int) *mat.Dense {
	d := mat.NewDense(n, n, nil)
	for i := range n {
		d.Set(i, i, 1)
	}
	return d
}

// take returns the vectors of the first count pairs, stored one after another.
func (s *search) take(count int) []float64 {
	n, l := s.p.order(), len(s.locked)
	x := make([]float64, count*n)
	cols := 0
	if s.rotation != nil {
		cols, _ = s.rotation.Dims()
	}
	c := make([]float64, count*(l+cols))
	for k, q := range s.pairs[:count] {
		if q.locked {
			c[k*(l+cols)+q.at] = 1
			continue
		}
		for i := range cols {
			c[k*(l+cols)+l+i] = s.rotation.At(i, q.at)
		}
	}
	dense.AddCombined(count, l+cols, n, 1, c, s.b.v, x, s.p.threads)
	return x
}
