package modal

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/dense"
)

// span gathers M-orthonormal vectors, all one after another.
type span struct {
	system    *assembly.System
	threads   int
	n         int // unknowns
	kinds     []VectorKind
	frequency []float64
	vectors   []float64
	masses    []float64 // M times each vector
}

func (b *span) count() int { return len(b.kinds) }

func (b *span) vector(v int) []float64 { return b.vectors[v*b.n : (v+1)*b.n] }

// list returns the vectors from lo on.
func (b *span) list(lo int) [][]float64 {
	var all [][]float64
	for v := lo; v < b.count(); v++ {
		all = append(all, b.vector(v))
	}
	return all
}

// extend makes the block y orthonormal in M, to the vectors so far and in itself from the first to the
// last, and keeps it; it takes y over. Vectors of y must be of no very different length and nearly
// orthogonal, for this is done once by the Cholesky factor of their products.
func (b *span) extend(kind VectorKind, frequency []float64, y []float64) error {
	m := len(frequency)
	if m == 0 {
		return nil
	}
	b.project(y, m)
	my := make([]float64, m*b.n)
	b.multiply(my, y, m)
	g := make([]float64, m*m)
	dense.Gram(m, m, b.n, y, my, g, b.threads)
	c, ok := inverseCholesky(m, g)
	if !ok {
		return fmt.Errorf("%s vectors depend on each other or have no mass", kind)
	}
	dense.Rotate(m, m, b.n, c, y, b.threads)
	dense.Rotate(m, m, b.n, c, my, b.threads)
	for _, f := range frequency {
		b.kinds, b.frequency = append(b.kinds, kind), append(b.frequency, f)
	}
	b.vectors, b.masses = append(b.vectors, y...), append(b.masses, my...)
	return nil
}

// project takes from the block y its parts along the vectors so far: y - Φ (MΦ)ᵀ y.
func (b *span) project(y []float64, m int) { b.remove(y, m, b.masses, b.vectors) }

// balance takes from the loads f what the vectors so far balance: f - MΦ Φᵀ f.
func (b *span) balance(f []float64, m int) { b.remove(f, m, b.vectors, b.masses) }

func (b *span) remove(y []float64, m int, along, parts []float64) {
	v := b.count()
	if v == 0 {
		return
	}
	c := make([]float64, m*v)
	dense.Gram(m, v, b.n, y, along, c, b.threads)
	dense.AddCombined(m, v, b.n, -1, c, parts, y, b.threads)
}

// multiply computes M times each vector of a block, a few at a time per goroutine.
func (b *span) multiply(dst, x []float64, m int) {
	const few = 4
	dense.Parallel(b.threads, (m+few-1)/few, func(t int) {
		lo, hi := t*few, min(m, (t+1)*few)
		b.system.M.MulBlock(dst[lo*b.n:hi*b.n], x[lo*b.n:hi*b.n], hi-lo)
	})
}

// inverseCholesky returns L⁻¹ with L Lᵀ = g, all row by row; ok is false when g is not positive definite.
func inverseCholesky(n int, g []float64) (inverse []float64, ok bool) {
	l := make([]float64, n*n)
	for i := range n {
		for j := range i + 1 {
			sum := (g[i*n+j] + g[j*n+i]) / 2
			for k := range j {
				sum -= l[i*n+k] * l[j*n+k]
			}
			if i > j {
				l[i*n+j] = sum / l[j*n+j]
				continue
			}
			if !(sum > 0) {
				return nil, false
			}
			l[i*n+i] = math.Sqrt(sum)
		}
	}
	inverse = make([]float64, n*n)
	for c := range n {
		for i := c; i < n; i++ {
			sum := 0.0
			if i == c {
				sum = 1
			}
			for k := c; k < i; k++ {
				sum -= l[i*n+k] * inverse[k*n+c]
			}
			inverse[i*n+c] = sum / l[i*n+i]
		}
	}
	return inverse, true
}
