package dense

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

func random(r *rand.Rand, n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = 2*r.Float64() - 1
	}
	return x
}

// Shapes around the sizes of tiles and cache blocks.
var shapes = [][3]int{{1, 1, 1}, {4, 2, 8}, {5, 3, 7}, {3, 33, 130}, {9, 65, 129}, {64, 48, 300}, {7, 1, 0}, {0, 4, 3}}

func TestSubMulTAgreesWithSums(t *testing.T) {
	eachLevel(t, func(t *testing.T, _ bool) { subMulTAgreesWithSums(t) })
}

func subMulTAgreesWithSums(t *testing.T) {
	t.Helper()
	r := rand.New(rand.NewPCG(1, 1))
	for _, s := range shapes {
		m, n, k := s[0], s[1], s[2]
		lda, ldb, ldc := k+3, k+1, n+2
		a, b, c := random(r, m*lda), random(r, n*ldb), random(r, m*ldc)
		got := append([]float64(nil), c...)
		SubMulT(m, n, k, a, lda, b, ldb, got, ldc)
		for i := range m {
			for j := range ldc {
				want := c[i*ldc+j]
				for p := 0; p < k && j < n; p++ {
					want -= a[i*lda+p] * b[j*ldb+p]
				}
				if math.Abs(got[i*ldc+j]-want) > 1e-13*float64(k+1) {
					t.Fatalf("shape %v entry (%d, %d): %g, want %g", s, i, j, got[i*ldc+j], want)
				}
			}
		}
	}
}

func TestSubMulTLowerAgreesWithFullProduct(t *testing.T) {
	eachLevel(t, func(t *testing.T, _ bool) { subMulTLowerAgreesWithFullProduct(t) })
}

func subMulTLowerAgreesWithFullProduct(t *testing.T) {
	t.Helper()
	r := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{1, 5, 8, 30, 67} {
		const k = 21
		a, b, c := random(r, n*k), random(r, n*k), random(r, n*n)
		full := append([]float64(nil), c...)
		SubMulTLower(n, k, a, k, b, k, c, n)
		SubMulT(n, n, k, a, k, b, k, full, n)
		for i := range n {
			for j := range i + 1 {
				if math.Abs(c[i*n+j]-full[i*n+j]) > 1e-13 {
					t.Fatalf("n %d entry (%d, %d): %g, want %g", n, i, j, c[i*n+j], full[i*n+j])
				}
			}
		}
	}
}

func TestSolveLowerTInvertsProduct(t *testing.T) {
	eachLevel(t, func(t *testing.T, _ bool) { solveLowerTInvertsProduct(t) })
}

func solveLowerTInvertsProduct(t *testing.T) {
	t.Helper()
	r := rand.New(rand.NewPCG(1, 3))
	for _, n := range []int{1, 7, 8, 9, 48} {
		const m = 13
		l, x := random(r, n*n), random(r, m*n)
		for i := range l {
			l[i] /= float64(n) // keeps the inverse of moderate size
		}
		b := append([]float64(nil), x...)
		for i := range m {
			for j := range n {
				for p := range j {
					b[i*n+j] += l[j*n+p] * x[i*n+p]
				}
			}
		}
		SolveLowerT(m, n, l, n, b, n)
		for i := range x {
			if math.Abs(b[i]-x[i]) > 1e-13 {
				t.Fatalf("n %d: %g, want %g", n, b[i], x[i])
			}
		}
	}
}

// rebuilt multiplies L·D·Lᵀ of the first pv.Done columns.
func rebuilt(n int, a []float64, pv *Pivots) []float64 {
	l := make([]float64, n*n)
	for i := range n {
		l[i*n+i] = 1
		copy(l[i*n:i*n+i], a[i*n:])
	}
	ld := make([]float64, n*n)
	for i := range n {
		for k := 0; k < n; k++ {
			ld[i*n+k] += l[i*n+k] * pv.D[k]
			if pv.E[k] != 0 {
				ld[i*n+k] += l[i*n+k+1] * pv.E[k]
				ld[i*n+k+1] += l[i*n+k] * pv.E[k]
			}
		}
	}
	out := make([]float64, n*n)
	for i := range n {
		for j := range n {
			for k := range n {
				out[i*n+j] += ld[i*n+k] * l[j*n+k]
			}
		}
	}
	return out
}

func newPivots(n int) *Pivots {
	return &Pivots{Perm: make([]int, n), D: make([]float64, n), E: make([]float64, n)}
}

