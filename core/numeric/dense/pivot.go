package dense

import "math"

// Pivots describes how Pivoted went. Row k of the permuted matrix was row Perm[k] of the given one.
type Pivots struct {
	// Done is the number of leading columns eliminated. It is less than the order when a column was put off (see
	// Pivoted) or when a pivot failed.
	Done int
	// Failed is set when no acceptable pivot was left; the offending row is the one at position Done.
	Failed bool
	Perm   []int
	// D and E describe the block diagonal factor: D[k] is its diagonal, and E[k] not zero says that k and k+1 form a
	// block of two with off-diagonal E[k].
	D, E []float64
}

// growthBound is (1+√17)/8, the ratio of Bunch and Kaufman that makes one step of order two grow entries no more than
// two steps of order one do.
var growthBound = (1 + math.Sqrt(17)) / 8

// Pivoted factorises a symmetric matrix of order n in place, P·A·Pᵀ = L·D·Lᵀ with D of blocks of order one and two, by
// diagonal pivoting (J. R. Bunch and L. Kaufman, Some stable methods for calculating inertia and solving symmetric
// linear systems, Math. Comp. 31, 1977). The lower triangle of a is overwritten by L (ones on the diagonal not
// stored) in the permuted order.
//
// A pivot block fails when it is not finite or when its magnitude (the smaller eigenvalue for a block of two) is not
// above least. When defer is true and the last remaining column is alone and smaller than deferBelow, it is left for
// the caller to eliminate together with other columns: a pivot of order one that has no partner to choose from.
//
// pv must have room: its slices are resliced to n and overwritten.
func Pivoted(n int, a []float64, lda int, least, deferBelow float64, pv *Pivots) {
	if n < 0 || lda < n {
		panic("dense: Pivoted: bad shape")
	}
	pv.Perm, pv.D, pv.E = pv.Perm[:n], pv.D[:n], pv.E[:n]
	pv.Done, pv.Failed = 0, false
	for i := range n {
		pv.Perm[i], pv.D[i], pv.E[i] = i, 0, 0
	}
	for k := 0; k < n; {
		p, two := choose(n, k, a, lda)
		if !two {
			d := math.Abs(a[p*lda+p])
			if k == n-1 && k > 0 && d < deferBelow {
				return
			}
			if !(d > least) || math.IsInf(d, 0) {
				swap(n, k, p, a, lda, pv.Perm)
				pv.Failed = true
				return
			}
			swap(n, k, p, a, lda, pv.Perm)
			eliminateOne(n, k, a, lda)
			pv.D[k] = a[k*lda+k]
			k++
			pv.Done = k
			continue
		}
		swap(n, k+1, p, a, lda, pv.Perm)
		d0, d1, e := a[k*lda+k], a[(k+1)*lda+k+1], a[(k+1)*lda+k]
		if s := SmallerOfTwo(d0, d1, e); !(s > least) || math.IsInf(s, 0) {
			pv.Failed = true
			return
		}
		eliminateTwo(n, k, a, lda)
		pv.D[k], pv.D[k+1], pv.E[k] = d0, d1, e
		a[(k+1)*lda+k] = 0
		k += 2
		pv.Done = k
	}
}

// SmallerOfTwo is the smaller magnitude of the two eigenvalues of [d0 e; e d1], from the determinant so that nothing
// cancels.
func SmallerOfTwo(d0, d1, e float64) float64 {
	mean, half := (d0+d1)/2, (d0-d1)/2
	larger := math.Abs(mean) + math.Hypot(half, e)
	if larger == 0 {
		return 0
	}
	return math.Abs((d0/larger)*d1 - (e/larger)*e)
}

// choose returns the row to be moved next, and whether a pivot of order two is to be formed by it and row k.
func choose(n, k int, a []float64, lda int) (int, bool) {
	akk := math.Abs(a[k*lda+k])
	r, colMax := k, 0.0
	for i := k + 1; i < n; i++ {
		if v := math.Abs(a[i*lda+k]); v > colMax {
			r, colMax = i, v
		}
	}
	if akk >= growthBound*colMax || math.IsNaN(akk) {
		return k, false
	}
	rowMax := 0.0
	for j := k; j < r; j++ {
		rowMax = math.Max(rowMax, math.Abs(a[r*lda+j]))
	}
	for i := r + 1; i < n; i++ {
		rowMax = math.Max(rowMax, math.Abs(a[i*lda+r]))
	}
	switch {
	case akk*rowMax >= growthBound*colMax*colMax:
		return k, false
	case math.Abs(a[r*lda+r]) >= growthBound*rowMax:
		return r, false
	}
	return r, true
}

// swap exchanges rows and columns p and q of the symmetric matrix, finished columns included.
func swap(n, p, q int, a []float64, lda int, perm []int) {
	if p == q {
		return
	}
	SwapSymmetric(n, n, p, q, a, lda)
	perm[p], perm[q] = perm[q], perm[p]
}

// SwapSymmetric exchanges rows p < q and columns p < q < n of a trapezoid of m rows and n columns that holds the lower
// part of a symmetric matrix.
func SwapSymmetric(m, n, p, q int, a []float64, lda int) {
	if p > q || q >= n || n > m || lda < n {
		panic("dense: SwapSymmetric: bad shape")
	}
	rp, rq := a[p*lda:], a[q*lda:]
	for j := range p {
		rp[j], rq[j] = rq[j], rp[j]
	}
	for i := p + 1; i < q; i++ {
		a[i*lda+p], rq[i] = rq[i], a[i*lda+p]
	}
	rp[p], rq[q] = rq[q], rp[p]
	for i := q + 1; i < m; i++ {
		a[i*lda+p], a[i*lda+q] = a[i*lda+q], a[i*lda+p]
	}
}

func eliminateOne(n, k int, a []float64, lda int) {
	inv := 1 / a[k*lda+k]
	for i := k + 1; i < n; i++ {
		row := a[i*lda:]
		f := row[k] * inv
		if f == 0 {
			continue
		}
		// Column k above row i already holds multipliers; their products with the pivot are the entries needed.
		g := row[k]
		for j := k + 1; j < i; j++ {
			row[j] -= g * a[j*lda+k]
		}
		row[i] -= g * f
		row[k] = f
	}
}

func eliminateTwo(n, k int, a []float64, lda int) {
	d0, d1, e := a[k*lda+k], a[(k+1)*lda+k+1], a[(k+1)*lda+k]
	for i := k + 2; i < n; i++ {
		row := a[i*lda:]
		u, v := row[k], row[k+1]
		f, g := SolveTwo(d0, d1, e, u, v)
		for j := k + 2; j < i; j++ {
			row[j] -= u*a[j*lda+k] + v*a[j*lda+k+1]
		}
		row[i] -= u*f + v*g
		row[k], row[k+1] = f, g
	}
}

// SolveTwo solves [d0 e; e d1]·x = [u v] for a block of order two chosen by Pivoted, whose off-diagonal e is its
// largest entry.
func SolveTwo(d0, d1, e, u, v float64) (float64, float64) {
	p, q := d0/e, d1/e
	t := 1 / (p*q - 1)
	return t * (q*u - v) / e, t * (p*v - u) / e
}
