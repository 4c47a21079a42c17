package forced

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/blas/cblas128"
)

// hessenberg is a matrix A = Q H Qᴴ with Q unitary and H zero below its first
// subdiagonal; both row-major.
type hessenberg struct {
	n int
	h []complex128
	q []complex128
}

// reduce overwrites a and returns its Hessenberg form (Householder's method;
// G. H. Golub and C. F. Van Loan, Matrix Computations, section on the
// Hessenberg decomposition).
func reduce(a []complex128, n int) *hessenberg {
	q := make([]complex128, n*n)
	for i := range n {
		q[i*n+i] = 1
	}
	bring(a, n, q)
	return &hessenberg{n, a, q}
}

// bring overwrites a with its Hessenberg form and multiplies each of the
// matrices beside from the right by the Q of it.
func bring(a []complex128, n int, beside ...[]complex128) {
	v, dots := make([]complex128, n), make([]complex128, n)
	for k := 0; k+2 < n; k++ {
		norm := 0.0
		for i := k + 1; i < n; i++ {
			norm = math.Hypot(norm, cmplx.Abs(a[i*n+k]))
		}
		below := 0.0
		for i := k + 2; i < n; i++ {
			below = math.Hypot(below, cmplx.Abs(a[i*n+k]))
		}
		if below == 0 {
			continue
		}
		head := a[(k+1)*n+k]
		phase := complex(1, 0)
		if head != 0 {
			phase = head / complex(cmplx.Abs(head), 0)
		}
		// v = x + phase·‖x‖·e₁; the sum has no cancellation.
		length := 0.0
		for i := k + 1; i < n; i++ {
			v[i] = a[i*n+k]
			if i == k+1 {
				v[i] += phase * complex(norm, 0)
			}
			length += sq(real(v[i])) + sq(imag(v[i]))
		}
		beta := complex(2/length, 0)
		clear(dots[k:])
		for i := k + 1; i < n; i++ { // A ← P A, by rows
			c := cmplx.Conj(v[i])
			row := a[i*n : i*n+n]
			for j := k; j < n; j++ {
				dots[j] += c * row[j]
			}
		}
		for i := k + 1; i < n; i++ {
			f := beta * v[i]
			row := a[i*n : i*n+n]
			for j := k; j < n; j++ {
				row[j] -= f * dots[j]
			}
		}
		for _, m := range append([][]complex128{a}, beside...) { // A ← A P, Q ← Q P
			for i := range n {
				row := m[i*n : i*n+n]
				var dot complex128
				for j := k + 1; j < n; j++ {
					dot += row[j] * v[j]
				}
				dot *= beta
				for j := k + 1; j < n; j++ {
					row[j] -= dot * cmplx.Conj(v[j])
				}
			}
		}
		for i := k + 2; i < n; i++ {
			a[i*n+k] = 0
		}
	}
}

// turn gives Qᴴ x.
func (r *hessenberg) turn(x []complex128) []complex128 {
	out := make([]complex128, r.n)
	for i, xi := range x {
		row := r.q[i*r.n : i*r.n+r.n]
		for j, qij := range row {
			out[j] += cmplx.Conj(qij) * xi
		}
	}
	return out
}

// turnBack gives Q x.
func (r *hessenberg) turnBack(x []complex128) []complex128 {
	out := make([]complex128, r.n)
	for i := range r.n {
		row := r.q[i*r.n : i*r.n+r.n]
		var sum complex128
		for j, qij := range row {
			sum += qij * x[j]
		}
		out[i] = sum
	}
	return out
}

// solve overwrites each right-hand side x with (H − shift·I)⁻¹ x, by
// elimination with partial pivoting in the scratch matrix work (n² long). It
// reports false when the matrix is singular.
func (r *hessenberg) solve(shift float64, work []complex128, sides ...[]complex128) bool {
	return r.solveAt(complex(shift, 0), work, sides...)
}

