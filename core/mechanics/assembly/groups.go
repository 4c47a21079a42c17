package assembly

import (
	"context"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/numeric/dense"
)

// GroupStiffness returns, per group of the problem, the matrix y_iᵀ K_g y_j of the motions ys: n×n,
// row-major and symmetric. They add up to that of K. Groups without stiffness have zeros.
func (s *System) GroupStiffness(ctx context.Context, ys [][]float64, threads int) ([][]float64, error) {
	p, n := s.layout.problem, len(ys)
	out := make([][]float64, len(p.Groups))
	for g := range out {
		out[g] = make([]float64, n*n)
	}
	nodes := s.expandAll(ys, threads)
	for i := range s.plates {
		a := &s.plates[i]
		w := newWork(nodes, len(a.part.Elements), a.nodes, a.part.unknowns(), a.part.lists(), func(int) Axes { return a.part.Axes }, a.part.Axes, threads)
		if err := w.apply(ctx, a.matrices.Stiffness, threads); err != nil {
			return nil, err
		}
		w.products(out[a.part.Group], threads)
	}
	for i := range s.beams {
		a := &s.beams[i]
		lists := func(e int) []int32 { return a.part.Elements[e][:] }
		w := newWork(nodes, len(a.part.Elements), beam.Unknowns/6, element.NodeUnknowns, lists, func(e int) Axes { return a.axes[e] }, Global, threads)
		if err := w.apply(ctx, a.matrices.Stiffness, threads); err != nil {
			return nil, err
		}
		w.products(out[a.part.Group], threads)
	}
	for i := range s.springs {
		a := &s.springs[i]
		d := make([][6]float64, n)
		for m, y := range ys {
			d[m] = s.stretch(a, y)
		}
		dst := out[a.spring.Group]
		for c, k := range a.spring.Stiffness {
			if k == 0 {
				continue
			}
			for r := range n {
				for q := range r + 1 {
					dst[r*n+q] += k * d[r][c] * d[q][c]
				}
			}
		}
	}
	s.contactStiffness(nodes, out, threads)
	for _, dst := range out {
		for r := range n {
			for q := range r {
				dst[q*n+r] = dst[r*n+q]
			}
		}
	}
	return out, nil
}

func (s *System) expandAll(ys [][]float64, threads int) [][]float64 {
	nodes := make([][]float64, len(ys))
	dense.Parallel(threads, len(ys), func(m int) {
		nodes[m] = make([]float64, 6*len(s.layout.problem.Nodes))
		s.Expand(nodes[m], ys[m])
	})
	return nodes
}

// work holds the motions of one part and the forces that its matrices answer with, as rows over the
// components of its own nodes in one set of axes.
type work struct {
	count, width  int // of motions; of components
	order, per    int // of the element matrices; unknowns of one node
	elements      int
	node          func(e, i int) int // of the part
	turned        func(e int) (axes Axes, differ bool)
	motion, force []float64 // count × width
}

// newWork gathers nodes, the motions of all nodes in airframe axes, into common axes. Elements with all six unknowns
// per node may have axes of their own.
func newWork(nodes [][]float64, elements, perElement, per int, list func(e int) []int32, axes func(e int) Axes, common Axes, threads int) *work {
	w := &work{count: len(nodes), order: per * perElement, per: per, elements: elements}
	place := map[int32]int{}
	var own []int32
	index := make([]int, elements*perElement)
	for e := range elements {
		for i, v := range list(e) {
			at, ok := place[v]
			if !ok {
				at = len(own)
				place[v] = at
				own = append(own, v)
			}
			index[e*perElement+i] = at
		}
	}
	w.width = 6 * len(own)
	w.node = func(e, i int) int { return index[e*perElement+i] }
	w.turned = func(e int) (Axes, bool) {
		a := axes(e)
		return a, a != common
	}
	w.motion, w.force = make([]float64, w.count*w.width), make([]float64, w.count*w.width)
	dense.Parallel(threads, w.count, func(m int) {
		row := w.motion[m*w.width:]
		for i, v := range own {
			u := common.in6([6]float64(nodes[m][6*v : 6*v+6]))
			copy(row[6*i:], u[:])
		}
	})
	return w
}

// panel is the number of motions that one goroutine multiplies at a time. A panel owns its rows of the
// forces, so their sums run over the elements in order whatever the number of threads.
const panel = 20

// apply computes the forces of the packed element matrices.
func (w *work) apply(ctx context.Context, packed []float64, threads int) error {
	clear(w.force)
	size, n, per := element.Packed(w.order), w.order, w.per
	dense.Parallel(threads, (w.count+panel-1)/panel, func(t int) {
		lo := t * panel
		rows := min(panel, w.count-lo)
		full, u, f := make([]float64, n*n), make([]float64, rows*n), make([]float64, rows*n)
		for e := range w.elements {
			if e%64 == 0 && ctx.Err() != nil {
				return
			}
			unpack(full, packed[size*e:size*(e+1)], n)
			axes, differ := w.turned(e)
			for r := range rows {
				row := w.motion[(lo+r)*w.width:]
				for i := range n / per {
					at := 6 * w.node(e, i)
					copy(u[r*n+per*i:][:per], row[at:])
				}
			}
			if differ {
				turn(u, axes.in6)
			}
			clear(f)
			dense.SubMulT(rows, n, n, u, n, full, n, f, n)
			if differ {
				turn(f, axes.out6)
			}
			for r := range rows {
				row := w.force[(lo+r)*w.width:]
				for i := range n / per {
					to, from := row[6*w.node(e, i):][:per], f[r*n+per*i:][:per]
					for k := range to {
						to[k] -= from[k]
					}
				}
			}
		}
	})
	return ctx.Err()
}

func turn(motions []float64, by func([6]float64) [6]float64) {
	for i := 0; i < len(motions); i += 6 {
		m := by([6]float64(motions[i : i+6]))
		copy(motions[i:], m[:])
	}
}

func unpack(full, packed []float64, n int) {
	at := 0
	for i := range n {
		for j := range i + 1 {
			full[i*n+j], full[j*n+i] = packed[at], packed[at]
			at++
		}
	}
}

// products adds the work of every force on every motion to the lower triangle of dst.
func (w *work) products(dst []float64, threads int) {
	const piece = 1024
	n, pieces := w.count, (w.width+piece-1)/piece
	parts := make([]float64, pieces*n*n)
	dense.Parallel(threads, pieces, func(t int) {
		p := t * piece
		dense.SubMulTLower(n, min(piece, w.width-p), w.force[p:], w.width, w.motion[p:], w.width, parts[t*n*n:], n)
	})
	for t := range pieces {
		for r := range n {
			for q := range r + 1 {
				dst[r*n+q] -= parts[t*n*n+r*n+q]
			}
		}
	}
}

// own returns the work of each force on its own motion.
func (w *work) own(m int) float64 {
	sum := 0.0
	f := w.force[m*w.width:][:w.width]
	for i, u := range w.motion[m*w.width:][:w.width] {
		sum += u * f[i]
	}
	return sum
}
