package eigen

import (
	"math"
	"slices"
	"time"

	"hushframe/core/numeric/dense"
)

// basis is a set of M-orthonormal vectors, stored one after another.
type basis struct {
	p *pencil
	n int
	v []float64
	// count vectors of v are in use.
	count int
	// tail is M times the vectors appended last.
	tail []float64
	// negative is an unknown in a vector whose square in the norm of M came out negative by more than rounding, or -1.
	negative int
}

func newBasis(p *pencil, room int) *basis {
	return &basis{p: p, n: p.order(), v: make([]float64, room*p.order()), negative: -1}
}

func (b *basis) vectors() []float64 { return b.v[:b.count*b.n] }

// negligible is the part of a vector that survives a projection only as rounding error.
const negligible = 1e-13

// append makes count vectors w orthogonal to the basis and to one another and appends what is left of them. It returns
// which were kept, the coefficients along the old vectors (old by count), and those along the new ones (kept by count):
// w = V·c + Q·r up to what is negligible. mw is M·w, or nil when it is not known. w is used as scratch.
//
// Projections are done twice ("twice is enough": W. Kahan in B. Parlett, The Symmetric Eigenvalue Problem): what one
// leaves along the old vectors is their own want of orthogonality times the part it removed, and would grow from step to
// step. The first is on the vectors from the given one on; when w has hardly anything along those before, as the
// recurrence of Lanczos promises, the second serves them as well. Both are repeated when the vectors of the block turn
// out to be nearly dependent.
func (b *basis) append(w, mw []float64, count, from int) (keep []int, c, r []float64) {
	defer since(time.Now(), &b.p.stats.OrthogonalSeconds)
	n, old := b.n, b.count
	c = make([]float64, old*count)
	if cap(b.tail) < count*n {
		b.tail = make([]float64, count*n)
	}
	z := b.tail[:count*n]
	if mw == nil {
		b.p.mass(z, w, count)
	} else {
		copy(z, mw)
	}
	before := make([]float64, count)
	dense.Parallel(b.p.threads, count, func(i int) { before[i] = inner(w[i*n:][:n], z[i*n:][:n]) })
	for i, square := range before {
		if square < 0 && b.negative < 0 {
			b.negative = mostNegative(w[i*n:][:n], z[i*n:][:n])
		}
		before[i] = math.Sqrt(max(0, square))
	}
	b.project(w, z, count, from, c)
	b.project(w, z, count, 0, c)
	keep, r, shrunk := b.orthonormalise(w, z, count, before)
	for pass := 0; shrunk && pass < 3; pass++ {
		if old == 0 {
			b.p.mass(z, w, len(keep)) // the subtractions have left rounding errors in it
		}
		b.project(w, z, len(keep), 0, make([]float64, old*len(keep)))
		var again []int
		var r2 []float64
		again, r2, shrunk = b.orthonormalise(w, z, len(keep), slices.Repeat([]float64{1}, len(keep)))
		r = product(r2, r, len(again), len(keep), count)
		for i, k := range again {
			again[i] = keep[k]
		}
		keep = again
	}
	copy(b.v[old*n:], w[:len(keep)*n])
	b.count += len(keep)
	b.tail = z[:len(keep)*n]
	return keep, c, r
}

// project subtracts from w its part along the vectors from the given one on, adds the coefficients to c and renews z =
// M·w.
func (b *basis) project(w, z []float64, count, from int, c []float64) {
	old := b.count - from
	if old == 0 || count == 0 {
		return
	}
	v := b.v[from*b.n:]
	g := make([]float64, old*count)
	dense.Gram(old, count, b.n, v, z, g, b.p.threads)
	t := make([]float64, len(g))
	for i := range old {
		for j := range count {
			c[(from+i)*count+j] += g[i*count+j]
			t[j*old+i] = g[i*count+j]
		}
	}
	dense.AddCombined(count, old, b.n, -1, t, v, w, b.p.threads)
	b.p.mass(z, w, count)
}

// orthonormalise makes vectors w (with z = M·w) M-orthonormal in place, moving those kept to the front. before are sizes
// that the vectors once had, against which what is left of them is judged. It returns which were kept, the coefficients
// r (kept by count), and whether some kept vector lost so much that its rounding errors matter.
//
// It does so by one or two Cholesky factorisations of the Gram matrix (Y. Yamamoto, Y. Nakatsukasa, Y. Yanagisawa, T. Fukaya,
// Roundoff error analysis of the CholeskyQR2 algorithm, Electron. Trans. Numer. Anal. 44, 2015), or vector by vector when
// they are too dependent for that.
func (b *basis) orthonormalise(w, z []float64, count int, before []float64) (keep []int, r []float64, shrunk bool) {
	n := b.n
	g := make([]float64, count*count)
	dense.Gram(count, count, n, w, z, g, b.p.threads)
	for i := range count {
		if !(math.Sqrt(max(0, g[i*count+i])) > 1e-6*before[i]) {
			return b.gramSchmidt(w, z, count, before)
		}
		keep = append(keep, i)
	}
	least, ok := cholesky(g, count)
	if !ok || least < 1e-5 {
		return b.gramSchmidt(w, z, count, before)
	}
	b.divide(w, z, g, count)
	first := dense.Transposed(g, count)
	again := make([]float64, count*count)
	dense.Gram(count, count, n, w, z, again, b.p.threads)
	if fromIdentity(again, count) < 1e-13 {
		return keep, first, least < 1e-2
	}
	part, ok := cholesky(again, count)
	if !ok || part < 0.9 {
		// Rounding errors along null vectors of M have swamped the products.
		keep, r, _ = b.gramSchmidt(w, z, count, slices.Repeat([]float64{1}, count))
		return keep, product(r, first, len(keep), count, count), true
	}
	b.divide(w, z, again, count)
	return keep, product(dense.Transposed(again, count), first, count, count, count), least < 1e-2
}

