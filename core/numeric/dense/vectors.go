package dense

import "sync"

// Products of blocks of long vectors are cut into pieces of this length, each summed by one goroutine; a panel of it
// stays in the first-level cache. The length is fixed so that sums do not depend on the number of threads.
const pieceLength = 512

// Goroutines borrow the memory they work in: as garbage it would outgrow what a search holds.
var (
	panelsPool  = sync.Pool{New: func() any { return new(Panels) }}
	scratchPool = sync.Pool{New: func() any { return new([]float64) }}
)

// borrow returns room for n numbers of no meaning; give the pointer back to scratchPool.
func borrow(n int) (*[]float64, []float64) {
	s := scratchPool.Get().(*[]float64)
	if cap(*s) < n {
		*s = make([]float64, n)
	}
	return s, (*s)[:n]
}

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
	s, parts := borrow(pieces * m * n)
	defer scratchPool.Put(s)
	clear(parts)
	Parallel(threads, pieces, func(t int) {
		p := t * pieceLength
		panels := panelsPool.Get().(*Panels)
		defer panelsPool.Put(panels)
		length := min(pieceLength, k-p)
		panels.Pack(n, length, y[p:], k)
		part := parts[t*m*n:][:m*n]
		for j := 0; j < n; j += Columns {
			Strip(m, min(Columns, n-j), length, x[p:], k, 1, panels.panel(j), Columns, part[j:], n)
		}
	})
	g = g[:m*n]
	clear(g)
	for t := range pieces {
		for i, v := range parts[t*m*n:][:m*n] {
			g[i] -= v
		}
	}
}

// AddCombined computes Y += sign·C·X for m vectors Y and n vectors X of length k stored one after another, with the m by
// n coefficients C.
func AddCombined(m, n, k int, sign float64, c, x, y []float64, threads int) {
	if m < 0 || n < 0 || k < 0 || len(x) < n*k || len(y) < m*k || len(c) < m*n {
		panic("dense: AddCombined: bad shape")
	}
	if m == 0 || n == 0 {
		return
	}
	negated := scaled(-sign, c[:m*n])
	Parallel(threads, (k+pieceLength-1)/pieceLength, func(t int) {
		p := t * pieceLength
		addCombined(m, n, min(pieceLength, k-p), negated, x[p:], k, y[p:], k)
	})
}

func scaled(f float64, c []float64) []float64 {
	out := make([]float64, len(c))
	for i, v := range c {
		out[i] = f * v
	}
	return out
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
	const piece = 128
	negated := scaled(-1, c[:m*n])
	Parallel(threads, (k+piece-1)/piece, func(t int) {
		p := t * piece
		length := min(piece, k-p)
		s, old := borrow(n * length)
		defer scratchPool.Put(s)
		for j := range n {
			copy(old[j*length:][:length], x[j*k+p:])
		}
		for i := range m {
			clear(x[i*k+p:][:length])
		}
		addCombined(m, n, length, negated, old, length, x[p:], k)
	})
}

// addCombined subtracts C·X from pieces of vectors, a few vectors of X at a time so that they are read in streams.
func addCombined(m, n, length int, c, x []float64, strideX int, y []float64, strideY int) {
	const streams = 16
	for j := 0; j < n; j += streams {
		depth := min(streams, n-j)
		for p := 0; p < length; p += Columns {
			Strip(m, min(Columns, length-p), depth, c[j:], n, 1, x[j*strideX+p:], strideX, y[p:], strideY)
		}
	}
}
