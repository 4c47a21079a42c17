package identify

import (
	"errors"
	"math"
	"math/cmplx"

	"hushframe/core/numeric/dense"
)

// Residue is one mode of a process whose two-sided spectrum is a sum of terms D + Dᴴ with D = c·gᵀ/(iω-λ) and its partner of conjugate λ, c, g.
type Residue struct {
	Lambda complex128   // 1/s, imaginary part above zero
	Shape  []complex128 // c, one for each channel
	Gain   []complex128 // g, likewise
}

// Best is the least standard error that an unbiased estimator can reach.
type Best struct {
	Frequency float64 // Hz
	Damping   float64 // ζ
}

// ErrNoInformation says that a spectrum has no inverse, or tells nothing of the modes.
var ErrNoInformation = errors.New("the spectrum has no inverse: a channel has neither signal nor noise")

// Bound returns, for each mode, the bound of Cramér and Rao on what a Gaussian record of so many seconds tells of it when poles, shapes and
// gains of all given modes are unknown together and everything else is known: the inverse of
//
//	F = T·∫ tr(S⁻¹·∂S/∂a·S⁻¹·∂S/∂b) df
//
// from one frequency to another (P. Whittle, The analysis of multiple stationary time series, J. R. Statist. Soc. B 15, 1953). density returns the two-sided
// l × l spectrum at f Hz, row by row, with all that is in the record; step is the spacing of the sum, fine beside the narrowest mode. More that is unknown
// only raises the bound. It panics on shapes of unlike length.
func Bound(density func(f float64) []complex128, modes []Residue, from, to, step, seconds float64, threads int) ([]Best, error) {
	if len(modes) == 0 {
		return nil, nil
	}
	l := len(modes[0].Shape)
	fixed := make([]int, len(modes))
	for m, r := range modes {
		if len(r.Shape) != l || len(r.Gain) != l {
			panic("identify: modes of a bound differ in channels")
		}
		for q, v := range r.Shape {
			if cmplx.Abs(v) > cmplx.Abs(r.Shape[fixed[m]]) {
				fixed[m] = q
			}
		}
	}
	bins, per := int((to-from)/step), 2+2*(l-1)+2*l
	n, length := len(modes)*per, bins*l*l
	flat := make([]float64, (n+1)*length) // the last row, of the remainder, is zero: inverse takes the information as fit makes it
	failed := make([]bool, (bins+blockBins-1)/blockBins)
	dense.Parallel(threads, len(failed), func(t int) {
		whitener := make([]complex128, l*l)
		for bin := t * blockBins; bin < min(bins, (t+1)*blockBins); bin++ {
			f := from + (float64(bin)+0.5)*step
			if !inverseRoot(density(f), whitener, l) {
				failed[t] = true
				return
			}
			for m, r := range modes {
				r.slopes(complex(0, 2*math.Pi*f), fixed[m], func(a int, slope []complex128) {
					at := (m*per+a)*length + bin*l*l
					hermitianRow(whitener, slope, flat[at:at+l*l], math.Sqrt(seconds*step), l)
				})
			}
		}
	})
	for _, bad := range failed {
		if bad {
			return nil, ErrNoInformation
		}
	}
	gram := make([]float64, (n+1)*(n+1))
	dense.Gram(n+1, n+1, length, flat, flat, gram, threads)
	covariance := inverse(gram, n, 1e-12)
	if covariance == nil {
		return nil, ErrNoInformation
	}
	out := make([]Best, len(modes))
	for m, r := range modes {
		decay, turn := -real(r.Lambda), imag(r.Lambda)
		w := math.Hypot(decay, turn)
		// The two parameters of the pole are in units of decay, as those of a fit.
		gradient := func(byDecay, byTurn float64) float64 {
			a, b, i := byDecay*decay, byTurn*decay, m*per
			return math.Sqrt(max(0, a*a*covariance.At(i, i)+2*a*b*covariance.At(i, i+1)+b*b*covariance.At(i+1, i+1)))
		}
		out[m] = Best{Frequency: gradient(decay/w, turn/w) / (2 * math.Pi), Damping: gradient(turn*turn/(w*w*w), -decay*turn/(w*w*w))}
	}
	return out, nil
}

// slopes gives the derivative of D by each parameter at s = iω: decay and turn in units of decay, the components of c but one, those of g.
func (r Residue) slopes(s complex128, fixed int, set func(a int, d []complex128)) {
	l := len(r.Shape)
	d := make([]complex128, l*l)
	direct, mirror := 1/(s-r.Lambda), 1/(s-cmplx.Conj(r.Lambda))
	// product sets d to by·a·bᵀ and the conjugate of a·bᵀ times byC.
	product := func(by complex128, a, b []complex128, byC complex128) {
		for x := range l {
			for y := range l {
				v := a[x] * b[y]
				d[x*l+y] = by*v + byC*cmplx.Conj(v)
			}
		}
	}
	decay := complex(-real(r.Lambda), 0)
	product(-decay*direct*direct, r.Shape, r.Gain, -decay*mirror*mirror)
	set(0, d)
	product(1i*decay*direct*direct, r.Shape, r.Gain, -1i*decay*mirror*mirror)
	set(1, d)
	unit, a := make([]complex128, l), 2
	for q := range l {
		clear(unit)
		unit[q] = r.Shape[fixed]
		if q != fixed {
			product(direct, unit, r.Gain, mirror)
			set(a, d)
			product(1i*direct, unit, r.Gain, -1i*mirror)
			set(a+1, d)
			a += 2
		}
	}
	for q := range l {
		clear(unit)
		unit[q] = 1
		product(direct, r.Shape, unit, mirror)
		set(a, d)
		product(1i*direct, r.Shape, unit, -1i*mirror)
		set(a+1, d)
		a += 2
	}
}

// inverseRoot sets out to the inverse of the lower Cholesky factor of a Hermitian matrix.
func inverseRoot(s, out []complex128, l int) bool {
	lower := make([]complex128, l*l)
	for a := range l {
		for b := range a + 1 {
			sum := s[a*l+b]
			for q := range b {
				sum -= lower[a*l+q] * cmplx.Conj(lower[b*l+q])
			}
			if a != b {
				lower[a*l+b] = sum / lower[b*l+b]
				continue
			}
			if !(real(sum) > 0) {
				return false
			}
			lower[a*l+a] = complex(math.Sqrt(real(sum)), 0)
		}
	}
	clear(out)
	for c := range l {
		for a := c; a < l; a++ {
			sum := complex128(0)
			if a == c {
				sum = 1
			}
			for q := c; q < a; q++ {
				sum -= lower[a*l+q] * out[q*l+c]
			}
			out[a*l+c] = sum / lower[a*l+a]
		}
	}
	return true
}

// hermitianRow writes W·(D + Dᴴ)·Wᴴ as l² real numbers whose sum of squares is that of its entries, times a factor.
func hermitianRow(w, d []complex128, out []float64, by float64, l int) {
	half := make([]complex128, l*l)
	for a := range l {
		for b := range l {
			for q := range a + 1 {
				half[a*l+b] += w[a*l+q] * (d[q*l+b] + cmplx.Conj(d[b*l+q]))
			}
		}
	}
	i := 0
	for a := range l {
		for b := range a + 1 {
			var y complex128
			for q := range b + 1 {
				y += half[a*l+q] * cmplx.Conj(w[b*l+q])
			}
			if a == b {
				out[i] = by * real(y)
				i++
				continue
			}
			out[i], out[i+1] = by*math.Sqrt2*real(y), by*math.Sqrt2*imag(y)
			i += 2
		}
	}
}