// fromIdentity is the largest magnitude of an entry of a-1.
func fromIdentity(a []float64, n int) (largest float64) {
	for i, v := range a {
		if i%(n+1) == 0 {
			v--
		}
		largest = max(largest, math.Abs(v))
	}
	return largest
}

// divide replaces w and z by L⁻¹ times them.
func (b *basis) divide(w, z, l []float64, count int) {
	inverse := make([]float64, count*count)
	for j := range count {
		inverse[j*count+j] = 1 / l[j*count+j]
		for i := j + 1; i < count; i++ {
			s := 0.0
			for k := j; k < i; k++ {
				s -= l[i*count+k] * inverse[k*count+j]
			}
			inverse[i*count+j] = s / l[i*count+i]
		}
	}
	dense.Rotate(count, count, b.n, inverse, w, b.p.threads)
	dense.Rotate(count, count, b.n, inverse, z, b.p.threads)
}

// cholesky overwrites the lower triangle of g by its factor and the rest by zeros. It returns the least part of a vector
// that those before it leave, and whether the matrix is positive definite.
func cholesky(g []float64, n int) (least float64, ok bool) {
	least = 1
	for i := range n {
		for j := range i + 1 {
			s := g[i*n+j]
			for k := range j {
				s -= g[i*n+k] * g[j*n+k]
			}
			if j < i {
				g[i*n+j] = s / g[j*n+j]
				continue
			}
			if !(s > 0) {
				return 0, false
			}
			least = min(least, math.Sqrt(s/g[i*n+i]))
			g[i*n+i] = math.Sqrt(s)
		}
		clear(g[i*n+i+1 : (i+1)*n])
	}
	return least, true
}

// gramSchmidt is orthonormalise for vectors that may depend on one another.
func (b *basis) gramSchmidt(w, z []float64, count int, before []float64) (keep []int, r []float64, shrunk bool) {
	n := b.n
	full := make([]float64, count*count)
	for i := range count {
		wi, zi := w[i*n:][:n], z[i*n:][:n]
		start := norm(wi, zi)
		for range 2 {
			for k := range keep {
				wk, zk := w[k*n:][:n], z[k*n:][:n]
				s := inner(wk, zi)
				full[k*count+i] += s
				for p := range wi {
					wi[p] -= s * wk[p]
					zi[p] -= s * zk[p]
				}
			}
		}
		square := inner(wi, zi)
		if square < -1e-10*before[i]*before[i] && b.negative < 0 {
			b.negative = mostNegative(wi, zi)
		}
		size := math.Sqrt(max(0, square))
		if !(size > negligible*before[i]) {
			continue
		}
		if size < 1e-2*start || size < 1e-6*before[i] {
			shrunk = true
		}
		k := len(keep)
		full[k*count+i] = size
		wk, zk := w[k*n:][:n], z[k*n:][:n]
		for p := range wi {
			wk[p], zk[p] = wi[p]/size, zi[p]/size
		}
		keep = append(keep, i)
	}
	return keep, full[:len(keep)*count], shrunk
}

// inner is the inner product, in four interleaved sums.
func inner(x, y []float64) float64 {
	var s0, s1, s2, s3 float64
	y = y[:len(x)]
	i := 0
	for ; i+4 <= len(x); i += 4 {
		s0 += x[i] * y[i]
		s1 += x[i+1] * y[i+1]
		s2 += x[i+2] * y[i+2]
		s3 += x[i+3] * y[i+3]
	}
	for ; i < len(x); i++ {
		s0 += x[i] * y[i]
	}
	return (s0 + s1) + (s2 + s3)
}

// norm is the length of x in the norm of M, given z = M·x.
func norm(x, z []float64) float64 { return math.Sqrt(max(0, inner(x, z))) }

// mostNegative is the unknown with the most negative share in the square of x in the norm of M (z = M·x).
func mostNegative(x, z []float64) int {
	at := 0
	for i := range x {
		if x[i]*z[i] < x[at]*z[at] {
			at = i
		}
	}
	return at
}

// product returns a·b for a of m by k and b of k by n.
func product(a, b []float64, m, k, n int) []float64 {
	out := make([]float64, m*n)
	for i := range m {
		for p := range k {
			for j := range n {
				out[i*n+j] += a[i*k+p] * b[p*n+j]
			}
		}
	}
	return out
}