func TestPivotedRebuildsMatrix(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 4))
	twoByTwo := 0
	for n := 1; n <= 20; n++ {
		full := make([]float64, n*n)
		for i := range n {
			for j := range i {
				full[i*n+j] = 2*r.Float64() - 1
				full[j*n+i] = full[i*n+j]
			}
			// Zero diagonals now and then leave nothing but pivots of order two.
			if n%3 != 0 {
				full[i*n+i] = 2*r.Float64() - 1
			}
		}
		a := append([]float64(nil), full...)
		pv := newPivots(n)
		Pivoted(n, a, n, 1e-14, 0, pv)
		if pv.Failed && n == 1 {
			continue // the zero matrix of order one
		}
		if pv.Failed || pv.Done != n {
			t.Fatalf("n %d: failed after %d", n, pv.Done)
		}
		for k := range n {
			if pv.E[k] != 0 {
				twoByTwo++
			}
		}
		got := rebuilt(n, a, pv)
		for i := range n {
			for j := range n {
				want := full[pv.Perm[i]*n+pv.Perm[j]]
				if math.Abs(got[i*n+j]-want) > 1e-12 {
					t.Fatalf("n %d entry (%d, %d): %g, want %g", n, i, j, got[i*n+j], want)
				}
			}
		}
	}
	if twoByTwo == 0 {
		t.Error("no pivot of order two was met")
	}
}

func TestPivotedPutsOffLoneSmallPivot(t *testing.T) {
	a := []float64{1, 0, 1, 1 + 1e-9} // [1 1; 1 1+1e-9] leaves 1e-9
	pv := newPivots(2)
	Pivoted(2, a, 2, 1e-14, 1e-3, pv)
	if pv.Done != 1 || pv.Failed {
		t.Errorf("done %d failed %v, want the second column put off", pv.Done, pv.Failed)
	}
}

func TestPivotedFailsOnSingularAndNaN(t *testing.T) {
	for name, a := range map[string][]float64{
		"dependent": {1, 0, 2, 4}, "zero": {0, 0, 0, 0}, "NaN": {math.NaN(), 0, 1, 1}, "infinite": {math.Inf(1), 0, 0, 1},
	} {
		pv := newPivots(2)
		Pivoted(2, a, 2, 1e-14, 0, pv)
		if !pv.Failed {
			t.Errorf("%s: not refused", name)
		}
	}
}

func TestGramAndCombinationsAgreeWithSums(t *testing.T) {
	eachLevel(t, func(t *testing.T, _ bool) { gramAndCombinationsAgreeWithSums(t) })
}

func gramAndCombinationsAgreeWithSums(t *testing.T) {
	t.Helper()
	r := rand.New(rand.NewPCG(1, 5))
	for _, s := range [][3]int{{1, 1, 5}, {3, 5, 2049}, {8, 7, 5000}, {0, 2, 3000}, {2, 0, 3000}} {
		m, n, k := s[0], s[1], s[2]
		x, y := random(r, m*k), random(r, n*k)
		one, two := make([]float64, m*n), make([]float64, m*n)
		Gram(m, n, k, x, y, one, 1)
		Gram(m, n, k, x, y, two, 3)
		for i := range m {
			for j := range n {
				want := 0.0
				for p := range k {
					want += x[i*k+p] * y[j*k+p]
				}
				if got := one[i*n+j]; math.Abs(got-want) > 1e-11 || got != two[i*n+j] {
					t.Fatalf("Gram %v (%d, %d): %g and %g, want %g", s, i, j, got, two[i*n+j], want)
				}
			}
		}
		c := random(r, n*m)
		sum, rotated := append([]float64(nil), y...), append([]float64(nil), x...)
		AddCombined(n, m, k, -1, c, x, sum, 2)
		keep := min(m, n)
		Rotate(keep, m, k, c, rotated, 2)
		for i := range n {
			for p := range k {
				want := 0.0
				for j := range m {
					want += c[i*m+j] * x[j*k+p]
				}
				if math.Abs(sum[i*k+p]-(y[i*k+p]-want)) > 1e-12 {
					t.Fatalf("AddCombined %v (%d, %d)", s, i, p)
				}
				if i < keep && math.Abs(rotated[i*k+p]-want) > 1e-12 {
					t.Fatalf("Rotate %v (%d, %d)", s, i, p)
				}
			}
		}
	}
}

func TestBadShapesPanic(t *testing.T) {
	for name, f := range map[string]func(){
		"SubMulT":     func() { SubMulT(2, 2, 3, nil, 2, nil, 3, nil, 2) },
		"SolveLowerT": func() { SolveLowerT(1, 3, nil, 2, nil, 3) },
		"Gram":        func() { Gram(2, 2, 3, make([]float64, 5), make([]float64, 6), make([]float64, 4), 1) },
		"Rotate":      func() { Rotate(3, 2, 1, make([]float64, 6), make([]float64, 2), 1) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			f()
		}()
	}
}

func BenchmarkSubMulT(b *testing.B) {
	for _, k := range []int{6, 12, 24, 48, 96, 256} {
		const m, n = 256, 64
		r := rand.New(rand.NewPCG(1, 6))
		x, y, c := random(r, m*k), random(r, n*k), random(r, m*n)
		b.Run(fmt.Sprintf("k=%d", k), func(b *testing.B) {
			for b.Loop() {
				SubMulT(m, n, k, x, k, y, k, c, n)
			}
			b.ReportMetric(2*float64(m*n*k)*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
		})
	}
}
