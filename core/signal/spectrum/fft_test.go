package spectrum

import (
	"fmt"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"
)

// Powers of two, products of small primes, and lengths beside them, against gonum's transform.
func TestRealTransform(t *testing.T) {
	for _, n := range []int{2, 3, 4, 6, 8, 12, 16, 32, 64, 10, 18, 30, 50, 90, 14, 100, 128, 250, 256, 450, 600, 1000, 3000, 4000, 4374, 1024, 2048, 4096, 8192, 1 << 16} {
		x := gauss(uint32(n), n)
		got, want := make([]complex128, n/2+1), make([]complex128, n/2+1)
		transform := newRealTransform(n)
		for range 2 { // scratch is used anew
			transform.coefficients(got, x)
		}
		fourier.NewFFT(n).Coefficients(want, x)
		for k := range got {
			if d := cmplx.Abs(got[k] - want[k]); d > 1e-12*float64(n) {
				t.Fatalf("%d samples, bin %d: %v, want %v", n, k, got[k], want[k])
			}
		}
	}
}

func BenchmarkTransform(b *testing.B) {
	for _, n := range []int{1024, 4096, 8192} {
		x, dst := gauss(1, n), make([]complex128, n/2+1)
		b.Run(fmt.Sprint("ours-", n), func(b *testing.B) {
			t := newRealTransform(n)
			for b.Loop() {
				t.coefficients(dst, x)
			}
		})
		b.Run(fmt.Sprint("gonum-", n), func(b *testing.B) {
			t := fourier.NewFFT(n)
			for b.Loop() {
				t.Coefficients(dst, x)
			}
		})
	}
}
