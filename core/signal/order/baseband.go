package order

import (
	"math"
	"slices"
)

// baseband holds one order of a signal, turned back by a reference angle and thinned: a line at n·speed stands at n·(speed - reference).
// Folded orders come out alike, since the samples of a folded line are those of the line itself.
type baseband struct {
	order  float64
	rate   float64        // of the thinned samples, Hz
	values [][]complex128 // by sample and channel
	// inverse is that of the covariance of the noise per sample, Hermitian, row by row.
	inverse []complex128
	steady  bool // the inverse is kept
}

const (
	passed  = 0.4 // of the thinned rate, the edge of the low-pass
	tapsPer = 4   // taps to either side per sample that is thinned out
)

// demodulate turns all channels back by order times the reference angle (turns, by sample) and keeps every thin-th sample of the low-passed
// product, from the first.
func demodulate(channels [][]float64, reference []float64, order, rate float64, thin int) *baseband {
	n := len(reference)
	b := &baseband{order: order, rate: rate / float64(thin)}
	half := tapsPer * thin
	taps := make([]float64, 2*half+1)
	sum := 0.0
	for i := range taps {
		u := float64(i - half)
		x := 2 * passed / float64(thin) * u
		v := 1.0
		if x != 0 {
			v = math.Sin(math.Pi*x) / (math.Pi * x)
		}
		taps[i] = v * (0.42 + 0.5*math.Cos(math.Pi*u/float64(half+1)) + 0.08*math.Cos(2*math.Pi*u/float64(half+1)))
		sum += taps[i]
	}
	count := (n + thin - 1) / thin
	b.values = make([][]complex128, count)
	flat := make([]complex128, count*len(channels))
	turned := make([]complex128, n)
	for c, x := range channels {
		for i, v := range x {
			turns := order * reference[i]
			sin, cos := math.Sincos(-2 * math.Pi * (turns - math.Floor(turns)))
			turned[i] = complex(v*cos, v*sin)
		}
		for k := range count {
			at := k * thin
			var s complex128
			for i := max(0, half-at); i < len(taps) && at+i-half < n; i++ {
				s += complex(taps[i], 0) * turned[at+i-half]
			}
			if c == 0 {
				b.values[k] = flat[k*len(channels) : (k+1)*len(channels)]
			}
			b.values[k][c] = s / complex(sum, 0)
		}
	}
	return b
}

// whiten sets the inverse covariance from a rest without lines, and returns the logarithm of the determinant of the covariance. A little
// of the trace on the diagonal keeps channels that say the same apart.
func (b *baseband) whiten(rest [][]complex128) float64 {
	if b.steady {
		return 0
	}
	c := len(rest[0])
	s := make([]complex128, c*c)
	for _, v := range rest {
		for i := range c {
			for j := range c {
				s[i*c+j] += v[i] * complex(real(v[j]), -imag(v[j]))
			}
		}
	}
	trace := 0.0
	for i := range s {
		s[i] /= complex(float64(len(rest)), 0)
	}
	for i := range c {
		trace += real(s[i*c+i])
	}
	for i := range c {
		s[i*c+i] += complex(1e-9*trace/float64(c)+math.SmallestNonzeroFloat64, 0)
	}
	b.inverse = invert(s, c)
	sum := 0.0 // invert leaves ones on the diagonal, so the pivots are those of the inverse
	for k, w := 0, slices.Clone(b.inverse); k < c; k++ {
		sum -= math.Log(real(w[k*c+k]))
		for i := k + 1; i < c; i++ {
			f := w[i*c+k] / w[k*c+k]
			for j := k; j < c; j++ {
				w[i*c+j] -= f * w[k*c+j]
			}
		}
	}
	return sum
}

// form is uᴴ S⁻¹ v.
func (b *baseband) form(u, v []complex128) complex128 {
	c := len(u)
	var sum complex128
	for i := range c {
		var row complex128
		for j := range c {
			row += b.inverse[i*c+j] * v[j]
		}
		sum += complex(real(u[i]), -imag(u[i])) * row
	}
	return sum
}

// invert inverts a Hermitian positive definite matrix of n rows, by Gauss and Jordan without pivots, which such a matrix does not need.
func invert(a []complex128, n int) []complex128 {
	out := make([]complex128, n*n)
	for i := range n {
		out[i*n+i] = 1
	}
	for k := range n {
		p := 1 / a[k*n+k]
		for j := range n {
			a[k*n+j] *= p
			out[k*n+j] *= p
		}
		for i := range n {
			if f := a[i*n+k]; i != k && f != 0 {
				for j := range n {
					a[i*n+j] -= f * a[k*n+j]
					out[i*n+j] -= f * out[k*n+j]
				}
			}
		}
	}
	return out
}
