package impact

import (
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/signal/internal/noise"
	"hushframe/core/signal/spectrum"
)

const rate = 4096.0

// bench is a structure of a few modes, whose accelerances add up. Pulses are squared half sines of 1.5 ms at the times given, forces in N;
// the response is the acceleration.
type bench struct{ f, zeta, gain []float64 } // gain: 1/kg of each mode

func (b bench) accelerance(f float64) complex128 {
	w := 2 * math.Pi * f
	var h complex128
	for k := range b.f {
		wk := 2 * math.Pi * b.f[k]
		h += complex(-w*w*b.gain[k], 0) / complex(wk*wk-w*w, 2*b.zeta[k]*wk*w)
	}
	return h
}

// fly integrates with steps 32 times as fine as the samples (semi-implicit Euler, whose frequencies are off by 2e-5 at most here).
func (b bench) fly(seconds float64, pulses map[float64]float64, hiss float64) (force, response []float64) {
	const fine = 32
	dt := 1 / (rate * fine)
	source := noise.Source(5)
	y, v := make([]float64, len(b.f)), make([]float64, len(b.f))
	at := func(t float64) float64 {
		sum := 0.0
		for start, peak := range pulses {
			if x := (t - start) / 1.5e-3; x > 0 && x < 1 {
				s := math.Sin(math.Pi * x)
				sum += peak * s * s
			}
		}
		return sum
	}
	for i := range int(seconds * rate * fine) {
		t := float64(i) * dt
		p := at(t)
		sum := 0.0
		for k := range y {
			w := 2 * math.Pi * b.f[k]
			a := b.gain[k]*p - 2*b.zeta[k]*w*v[k] - w*w*y[k]
			sum += a
			v[k] += dt * a
			y[k] += dt * v[k]
		}
		if i%fine == 0 {
			force = append(force, p+hiss*source.Gauss())
			response = append(response, sum+hiss*source.Gauss())
		}
	}
	return force, response
}

// Transfer functions of strikes against the closed form of two modes: D. J. Ewins, Modal Testing, 2nd ed., 2000, chapter 2, accelerance of
// viscously damped modes.
func TestTransferFunction(t *testing.T) {
	b := bench{f: []float64{110, 260}, zeta: []float64{0.01, 0.02}, gain: []float64{2, -1.2}}
	force, response := b.fly(9, map[float64]float64{0.5: 40, 2.5: 55, 4.5: 30, 6.5: 48}, 0.02)
	s := Settings{Rate: rate, Segment: 4096}
	strikes := Find(force, s)
	if len(strikes) != 4 {
		t.Fatalf("%+v", strikes)
	}
	for _, tau := range []float64{0, 0.25} {
		var x, y [][]float64
		for _, k := range strikes {
			if k.Why != Used || math.Abs(float64(k.Begin)/rate-float64(k.Peak)/rate) > 1.5e-3 {
				t.Errorf("%+v", k)
			}
			f, r := k.Cut(force, response, tau, s)
			x, y = append(x, f), append(y, r)
		}
		c, err := spectrum.CrossSpectrum(x, y, spectrum.Settings{Rate: rate, Segment: s.Segment, Window: spectrum.Boxcar, Detrend: spectrum.DetrendNone})
		if err != nil {
			t.Fatal(err)
		}
		h1, h2, coherence := c.H1(), c.H2(), c.Coherence()
		for k := 40; k <= 500; k++ {
			f := c.Frequency(k)
			want := b.accelerance(f)
			if tau > 0 {
				// exp(-t/τ) shifts the poles: H(ω - i/τ), the transform of exp(-t/τ)·h(t).
				want = b.shifted(f, tau)
			}
			if e := cmplx.Abs(h1[k]-want) / cmplx.Abs(want); e > 0.02 && cmplx.Abs(want) > 1 {
				t.Errorf("τ %g, %g Hz: H1 %v, want %v", tau, f, h1[k], want)
			}
			if e := cmplx.Abs(h2[k]-want) / cmplx.Abs(want); e > 0.02 && cmplx.Abs(want) > 1 {
				t.Errorf("τ %g, %g Hz: H2 %v, want %v", tau, f, h2[k], want)
			}
			if coherence[k] < 0.999 && cmplx.Abs(want) > 1 {
				t.Errorf("τ %g, %g Hz: coherence %g", tau, f, coherence[k])
			}
		}
	}
	if got := Damping(0.01+1/(0.25*2*math.Pi*110), 110, 0.25); math.Abs(got-0.01) > 1e-12 {
		t.Errorf("damping %g", got)
	}
}

// shifted is the transfer function at the complex frequency ω - i/τ.
func (b bench) shifted(f, tau float64) complex128 {
	w := complex(2*math.Pi*f, -1/tau)
	var h complex128
	for k := range b.f {
		wk := complex(2*math.Pi*b.f[k], 0)
		h += -w * w * complex(b.gain[k], 0) / (wk*wk - w*w + 2i*complex(b.zeta[k], 0)*wk*w)
	}
	return h
}

func TestStrikesLeftOut(t *testing.T) {
	n := int(12 * rate)
	force := make([]float64, n)
	source := noise.Source(2)
	for i := range force {
		force[i] = 3 + 0.01*source.Gauss() // an offset, as charge amplifiers have
	}
	hit := func(at, peak, length float64) {
		first := int(at * rate)
		for i := range int(length * rate) {
			force[first+i] += peak * math.Sin(math.Pi*float64(i)/(length*rate))
		}
	}
	hit(0.0005, 30, 0.002) // no room before
	hit(1.2, 40, 0.002)
	hit(3, 35, 0.002)
	hit(3.02, 6, 0.002) // a bounce, below the level of a strike
	hit(5, 50, 0.002)
	hit(5.6, 30, 0.002) // before the segment is over: the first is double, too
	hit(7, 20, 0.05)
	hit(9, -30, 0.002) // pulled, or a sensor turned round
	hit(11.9, 40, 0.002)
	var got []string
	for _, k := range Find(force, Settings{Rate: rate, Segment: 4096, Overload: 49}) {
		got = append(got, k.Why)
	}
	want := []string{NoRoom, Used, Double, Overloaded, Early, Long, Used, NoRoom}
	if len(got) != len(want) {
		t.Fatalf("%q, want %q", got, want)
	}
	for i := range want {
		if got[i] != want[i] {
			t.Errorf("strike %d: %q, want %q", i+1, got[i], want[i])
		}
	}
	if Find(make([]float64, 100), Settings{Rate: rate, Segment: 16}) != nil {
		t.Error("silence strikes")
	}
}
