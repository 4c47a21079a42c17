package dense

// Products of blocks of long vectors are cut into pieces of this length, each summed by one goroutine. The length is
// fixed so that sums do not depend on the number of threads.
const pieceLength = 2048

// Gram computes the m by n matrix G = X·Yᵀ of the inner products of m vectors X and n vectors Y, each of length k and
// stored one after another.
func Gram(m, n, k int, x, y, g []float64, threads int) {
	if m < 0 || n < 0 || k < 0 || len(x) < m*k || len(y) < n*k || len(g) < m*n {
		panic("dense: Gram: bad shape")
	}
	if m == 0 || n == 0 {
		return
	}
	pieces := (k + pieceLength - 1) / pieceLength
	parts := make([]float64, pieces*m*n)
	Parallel(threads, pieces, func(t int) {
		p := t * pieceLength
		SubMulT(m, n, min(pieceLength, k-p), x[p:], k, y[p:], k, parts[t*m*n:], n)
	})
	g = g[:m*n]
	clear(g)
	for t := range pieces {
		for i, v := range parts[t*m*n:][:m*n] {
			g[i] -= v
		}
	}
}

// AddCombined computes Y += C·X for m vectors Y and n vectors X of length k stored one after another, with the m by n
// coefficients C times sign.
func AddCombined(m, n, k int, sign float64, c, x, y []float64, threads int) {
	if m < 0 || n < 0 || k < 0 || len(x) < n*k || len(y) < m*k || len(c) < m*n {
		panic("dense: AddCombined: bad shape")
	}
	if m == 0 || n == 0 {
		return
	}
	const piece = 512
	Parallel(threads, (k+piece-1)/piece, func(t int) {
		p := t * piece
		addCombined(m, n, k, min(piece, k-p), sign, c, x[p:], y[p:])
	})
}

// Rotate replaces n vectors X of length k, stored one after another, by the m ≤ n combinations C·X, C being m by n. The
// first m vectors of X hold the result; the others are left as they were.
func Rotate(m, n, k int, c, x []float64, threads int) {
	if m < 0 || m > n || k < 0 || len(x) < n*k || len(c) < m*n {
		panic("dense: Rotate: bad shape")
	}
	if m == 0 {
		return
	}
	const piece = 256
	Parallel(threads, (k+piece-1)/piece, func(t int) {
		p := t * piece
		length := min(piece, k-p)
		old := make([]float64, n*length)
		for j := range n {
			copy(old[j*length:][:length], x[j*k+p:])
		}
		result := make([]float64, m*length)
		addCombined(m, n, length, length, 1, c, old, result)
		for i := range m {
			copy(x[i*k+p:][:length], result[i*length:])
		}
	})
}

// addCombined works on pieces of vectors that are stride apart: two results and four terms at a time.
func addCombined(m, n, stride, length int, sign float64, c, x, y []float64) {
	i := 0
	for ; i+2 <= m; i += 2 {
		y0, y1 := y[i*stride:][:length], y[(i+1)*stride:][:length]
		c0, c1 := c[i*n:][:n], c[(i+1)*n:][:n]
		j := 0
		for ; j+4 <= n; j += 4 {
			x0 := x[j*stride:][:len(y0)]
			x1 := x[(j+1)*stride:][:len(y0)]
			x2 := x[(j+2)*stride:][:len(y0)]
			x3 := x[(j+3)*stride:][:len(y0)]
			y1 := y1[:len(y0)]
			a0, a1, a2, a3 := sign*c0[j], sign*c0[j+1], sign*c0[j+2], sign*c0[j+3]
			b0, b1, b2, b3 := sign*c1[j], sign*c1[j+1], sign*c1[j+2], sign*c1[j+3]
			for p := range y0 {
				u0, u1, u2, u3 := x0[p], x1[p], x2[p], x3[p]
				y0[p] += (a0*u0 + a1*u1) + (a2*u2 + a3*u3)
				y1[p] += (b0*u0 + b1*u1) + (b2*u2 + b3*u3)
			}
		}
		for ; j < n; j++ {
			x0 := x[j*stride:][:len(y0)]
			y1 := y1[:len(y0)]
			a, b := sign*c0[j], sign*c1[j]
			for p := range y0 {
				y0[p] += a * x0[p]
				y1[p] += b * x0[p]
			}
		}
	}
	if i < m {
		y0 := y[i*stride:][:length]
		for j, a := range c[i*n:][:n] {
			x0 := x[j*stride:][:len(y0)]
			a *= sign
			for p := range y0 {
				y0[p] += a * x0[p]
			}
		}
	}
}
