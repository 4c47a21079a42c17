package dense

// Panels holds the transpose of a matrix B of N rows and K columns in the order in which products read it: the rows of B
// in groups of eight, the eight entries of each column side by side. The last group is filled up with zeros.
type Panels struct {
	N, K int
	v    []float64
}

// Reset gives the panels a shape. What they hold then is undefined until every row has been set.
func (p *Panels) Reset(n, k int) {
	if n < 0 || k < 0 {
		panic("dense: Panels: bad shape")
	}
	size := (n + Columns - 1) / Columns * Columns * k
	if cap(p.v) < size {
		p.v = make([]float64, size+size/4)
	}
	p.N, p.K, p.v = n, k, p.v[:size]
	if n%Columns > 0 {
		clear(p.v[n/Columns*Columns*k:])
	}
}

// Row returns the place of row j: entry k belongs at index 8k of the slice.
func (p *Panels) Row(j int) []float64 {
	return p.v[j/Columns*Columns*p.K+j%Columns : (j/Columns+1)*Columns*p.K]
}

// panel is the group of eight rows that begins with row j, a multiple of eight.
func (p *Panels) panel(j int) []float64 { return p.v[j*p.K:] }

// Pack fills the panels with B of n by k.
func (p *Panels) Pack(n, k int, b []float64, ldb int) {
	if ldb < k {
		panic("dense: Pack: bad shape")
	}
	p.Reset(n, k)
	if k == 0 {
		return
	}
	for j := range n {
		packRow(p.Row(j), b[j*ldb:][:k])
	}
}

func packRow(to, from []float64) {
	at := 0
	for _, v := range from {
		to[at] = v
		at += Columns
	}
}

// The first-level cache keeps a panel to this depth and some rows of the other operand.
const cacheDepth = 256

// SubMul computes C -= A·Bᵀ with C of m by b.N, A of m by b.K.
func SubMul(m int, a []float64, lda int, b *Panels, c []float64, ldc int) {
	if m < 0 || lda < b.K || ldc < b.N {
		panic("dense: SubMul: bad shape")
	}
	for p := 0; p < b.K; p += cacheDepth {
		depth := min(cacheDepth, b.K-p)
		for j := 0; j < b.N; j += Columns {
			Strip(m, min(Columns, b.N-j), depth, a[p:], lda, 1, b.panel(j)[p*Columns:], Columns, c[j:], ldc)
		}
	}
}

// SubMulLower is SubMul for the rows from..to-1 of a square C whose lower triangle alone is wanted; a and c are A and C
// from row 0 on. Some entries above the diagonal, in tiles that touch it, are overwritten with numbers of no meaning.
func SubMulLower(from, to int, a []float64, lda int, b *Panels, c []float64, ldc int) {
	if from < 0 || to > b.N || lda < b.K || ldc < b.N {
		panic("dense: SubMulLower: bad shape")
	}
	for p := 0; p < b.K; p += cacheDepth {
		depth := min(cacheDepth, b.K-p)
		for j := 0; j < to; j += Columns {
			i := max(from, j)
			Strip(to-i, min(Columns, b.N-j), depth, a[i*lda+p:], lda, 1, b.panel(j)[p*Columns:], Columns, c[i*ldc+j:], ldc)
		}
	}
}

// SubMulT computes C -= A·Bᵀ with C of m by n, A of m by k and B of n by k.
func SubMulT(m, n, k int, a []float64, lda int, b []float64, ldb int, c []float64, ldc int) {
	if m < 0 || n < 0 || k < 0 || lda < k || ldb < k || ldc < n {
		panic("dense: SubMulT: bad shape")
	}
	subMulT(m, n, k, a, lda, b, ldb, c, ldc, false)
}

// SubMulTLower is SubMulT for a square C of n by n whose lower triangle alone is wanted. Some entries above the
// diagonal, in tiles that touch it, are overwritten with numbers of no meaning.
func SubMulTLower(n, k int, a []float64, lda int, b []float64, ldb int, c []float64, ldc int) {
	if n < 0 || k < 0 || lda < k || ldb < k || ldc < n {
		panic("dense: SubMulTLower: bad shape")
	}
	subMulT(n, n, k, a, lda, b, ldb, c, ldc, true)
}

// subMulT packs one panel at a time.
func subMulT(m, n, k int, a []float64, lda int, b []float64, ldb int, c []float64, ldc int, lower bool) {
	var panel [cacheDepth * Columns]float64
	for p := 0; p < k; p += cacheDepth {
		depth := min(cacheDepth, k-p)
		for j := 0; j < n; j += Columns {
			cols, i := min(Columns, n-j), 0
			if lower {
				i = j
			}
			for q := range cols {
				packRow(panel[q:], b[(j+q)*ldb+p:][:depth])
			}
			if i < m {
				Strip(m-i, cols, depth, a[i*lda+p:], lda, 1, panel[:], Columns, c[i*ldc+j:], ldc)
			}
		}
	}
}

// SolveLowerT solves X·Lᵀ = B in place for the m rows of B (m by n), L being lower triangular of n by n with ones on
// the diagonal, which are not read.
func SolveLowerT(m, n int, l []float64, ldl int, b []float64, ldb int) {
	const tile = Columns
	if m < 0 || n < 0 || ldl < n || ldb < n {
		panic("dense: SolveLowerT: bad shape")
	}
	for j := 0; j < n; j += tile {
		cols := min(tile, n-j)
		if j > 0 {
			subMulT(m, cols, j, b, ldb, l[j*ldl:], ldl, b[j:], ldb, false)
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
