package assembly

import (
	"context"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
)

// groupChunk is the number of elements whose share is summed by itself: it fixes the order of the
// sums whatever the number of threads.
const groupChunk = 128

// GroupStiffness returns, per group of the problem, the matrix y_iᵀ K_g y_j of the motions ys: n×n,
// row-major and symmetric. They add up to that of K. Groups without stiffness have zeros.
func (s *System) GroupStiffness(ctx context.Context, ys [][]float64, threads int) ([][]float64, error) {
	p, n := s.layout.problem, len(ys)
	out := make([][]float64, len(p.Groups))
	for g := range out {
		out[g] = make([]float64, n*n)
	}
	nodes := make([][]float64, n)
	for m, y := range ys {
		nodes[m] = make([]float64, 6*len(p.Nodes))
		s.Expand(nodes[m], y)
	}
	for i := range s.plates {
		a := &s.plates[i]
		err := s.sumGroup(ctx, out[a.part.Group], len(a.part.Elements), 6*a.nodes, threads, a.matrices.Stiffness, func(e, m int) []float64 {
			return local(nodes[m], a.part.Elements[e][:a.nodes], a.part.Axes)
		}, n)
		if err != nil {
			return nil, err
		}
	}
	for i := range s.beams {
		a := &s.beams[i]
		err := s.sumGroup(ctx, out[a.part.Group], len(a.part.Elements), beam.Unknowns, threads, a.matrices.Stiffness, func(e, m int) []float64 {
			return local(nodes[m], a.part.Elements[e][:], a.axes[e])
		}, n)
		if err != nil {
			return nil, err
		}
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
	for _, dst := range out {
		for r := range n {
			for q := range r {
				dst[q*n+r] = dst[r*n+q]
			}
		}
	}
	return out, nil
}

// sumGroup adds u_rᵀ K_e u_q (q ≤ r) over elements of the given order to dst.
func (s *System) sumGroup(ctx context.Context, dst []float64, count, order, threads int, stiffness []float64, motion func(e, m int) []float64, n int) error {
	chunks := (count + groupChunk - 1) / groupChunk
	partial := make([][]float64, chunks)
	size := element.Packed(order)
	err := element.Each(ctx, chunks, 1, threads, func() struct{} { return struct{}{} }, func(_ struct{}, c int) error {
		sum := make([]float64, n*n)
		u, ku := make([][]float64, n), make([]float64, order)
		for e := c * groupChunk; e < min((c+1)*groupChunk, count); e++ {
			for m := range n {
				u[m] = motion(e, m)
			}
			k := stiffness[size*e : size*(e+1)]
			for r := range n {
				multiply(ku, k, u[r])
				for q := range r + 1 {
					x := 0.0
					for i, v := range ku {
						x += v * u[q][i]
					}
					sum[r*n+q] += x
				}
			}
		}
		partial[c] = sum
		return nil
	})
	if err != nil {
		return err
	}
	for _, sum := range partial {
		for i, v := range sum {
			dst[i] += v
		}
	}
	return nil
}

// multiply computes dst = A x of a packed matrix.
func multiply(dst, a, x []float64) {
	clear(dst)
	at := 0
	for i := range x {
		sum := 0.0
		for j := range i {
			v := a[at+j]
			sum += v * x[j]
			dst[j] += v * x[i]
		}
		dst[i] += sum + a[at+i]*x[i]
		at += i + 1
	}
}
