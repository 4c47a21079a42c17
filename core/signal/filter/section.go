package filter

import (
	"math"
	"math/cmplx"
)

// Section is a biquad; a first-order section has zeros in the last places. A[0] is 1.
type Section struct{ B, A [3]float64 }

// Chain is filters in a row.
type Chain []Section

func check(f, rate float64) {
	if !(rate > 0) || !(f > 0 && f < rate/2) {
		panic("filter: a frequency must lie between zero and half the sample rate")
	}
}

// FirstOrder returns the low-pass y += k·(x - y) with the nominal cut-off in Hz. It panics unless 0 < cutoff < rate/2.
func FirstOrder(cutoff, rate float64) Section {
	check(cutoff, rate)
	k := 1 / (1 + rate/(2*math.Pi*cutoff))
	return Section{B: [3]float64{k}, A: [3]float64{1, k - 1}}
}

// FirstOrderExact returns the bilinear low-pass that is 3 dB down at the cut-off. It panics as FirstOrder.
func FirstOrderExact(cutoff, rate float64) Section {
	check(cutoff, rate)
	k := math.Tan(math.Pi * cutoff / rate)
	return Section{B: [3]float64{k / (1 + k), k / (1 + k)}, A: [3]float64{1, (k - 1) / (k + 1)}}
}

// Cascade returns count equal first-order low-passes in running form, each with the cut-off raised by 1/√(2^(1/count) - 1),
// so that together they are 3 dB down at the nominal one. It panics unless count ≥ 1 and the raised cut-off is below rate/2.
func Cascade(cutoff, rate float64, count int) Chain {
	if count < 1 {
		panic("filter: a cascade has at least one filter")
	}
	raised := cutoff / math.Sqrt(math.Pow(2, 1/float64(count))-1)
	out := make(Chain, count)
	for i := range out {
		out[i] = FirstOrder(raised, rate)
	}
	return out
}

// LowPass returns the second-order low-pass with that Q; 1/√2 is Butterworth's. It panics unless 0 < f0 < rate/2 and q > 0.
func LowPass(f0, q, rate float64) Section {
	cos, alpha := biquad(f0, q, rate)
	return normal([3]float64{(1 - cos) / 2, 1 - cos, (1 - cos) / 2}, cos, alpha)
}

// Notch returns the notch at f0 with that Q. It panics as LowPass.
func Notch(f0, q, rate float64) Section {
	cos, alpha := biquad(f0, q, rate)
	return normal([3]float64{1, -2 * cos, 1}, cos, alpha)
}

// NotchQ returns the Q of a notch with its -3 dB edges at lower and upper Hz about f0: f0/(upper - lower).
func NotchQ(f0, lower, upper float64) float64 {
	if !(upper > lower) || !(f0 > 0) {
		panic("filter: the edges of a notch must rise")
	}
	return f0 / (upper - lower)
}

func biquad(f0, q, rate float64) (cos, alpha float64) {
	check(f0, rate)
	if !(q > 0) {
		panic("filter: Q must be above zero")
	}
	w := 2 * math.Pi * f0 / rate
	return math.Cos(w), math.Sin(w) / (2 * q)
}

func normal(b [3]float64, cos, alpha float64) Section {
	by := 1 / (1 + alpha)
	for i := range b {
		b[i] *= by
	}
	return Section{B: b, A: [3]float64{1, -2 * cos * by, (1 - alpha) * by}}
}

// at returns b(z), a(z) and Σ k·b_k·z^-k, Σ k·a_k·z^-k.
func (s Section) at(f, rate float64) (b, a, db, da complex128) {
	for k := range 3 {
		z := cmplx.Rect(1, -2*math.Pi*f/rate*float64(k))
		b += complex(s.B[k], 0) * z
		a += complex(s.A[k], 0) * z
		db += complex(s.B[k]*float64(k), 0) * z
		da += complex(s.A[k]*float64(k), 0) * z
	}
	return b, a, db, da
}

// Response returns H at f Hz.
func (s Section) Response(f, rate float64) complex128 {
	b, a, _, _ := s.at(f, rate)
	return b / a
}

// Delay returns the group delay at f Hz in seconds: Re(Σk·b_k·z^-k/b) - Re(Σk·a_k·z^-k/a), over the rate. On a zero of the
// response of a notch it is the limit from either side, and elsewhere not a number.
func (s Section) Delay(f, rate float64) float64 {
	b, a, db, da := s.at(f, rate)
	late := real(db / b)
	if s.B[0] == s.B[2] && s.B[0] != 0 {
		late = 1 // symmetric coefficients delay by one sample at every frequency, which near a zero cancels badly
	}
	return (late - real(da/a)) / rate
}

// Response returns H of the chain at f Hz.
func (c Chain) Response(f, rate float64) complex128 {
	out := complex(1, 0)
	for _, s := range c {
		out *= s.Response(f, rate)
	}
	return out
}

// Delay returns the group delay of the chain at f Hz in seconds.
func (c Chain) Delay(f, rate float64) float64 {
	out := 0.0
	for _, s := range c {
		out += s.Delay(f, rate)
	}
	return out
}

// PhaseLag returns by how much the chain is late at f Hz, in rad: the sum of the falling phases of its sections, each
// followed from 0 Hz, where it is zero, so that lags beyond π are not wrapped. Below the first notch or cut-off it is -arg H.
func (c Chain) PhaseLag(f, rate float64) float64 {
	out := 0.0
	for _, s := range c {
		out -= cmplx.Phase(s.Response(f, rate)) // a section turns by less than π below its zeros
	}
	return out
}

// Apply filters x from rest and returns the output.
func (c Chain) Apply(x []float64) []float64 {
	out := append([]float64(nil), x...)
	for _, s := range c {
		var state [2]float64
		for i, v := range out {
			out[i] = s.step(v, &state)
		}
	}
	return out
}

// step is the transposed direct form, which keeps its state sound while coefficients change.
func (s Section) step(x float64, state *[2]float64) float64 {
	y := s.B[0]*x + state[0]
	state[0] = s.B[1]*x - s.A[1]*y + state[1]
	state[1] = s.B[2]*x - s.A[2]*y
	return y
}

// Residual returns the root mean square that a chain leaves of a one-sided density given at steps of step Hz from 0 Hz,
// between from and to Hz; the density is in unit²/Hz. Frequencies at or above rate/2 are left out.
func (c Chain) Residual(density []float64, step, from, to, rate float64) float64 {
	sum := 0.0
	for k, v := range density {
		f := float64(k) * step
		if f < from || f > to || f >= rate/2 {
			continue
		}
		h := c.Response(f, rate)
		sum += v * (real(h)*real(h) + imag(h)*imag(h)) * step
	}
	return math.Sqrt(sum)
}
