package forced

import (
	"context"
	"math"
	"math/cmplx"
)

// spectral is the matrix at rest in its own vectors: with A = diag(ω_v²) + iL over
// the vectors that are not rigid, complex and symmetric, A x_k = d_k x_k and
// x_jᵀ x_k = δ_jk, so that (A − ω²)⁻¹ = Σ x_k x_kᵀ / (d_k − ω²). Rigid-body
// vectors are vectors of their own with d = 0. It answers many rows and loads at a frequency by
// one product of real matrices.
type spectral struct {
	value  []complex128
	vector [][]complex128 // over the vectors in use
}

// The vectors are used when A x_k is d_k x_k to a part in 1/alike of d_k, and they are
// orthonormal to that; near equal values may leave them poorer.
const alike = 1e-8

// spectral gives it for the matrix without laws, or nil where the vectors are not good enough. It does not
// depend on threads.
func (s *System) spectral(threads int) *spectral {
	n := len(s.vectors)
	a := s.lawless(0, make([]complex128, n*n))
	out := &spectral{}
	var elastic []int
	for i, k := range s.square {
		if k > 0 {
			elastic = append(elastic, i)
			continue
		}
		x := make([]complex128, n)
		x[i] = 1
		out.value, out.vector = append(out.value, 0), append(out.vector, x)
	}
	m := len(elastic)
	sub := make([]complex128, m*m)
	for p, i := range elastic {
		for q, j := range elastic {
			sub[p*m+q] = a[i*n+j]
		}
	}
	h := reduce(append([]complex128(nil), sub...), m)
	values, ok := eigenvalues(append([]complex128(nil), h.h...), m)
	if !ok {
		return nil
	}
	vectors := make([][]complex128, m)
	_ = s.each(context.Background(), m, threads, func() func(k int) error {
		work := make([]complex128, m*m)
		return func(k int) error {
			vectors[k] = h.vector(sub, values[k], work)
			return nil
		}
	})
	for k, x := range vectors {
		if x == nil {
			return nil
		}
		whole := make([]complex128, n)
		for p, i := range elastic {
			whole[i] = x[p]
		}
		out.value, out.vector = append(out.value, values[k]), append(out.vector, whole)
	}
	for j, x := range out.vector {
		for k, y := range out.vector[:j+1] {
			want := complex(0, 0)
			if j == k {
				want = 1
			}
			if !(cmplx.Abs(product(x, y)-want) <= alike) {
				return nil
			}
		}
	}
	return out
}

// vector gives the one of a value d of the complex symmetric matrix a that h is the form of, with xᵀx = 1, by inverse
// iteration; nil where it has none of its own.
func (h *hessenberg) vector(a []complex128, d complex128, work []complex128) []complex128 {
	m := h.n
	x := make([]complex128, m)
	for i := range x { // no direction is missing, none is favoured
		x[i] = cmplx.Rect(1, float64(i*i))
	}
	for range 2 {
		if !h.solveAt(d*(1+1e-13), work, x) || !finite(x) {
			return nil
		}
		norm := 0.0
		for _, z := range x {
			norm = math.Hypot(norm, cmplx.Abs(z))
		}
		for i := range x {
			x[i] /= complex(norm, 0)
		}
	}
	x = h.turnBack(x)
	root := cmplx.Sqrt(product(x, x))
	if cmplx.Abs(root) < 1e-3 {
		return nil
	}
	for p := range x {
		x[p] /= root
	}
	for p := range m {
		off := product(a[p*m:p*m+m], x) - d*x[p]
		if !(cmplx.Abs(off) <= alike*cmplx.Abs(d)) {
			return nil
		}
	}
	return x
}

// along gives rows in the spectral vectors: x_kᵀ row.
func (p *spectral) along(rows [][]float64) [][]complex128 {
	out := make([][]complex128, len(rows))
	for i, row := range rows {
		out[i] = make([]complex128, len(p.vector))
		for k, x := range p.vector {
			out[i][k] = along(row, x)
		}
	}
	return out
}
