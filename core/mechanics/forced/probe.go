package forced

import (
	"context"
	"fmt"
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
	for _, row := range rows {
		if len(row) != len(s.vectors) {
			panic(fmt.Sprintf("forced: row of %d numbers over %d vectors", len(row), len(s.vectors)))
		}
	}
	own := s.own()
	return s.each(ctx, len(frequency), threads, func() func(k int) error {
		p := s.prober(rows)
		if own != nil {
			p.quick = s.receptor(own, append(append([][]float64{}, rows...), s.tilt...), append(append([][]float64{}, s.load...), s.tilt...))
			for range len(rows) + len(s.tilt) {
				p.all = append(p.all, make([]complex128, len(s.inputs)+len(s.tilt)))
			}
		}
		return func(k int) error {
			if p.quick == nil || !p.couple(frequency[k]) {
				if err := p.solve(frequency[k]); err != nil {
					return err
				}
			}
			visit(k, p.motion)
			return nil
		}
	})
}

// Coordinates gives the modal coordinates under one unit of each input:
// visit gets q[input][vector in use], as for Probe.
func (s *System) Coordinates(ctx context.Context, frequency []float64, threads int, visit func(k int, q [][]complex128)) error {
	return s.each(ctx, len(frequency), threads, func() func(k int) error {
		p := s.prober(nil)
		q := make([][]complex128, len(s.inputs))
		return func(k int) error {
			if err := p.solve(frequency[k]); err != nil {
				return err
			}
			for j := range q {
				if q[j] = p.sides[j]; s.reduced != nil && !p.full {
					q[j] = s.reduced.turnBack(q[j])
				}
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

// prober solves for every input.
type prober struct {
	s          *System
	work       []complex128
	load, rows [][]complex128 // inputs then tilts; rows then tilts, in the coordinates of the solve
	plain      [][]float64    // the rows, in modal coordinates
	sides      [][]complex128
	motion     [][]complex128
	p, part    []complex128
	full       bool // the last solve was in modal coordinates
	quick      *receptor
	all        [][]complex128 // rows, then tilts, under inputs, then tilts, of the frame at rest
}

// couple fills motion from the spectral form, with the gyroscopic couplings;
// false when there is no bounded answer that way.
func (p *prober) couple(frequency float64) bool {
	s := p.s
	omega := angular(frequency)
	if !p.quick.at(omega, p.all) {
		return false
	}
	rows, inputs, m := len(p.plain), len(s.inputs), len(s.tilt)
	for i := range rows {
		copy(p.motion[i], p.all[i][:inputs])
	}
	if s.spinning() {
		middle := make([]complex128, m*m)
		for i := range m {
			copy(middle[i*m:], p.all[rows+i][inputs:])
		}
		if !couple(middle, s.momentum, omega) {
			return false
		}
		for i := range rows {
			for j := range m {
				var f complex128
				for k, x := range p.all[i][inputs:] {
					f += x * middle[k*m+j]
				}
				for c, y := range p.all[rows+j][:inputs] {
					p.motion[i][c] -= f * y
				}
			}
		}
	}
	for i := range p.motion {
		if !finite(p.motion[i]) {
			return false
		}
	}
	return true
}

func (s *System) prober(rows [][]float64) *prober {
	n := len(s.vectors)
	p := &prober{s: s, work: make([]complex128, n*n), plain: rows}
	spins := s.reduced != nil && s.spinning()
	loads, outputs := s.load, rows
	if spins {
		loads = append(append([][]float64{}, loads...), s.tilt...)
		outputs = append(append([][]float64{}, outputs...), s.tilt...)
		p.p, p.part = make([]complex128, len(s.tilt)*len(s.tilt)), make([]complex128, len(s.tilt))
	}
	for _, row := range loads {
		x := complexRow(row)
		if s.reduced != nil {
			x = s.reduced.turn(x)
		}
		p.load = append(p.load, x)
		p.sides = append(p.sides, make([]complex128, n))
	}
	for _, row := range outputs {
		x := complexRow(row)
		if s.reduced != nil { // oᵀ Q = (Qᴴ ō)ᴴ with o real
			x = s.reduced.turn(x)
			for v := range x {
				x[v] = cmplx.Conj(x[v])
			}
		}
		p.rows = append(p.rows, x)
	}
	for range rows {
		p.motion = append(p.motion, make([]complex128, len(s.inputs)))
	}
	return p
}

func (p *prober) solve(frequency float64) error {
	s := p.s
	omega := angular(frequency)
	p.full = !(s.reduced != nil && p.fast(omega))
	if p.full {
		for j, row := range s.load {
			for v, x := range row {
				p.sides[j][v] = complex(x, 0)
			}
		}
		if !factorSolve(s.matrix(omega), len(s.vectors), p.sides[:len(s.inputs)]...) {
			return &Unbounded{frequency}
		}
	}
	for i := range p.motion {
		for j := range s.inputs {
			if p.full {
				p.motion[i][j] = along(p.plain[i], p.sides[j])
			} else {
				p.motion[i][j] = product(p.sides[j], p.rows[i])
			}
		}
	}
	for j := range s.inputs {
		if !finite(p.sides[j]) {
			return &Unbounded{frequency}
		}
	}
	return nil
}

// fast solves by the Hessenberg form and Woodbury's identity; false when the
// frame at rest has no bounded response.
func (p *prober) fast(omega float64) bool {
	s := p.s
	for j, x := range p.load {
		copy(p.sides[j], x)
	}
	if !s.reduced.solve(omega*omega, p.work, p.sides...) {
		return false
	}
	m, inputs := len(p.part), len(s.inputs)
	if m == 0 {
		return true
	}
	tilts := p.rows[len(p.plain):]
	for i := range m {
		for j := range m {
			p.p[i*m+j] = product(p.sides[inputs+j], tilts[i])
		}
	}
	if !couple(p.p, s.momentum, omega) {
		return false
	}
	for _, x := range p.sides[:inputs] {
		for i := range m {
			p.part[i] = product(x, tilts[i])
		}
		for i := range m {
			var f complex128
			for j, y := range p.part {
				f += p.p[i*m+j] * y
			}
			for v, z := range p.sides[inputs+i] {
				x[v] -= f * z
			}
		}
	}
	return true
}
