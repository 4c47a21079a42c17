package spectrum

import (
	"math"
	"math/cmplx"
)

// Cross holds the averaged spectra of an input x and an output y: XX and YY as Welch gives them, and
//
//	XY = mean(conj(X)·Y)
//
// one-sided and scaled alike, so that a positive phase of XY means that y leads x.
type Cross struct {
	Average
	XX, YY []float64
	XY     []complex128
}

// CrossSpectrum averages x and y over the same segments. Both must have the same runs. Errors and panics as Welch; it
// also panics if the lengths differ.
func CrossSpectrum(x, y [][]float64, s Settings) (Cross, error) {
	s.check()
	if len(x) != len(y) {
		panic("spectrum: x and y differ in runs")
	}
	for i := range x {
		if len(x[i]) != len(y[i]) {
			panic("spectrum: x and y differ in samples")
		}
	}
	average, err := survey(x, s)
	if err != nil {
		return Cross{}, err
	}
	t := newTransformer(s)
	n := s.Bins()
	c := Cross{Average: average, XX: make([]float64, n), YY: make([]float64, n), XY: make([]complex128, n)}
	bx, by := make([]complex128, n), make([]complex128, n)
	for r := range x {
		for i, at := 0, 0; i < s.Segments(len(x[r])); i, at = i+1, at+s.Segment-s.Overlap {
			t.apply(bx, x[r][at:at+s.Segment])
			t.apply(by, y[r][at:at+s.Segment])
			for k, v := range bx {
				u := by[k]
				c.XX[k] += real(v)*real(v) + imag(v)*imag(v)
				c.YY[k] += real(u)*real(u) + imag(u)*imag(u)
				c.XY[k] += cmplx.Conj(v) * u
			}
		}
	}
	factor := t.factor() / float64(average.Segments)
	for k := range c.XX {
		c.XX[k] *= factor
		c.YY[k] *= factor
		c.XY[k] *= complex(factor, 0)
		if total := c.XX[k] + c.YY[k]; math.IsNaN(total) || math.IsInf(total, 0) {
			return Cross{}, ErrNotFinite
		}
	}
	halve(c.XX, s.Segment, 0.5)
	halve(c.YY, s.Segment, 0.5)
	halve(c.XY, s.Segment, 0.5)
	return c, nil
}

// Coherence returns |XY|²/(XX·YY) per bin, 0 to 1; 0 where either power is zero. With one segment it is 1 everywhere
// and says nothing.
func (c Cross) Coherence() []float64 {
	out := make([]float64, len(c.XY))
	for k, v := range c.XY {
		if p := c.XX[k] * c.YY[k]; p > 0 {
			out[k] = min(1, (real(v)*real(v)+imag(v)*imag(v))/p)
		}
	}
	return out
}

// H1 returns XY/XX per bin: the transfer function if the noise is in the output.
func (c Cross) H1() []complex128 {
	out := make([]complex128, len(c.XY))
	for k, v := range c.XY {
		out[k] = v / complex(c.XX[k], 0)
	}
	return out
}

// H2 returns YY/conj(XY) per bin: the transfer function if the noise is in the input.
func (c Cross) H2() []complex128 {
	out := make([]complex128, len(c.XY))
	for k, v := range c.XY {
		out[k] = complex(c.YY[k], 0) / cmplx.Conj(v)
	}
	return out
}
