package dense

import (
	"math"
	"math/rand/v2"
	"testing"
)

// Every shape of tile, both ways of storing A, strides with room between, in assembly as in Go. Around the tile of C
// nothing may change, and what lies beyond the operands must not be read.
func TestStripAgreesWithSums(t *testing.T) {
	eachLevel(t, func(t *testing.T, fused bool) {
		r := rand.New(rand.NewPCG(2, 1))
		for m := range 29 {
			for cols := 0; cols <= Columns; cols++ {
				for _, depth := range []int{0, 1, 2, 7, 40} {
					for _, s := range [][4]int{{depth + 1, 1, Columns, Columns}, {1, m + 2, cols + 3, cols + 1}} {
						checkStrip(t, r, m, cols, depth, s[0], s[1], s[2], s[3], fused)
					}
				}
			}
		}
	})
}

func checkStrip(t *testing.T, r *rand.Rand, m, cols, depth, ars, acs, bs, ldc int, fused bool) {
	t.Helper()
	size := func(rows, rs, cols, cs int) int {
		if rows == 0 || cols == 0 {
			return 0
		}
		return (rows-1)*rs + (cols-1)*cs + 1
	}
	exact := func(n int) []float64 { return random(r, n+1)[:n:n] } // ends in a number, never in a NaN
	a, b := exact(size(m, ars, depth, acs)), exact(size(depth, bs, cols, 1))
	c := make([]float64, m*ldc+5)
	for i := range c {
		c[i] = r.Float64()
	}
	got := append([]float64(nil), c...)
	Strip(m, cols, depth, a, ars, acs, b, bs, got[:max(0, size(m, ldc, cols, 1))], ldc)
	for i, v := range c {
		row, j := i/ldc, i%ldc
		want := v
		for p := 0; p < depth && row < m && j < cols; p++ {
			want = math.FMA(-a[row*ars+p*acs], b[p*bs+j], want)
		}
		// Assembly rounds once for each term; Go may or may not.
		if tol := 1e-15 * float64(depth); !fused && math.Abs(got[i]-want) > tol || fused && got[i] != want {
			t.Fatalf("m %d cols %d depth %d strides %d %d %d %d entry (%d, %d): %g, want %g", m, cols, depth, ars, acs, bs, ldc, row, j, got[i], want)
		}
	}
}

func TestPanelsHoldTranspose(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 2))
	var p Panels
	for _, s := range [][2]int{{17, 5}, {3, 9}, {8, 1}, {16, 0}, {0, 4}} {
		n, k := s[0], s[1]
		b := random(r, n*(k+1))
		p.Pack(n, k, b, k+1)
		for j := range (n + Columns - 1) / Columns * Columns {
			for q := range k {
				want := 0.0
				if j < n {
					want = b[j*(k+1)+q]
				}
				if got := p.panel(j / Columns * Columns)[q*Columns+j%Columns]; got != want {
					t.Fatalf("%v: row %d entry %d is %g, want %g", s, j, q, got, want)
				}
			}
		}
	}
}

func TestSubMulAgreesWithSubMulT(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 3))
	for _, s := range append(shapes, [3]int{30, 20, 600}) {
		m, n, k := s[0], s[1], s[2]
		a, b, c := random(r, m*k), random(r, n*k), random(r, m*n)
		want := append([]float64(nil), c...)
		SubMulT(m, n, k, a, k, b, k, want, n)
		var p Panels
		p.Pack(n, k, b, k)
		SubMul(m, a, k, &p, c, n)
		for i := range c {
			if c[i] != want[i] {
				t.Fatalf("shape %v entry %d: %g, want %g", s, i, c[i], want[i])
			}
		}
	}
	const n, k = 37, 300
	a, c := random(r, n*k), random(r, n*n)
	whole := append([]float64(nil), c...)
	var p Panels
	p.Pack(n, k, a, k)
	SubMul(n, a, k, &p, whole, n)
	for _, cut := range [][2]int{{0, 5}, {5, 29}, {29, n}} {
		SubMulLower(cut[0], cut[1], a, k, &p, c, n)
	}
	for i := range n {
		for j := range i + 1 {
			if c[i*n+j] != whole[i*n+j] {
				t.Fatalf("entry (%d, %d): %g, want %g", i, j, c[i*n+j], whole[i*n+j])
			}
		}
	}
}
