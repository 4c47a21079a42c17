package dense

// Lines of an operand that SubMulT keeps in the first-level cache, and the depth to which it does so: 32 rows of 128
// numbers are 32 KiB.
const (
	cacheRows  = 32
	cacheDepth = 128
)

// SubMulT computes C -= A·Bᵀ with C of m by n, A of m by k and B of n by k.
func SubMulT(m, n, k int, a []float64, lda int, b []float64, ldb int, c []float64, ldc int) {
	if m < 0 || n < 0 || k < 0 || lda < k || ldb < k || ldc < n {
		panic("dense: SubMulT: bad shape")
	}
	if m == 0 || n == 0 {
		return
	}
	for p := 0; p < k; p += cacheDepth {
		depth := min(cacheDepth, k-p)
		for j := 0; j < n; j += cacheRows {
			cols := min(cacheRows, n-j)
			subMulT(m, cols, depth, a[p:], lda, b[j*ldb+p:], ldb, c[j:], ldc)
		}
	}
}

// SubMulTLower is SubMulT for a square C of n by n whose lower triangle alone is wanted. Some entries above the
// diagonal, in tiles that touch it, are overwritten with numbers of no meaning.
func SubMulTLower(n, k int, a []float64, lda int, b []float64, ldb int, c []float64, ldc int) {
	const tile = 6
	if n < 0 || k < 0 || lda < k || ldb < k || ldc < n {
		panic("dense: SubMulTLower: bad shape")
	}
	for j := 0; j < n; j += tile {
		cols := min(tile, n-j)
		SubMulT(n-j, cols, k, a[j*lda:], lda, b[j*ldb:], ldb, c[j*ldc+j:], ldc)
	}
}

// subMulT is SubMulT for operands that fit the cache: tiles of 3 by 2, what is left row by row.
func subMulT(m, n, k int, a []float64, lda int, b []float64, ldb int, c []float64, ldc int) {
	i := 0
	for ; i+3 <= m; i += 3 {
		a0 := a[i*lda:][:k]
		a1 := a[(i+1)*lda:][:len(a0)]
		a2 := a[(i+2)*lda:][:len(a0)]
		r0 := c[i*ldc:][:n]
		r1 := c[(i+1)*ldc:][:n]
		r2 := c[(i+2)*ldc:][:n]
		j := 0
		for ; j+2 <= n; j += 2 {
			b0 := b[j*ldb:][:len(a0)]
			b1 := b[(j+1)*ldb:][:len(a0)]
			var s00, s10, s20, s01, s11, s21 float64
			for p := range a0 {
				x, y := b0[p], b1[p]
				v := a0[p]
				s00 += v * x
				s01 += v * y
				v = a1[p]
				s10 += v * x
				s11 += v * y
				v = a2[p]
				s20 += v * x
				s21 += v * y
			}
			r0[j] -= s00
			r0[j+1] -= s01
			r1[j] -= s10
			r1[j+1] -= s11
			r2[j] -= s20
			r2[j+1] -= s21
		}
		if j < n {
			b0 := b[j*ldb:][:len(a0)]
			var s0, s1, s2 float64
			for p, x := range b0 {
				s0 += a0[p] * x
				s1 += a1[p] * x
				s2 += a2[p] * x
			}
			r0[j] -= s0
			r1[j] -= s1
			r2[j] -= s2
		}
	}
	for ; i < m; i++ {
		subRow(n, a[i*lda:][:k], b, ldb, c[i*ldc:][:n])
	}
}

// subRow is subMulT for one row.
func subRow(n int, a, b []float64, ldb int, c []float64) {
	j := 0
	for ; j+4 <= n; j += 4 {
		b0 := b[j*ldb:][:len(a)]
		b1 := b[(j+1)*ldb:][:len(a)]
		b2 := b[(j+2)*ldb:][:len(a)]
		b3 := b[(j+3)*ldb:][:len(a)]
		var s0, s1, s2, s3 float64
		for p, v := range a {
			s0 += v * b0[p]
			s1 += v * b1[p]
			s2 += v * b2[p]
			s3 += v * b3[p]
		}
		c[j] -= s0
		c[j+1] -= s1
		c[j+2] -= s2
		c[j+3] -= s3
	}
	for ; j < n; j++ {
		b0 := b[j*ldb:][:len(a)]
		s := 0.0
		for p, v := range a {
			s += v * b0[p]
		}
		c[j] -= s
	}
}

// SolveLowerT solves X·Lᵀ = B in place for the m rows of B (m by n), L being lower triangular of n by n with ones on
// the diagonal, which are not read.
func SolveLowerT(m, n int, l []float64, ldl int, b []float64, ldb int) {
	const tile = 8
	if m < 0 || n < 0 || ldl < n || ldb < n {
		panic("dense: SolveLowerT: bad shape")
	}
	for j := 0; j < n; j += tile {
		cols := min(tile, n-j)
		if j > 0 {
			subMulT(m, cols, j, b, ldb, l[j*ldl:], ldl, b[j:], ldb)
		}
		for i := range m {
			x := b[i*ldb+j:][:cols]
			for q := 1; q < cols; q++ {
				row := l[(j+q)*ldl+j:][:q]
				s := x[q]
				for p, v := range row {
					s -= v * x[p]
				}
				x[q] = s
			}
		}
	}
}
