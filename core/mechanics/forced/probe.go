package forced

import (
	"context"
	"math/cmplx"
	"sync"

	"hushframe/core/mechanics/modal"
)

// SiteRow gives the motion of a site along one component (0 to 2 displacement along x, y,
// z; 3 to 5 rotation about them) in each vector in use: a row to probe.
func (s *System) SiteRow(site *modal.Site, component int) []float64 {
	return s.component(site, component)
}

// NodeRow gives the displacement of a mesh node along one axis in each vector
// in use: a row to probe.
func (s *System) NodeRow(node, axis int) []float64 {
	row := make([]float64, len(s.vectors))
	for i, v := range s.vectors {
		row[i] = s.basis.Shapes[v][3*node+axis]
	}
	return row
}

// Probe reads the motion along some rows (one number per vector in use each)
// under one unit of each input, at the given frequencies. visit is called once for each place k
// among them, from several threads at once and in no set order, with
// motion[row][input] in m or rad per N or N·m; what it is given is reused when it returns.
// Errors are those of Transfer.
func (s *System) Probe(ctx context.Context, frequency []float64, rows [][]float64, threads int, visit func(k int, motion [][]complex128)) error {
	rest, err := s.Rest(ctx, frequency, rows, threads)
	if err != nil {
		return err
	}
	return rest.Probe(ctx, s.momentum, threads, visit)
}

// Coordinates gives the modal coordinates under one unit of each input:
// visit gets q[input][vector in use], as for Probe.
func (s *System) Coordinates(ctx context.Context, frequency []float64, threads int, visit func(k int, q [][]complex128)) error {
	return s.each(ctx, len(frequency), threads, func() func(k int) error {
		p := s.pusher()
		q := make([][]complex128, len(s.inputs))
		return func(k int) error {
			if err := p.push(frequency[k], q); err != nil {
				return err
			}
			visit(k, q)
			return nil
		}
	})
}

// each runs work for 0 to n−1 on some threads, each with a worker of its own.
func (s *System) each(ctx context.Context, n, threads int, worker func() func(k int) error) error {
	threads = max(1, min(threads, n))
	failed := make([]error, threads)
	var group sync.WaitGroup
	for w := range threads {
		group.Go(func() {
			work := worker()
			for k := w; k < n && failed[w] == nil; k += threads {
				if failed[w] = ctx.Err(); failed[w] == nil {
					failed[w] = work(k)
				}
			}
		})
	}
	group.Wait()
	for _, err := range failed {
		if err != nil {
			return err
		}
	}
	return nil
}

// pusher solves for every input.
type pusher struct {
	s       *System
	reduced *hessenberg
	work    []complex128
	load    [][]complex128 // inputs, then tilts of spinning rotors, in the coordinates of the Hessenberg form
	tilts   [][]complex128 // those that spin, as rows, in the same
	sides   [][]complex128
	p, part []complex128
}

func (s *System) pusher() *pusher {
	n := len(s.vectors)
	p := &pusher{s: s, reduced: s.reduced(), work: make([]complex128, n*n)}
	for range s.load {
		p.sides = append(p.sides, make([]complex128, n))
	}
	if p.reduced == nil {
		return p
	}
	for _, row := range s.load {
		p.load = append(p.load, p.reduced.turn(complexRow(row)))
	}
	if !s.spinning() {
		return p
	}
	p.p, p.part = make([]complex128, len(s.tilt)*len(s.tilt)), make([]complex128, len(s.tilt))
	for _, row := range s.tilt {
		x := p.reduced.turn(complexRow(row))
		p.load, p.sides = append(p.load, x), append(p.sides, make([]complex128, n))
		y := make([]complex128, n)
		for v := range y { // oᵀ Q = (Qᴴ ō)ᴴ with o real
			y[v] = cmplx.Conj(x[v])
		}
		p.tilts = append(p.tilts, y)
	}
	return p
}

// push fills q with the modal coordinates under one unit of each input.
func (p *pusher) push(frequency float64, q [][]complex128) error {
	s := p.s
	omega := angular(frequency)
	if p.reduced != nil && p.fast(omega) {
		for j := range q {
			q[j] = p.reduced.turnBack(p.sides[j])
		}
	} else {
		for j, row := range s.load {
			q[j] = p.sides[j]
			for v, x := range row {
				q[j][v] = complex(x, 0)
			}
		}
		if !factorSolve(s.matrix(omega), len(s.vectors), q...) {
			return &Unbounded{frequency}
		}
	}
	for _, x := range q {
		if !finite(x) {
			return &Unbounded{frequency}
		}
	}
	return nil
}

// fast solves by the Hessenberg form and Woodbury's identity; false when the
// frame at rest has no bounded response.
func (p *pusher) fast(omega float64) bool {
	s := p.s
	for j, x := range p.load {
		copy(p.sides[j], x)
	}
	if !p.reduced.solve(omega*omega, p.work, p.sides...) {
		return false
	}
	m, inputs := len(p.part), len(s.inputs)
	if m == 0 {
		return true
	}
	for i := range m {
		for j := range m {
			p.p[i*m+j] = product(p.sides[inputs+j], p.tilts[i])
		}
	}
	if !couple(p.p, s.momentum, omega) {
		return false
	}
	for _, x := range p.sides[:inputs] {
		for i := range m {
			p.part[i] = product(x, p.tilts[i])
		}
		for i := range m {
			var f complex128
			for j, y := range p.part {
				f += p.p[i*m+j] * y
			}
			takeAway(x, f, p.sides[inputs+i])
		}
	}
	return true
}
