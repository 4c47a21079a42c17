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
	if m < 0 || n < 0 || ldl < n || ldb < n {
		panic("dense: SolveLowerT: bad shape")
	}
	var p Panels
	p.Pack(n, n, l, ldl)
	SolveLowerPacked(m, &p, b, ldb)
}

// SolveLowerPacked is SolveLowerT for a packed L.
func SolveLowerPacked(m int, l *Panels, b []float64, ldb int) {
	n := l.N
	if m < 0 || l.K != n || ldb < n {
		panic("dense: SolveLowerPacked: bad shape")
	}
	for j := 0; j < n; j += Columns {
		cols, panel := min(Columns, n-j), l.panel(j)
		Strip(m, cols, j, b, ldb, 1, panel, Columns, b[j:], ldb)
		solveUnit(m, cols, panel[j*Columns:], b[j:], ldb)
	}
}

// solveUnit solves with a diagonal block of up to eight columns: entry (q, p) of it is at 8p+q.
func solveUnit(m, cols int, l, b []float64, ldb int) {
	l = l[:(cols-1)*Columns+cols]
	if cols < Columns {
		for i := range m {
			x := b[i*ldb:][:cols]
			for p := range x {
				for q := p + 1; q < cols; q++ {
					x[q] -= l[p*Columns+q] * x[p]
				}
			}
		}
		return
	}
	for i := range m {
		x := b[i*ldb:][:Columns:Columns]
		x0 := x[0]
		x1 := x[1] - l[1]*x0
		x2 := x[2] - l[2]*x0 - l[10]*x1
		x3 := x[3] - l[3]*x0 - l[11]*x1 - l[19]*x2
		x4 := x[4] - l[4]*x0 - l[12]*x1 - l[20]*x2 - l[28]*x3
		x5 := x[5] - l[5]*x0 - l[13]*x1 - l[21]*x2 - l[29]*x3 - l[37]*x4
		x6 := x[6] - l[6]*x0 - l[14]*x1 - l[22]*x2 - l[30]*x3 - l[38]*x4 - l[46]*x5
		x7 := x[7] - l[7]*x0 - l[15]*x1 - l[23]*x2 - l[31]*x3 - l[39]*x4 - l[47]*x5 - l[55]*x6
		x[1], x[2], x[3], x[4], x[5], x[6], x[7] = x1, x2, x3, x4, x5, x6, x7
	}
}