// solveAt is solve with a complex shift.
func (r *hessenberg) solveAt(shift complex128, work []complex128, sides ...[]complex128) bool {
	n := r.n
	copy(work, r.h)
	for i := range n {
		work[i*n+i] -= shift
	}
	for k := range n {
		row := work[k*n : k*n+n]
		if k+1 < n {
			next := work[(k+1)*n : (k+1)*n+n]
			if size(next[k]) > size(row[k]) {
				for j := k; j < n; j++ {
					row[j], next[j] = next[j], row[j]
				}
				for _, x := range sides {
					x[k], x[k+1] = x[k+1], x[k]
				}
			}
			if next[k] != 0 {
				f := next[k] / row[k]
				for j := k + 1; j < n; j++ {
					next[j] -= f * row[j]
				}
				for _, x := range sides {
					x[k+1] -= f * x[k]
				}
			}
		}
		if row[k] == 0 {
			return false
		}
	}
	backward(work, n, sides)
	return true
}

// factorSolve overwrites a with its factors and each x with a⁻¹ x, by
// elimination with partial pivoting.
func factorSolve(a []complex128, n int, sides ...[]complex128) bool {
	for k := range n {
		p := k
		for i := k + 1; i < n; i++ {
			if size(a[i*n+k]) > size(a[p*n+k]) {
				p = i
			}
		}
		row := a[k*n : k*n+n]
		if p != k {
			other := a[p*n : p*n+n]
			for j := k; j < n; j++ {
				row[j], other[j] = other[j], row[j]
			}
			for _, x := range sides {
				x[k], x[p] = x[p], x[k]
			}
		}
		if row[k] == 0 {
			return false
		}
		inverse := 1 / row[k]
		for i := k + 1; i < n; i++ {
			below := a[i*n : i*n+n]
			if below[k] == 0 {
				continue
			}
			f := below[k] * inverse
			takeAway(below[k+1:], f, row[k+1:])
			for _, x := range sides {
				x[i] -= f * x[k]
			}
		}
	}
	backward(a, n, sides)
	return true
}

// eliminate overwrites the columns from n on of an n×width matrix, row-major, with the solutions of the
// equations that its first n columns are the matrix of, by elimination with partial pivoting. It is
// for few unknowns and many sides.
func eliminate(a []complex128, n, width int) bool {
	for k := range n {
		p := k
		for i := k + 1; i < n; i++ {
			if size(a[i*width+k]) > size(a[p*width+k]) {
				p = i
			}
		}
		row := a[k*width : (k+1)*width]
		if p != k {
			other := a[p*width : (p+1)*width]
			for j := k; j < width; j++ {
				row[j], other[j] = other[j], row[j]
			}
		}
		if row[k] == 0 {
			return false
		}
		inverse := 1 / row[k]
		for j := k + 1; j < width; j++ {
			row[j] *= inverse
		}
		for i := k + 1; i < n; i++ {
			below := a[i*width : (i+1)*width]
			if f := below[k]; f != 0 {
				takeAway(below[k+1:], f, row[k+1:])
			}
		}
	}
	for k := n - 1; k > 0; k-- {
		row := a[k*width+n : (k+1)*width]
		for i := range k {
			takeAway(a[i*width+n:(i+1)*width], a[i*width+k], row)
		}
	}
	return true
}

// takeAway subtracts f times the first numbers of from.
func takeAway(x []complex128, f complex128, from []complex128) {
	n := len(x)
	cblas128.Axpy(-f, cblas128.Vector{N: n, Inc: 1, Data: from[:n]}, cblas128.Vector{N: n, Inc: 1, Data: x})
}

func backward(upper []complex128, n int, sides [][]complex128) {
	for i := n - 1; i >= 0; i-- {
		row := upper[i*n : i*n+n]
		inverse := 1 / row[i]
		for _, x := range sides {
			sum := x[i]
			for j := i + 1; j < n; j++ {
				sum -= row[j] * x[j]
			}
			x[i] = sum * inverse
		}
	}
}

// size is a cheap norm to choose pivots by.
func size(z complex128) float64 { return math.Abs(real(z)) + math.Abs(imag(z)) }
