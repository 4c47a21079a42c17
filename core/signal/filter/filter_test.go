package filter

import (
	"math"
	"math/cmplx"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/signal/internal/noise"
)

// setup of the filter rows of testdata/known/F_signals.json.
type setup struct {
	F0     float64 `json:"f0_Hz"`
	Q      float64
	Cutoff float64 `json:"fc_Hz"`
	Rate   float64 `json:"fs_Hz"`
	Stages int
	B      []float64 `json:"coefficients_b"`
	A      []float64 `json:"coefficients_a"`
}

// Rows F-NOTCH-*, F-BIQUAD-*, F-PT*: coefficients, magnitude, phase and group delay.
func TestResponses(t *testing.T) {
	made := map[string]func(s setup) Chain{
		"F-NOTCH-200-Q3.5": func(s setup) Chain { return Chain{Notch(s.F0, s.Q, s.Rate)} },
		"F-NOTCH-160-Q2":   func(s setup) Chain { return Chain{Notch(s.F0, NotchQ(s.F0, s.F0-s.F0/4, s.F0+s.F0/4), s.Rate)} },
		"F-BIQUAD-LPF-150": func(s setup) Chain { return Chain{LowPass(s.F0, math.Sqrt2/2, s.Rate)} },
		"F-PT1-EULER-100":  func(s setup) Chain { return Chain{FirstOrder(s.Cutoff, s.Rate)} },
		"F-PT1-BILIN-100":  func(s setup) Chain { return Chain{FirstOrderExact(s.Cutoff, s.Rate)} },
		"F-PT2-EULER-100":  func(s setup) Chain { return Cascade(s.Cutoff, s.Rate, s.Stages) },
		"F-PT3-EULER-100":  func(s setup) Chain { return Cascade(s.Cutoff, s.Rate, s.Stages) },
	}
	rows := known.Rows(t, "F_signals.json", "F-NOTCH-", "F-BIQUAD-", "F-PT")
	if len(rows) != len(made) {
		t.Errorf("%d rows, %d filters", len(rows), len(made))
	}
	for _, row := range rows {
		var s setup
		row.Decode(t, &s)
		if made[row.ID] == nil {
			t.Errorf("row %s is not tried", row.ID)
			continue
		}
		c := made[row.ID](s)
		b, a := []float64{1}, []float64{1}
		for _, section := range c {
			b, a = product(b, section.B[:]), product(a, section.A[:])
		}
		for i, want := range s.B {
			if math.Abs(b[i]-want) > 1e-11 {
				t.Errorf("row %s: b%d = %.12g, want %.12g", row.ID, i, b[i], want)
			}
		}
		for i, want := range s.A {
			if math.Abs(a[i]-want) > 1e-11 {
				t.Errorf("row %s: a%d = %.12g, want %.12g", row.ID, i, a[i], want)
			}
		}
		var got []float64
		for _, label := range row.Labels {
			number := strings.TrimSuffix(strings.Fields(strings.TrimSpace(label[strings.LastIndex(label[:strings.Index(label, " Hz")], " "):]))[0], "Hz")
			f, err := strconv.ParseFloat(number, 64)
			if err != nil {
				t.Fatalf("row %s: label %q", row.ID, label)
			}
			h := c.Response(f, s.Rate)
			switch {
			case strings.HasPrefix(label, "|H|"):
				got = append(got, cmplx.Abs(h))
			case strings.HasPrefix(label, "phase"):
				got = append(got, cmplx.Phase(h))
			default:
				got = append(got, 1e3*c.Delay(f, s.Rate))
			}
		}
		row.Check(t, 1, got...)
	}
}

func product(a, b []float64) []float64 {
	out := make([]float64, len(a)+len(b)-1)
	for i, x := range a {
		for j, y := range b {
			out[i+j] += x * y
		}
	}
	return out
}

// Row F-CHAIN-DELAY.
func TestChainDelay(t *testing.T) {
	row := known.One(t, "F_signals.json", "F-CHAIN-DELAY")
	const rate, f = 8000, 30
	c := Chain{FirstOrder(150, rate), FirstOrder(250, rate), Notch(200, 3.5, rate), Notch(400, 3.5, rate)}
	var got []float64
	for _, s := range c {
		got = append(got, 1e3*s.Delay(f, rate))
	}
	h := c.Response(f, rate)
	row.Check(t, 1, append(got, 1e3*c.Delay(f, rate), cmplx.Abs(h), cmplx.Phase(h))...)
	if lag := c.PhaseLag(f, rate); math.Abs(lag+cmplx.Phase(h)) > 1e-12 {
		t.Errorf("phase lag %g, phase %g", lag, cmplx.Phase(h))
	}
}

// Row F-FILTER-OUT.
func TestOutput(t *testing.T) {
	row := known.One(t, "F_signals.json", "F-FILTER-OUT")
	source := noise.Source(12345)
	x := make([]float64, 200)
	for i := range x {
		x[i] = source.Uniform()
	}
	y := Chain{Notch(200, 3.5, 8000)}.Apply(x)
	row.Check(t, 1, y[0], y[1], y[2], y[10], y[50], y[199])
	// A follower at a steady speed is the same notch.
	speeds := make([]float64, len(x))
	for i := range speeds {
		speeds[i] = 100
	}
	for i, v := range (Follower{Order: 2, Q: 3.5, Lowest: 50}).Apply(x, speeds, 8000) {
		if v != y[i] {
			t.Fatalf("sample %d of the follower is %g, want %g", i, v, y[i])
		}
	}
}

// The delay is the negative slope of the phase, also on either side of a notch; on its zero it is the limit.
func TestDelayIsSlope(t *testing.T) {
	c := Chain{FirstOrderExact(90, 4000), Notch(200, 2, 4000), LowPass(300, 0.8, 4000)}
	for _, f := range []float64{5, 60, 150, 250, 900} {
		const h = 1e-3
		slope := cmplx.Phase(c.Response(f+h, 4000)/c.Response(f-h, 4000)) / (2 * h) / (2 * math.Pi)
		if got := c.Delay(f, 4000); math.Abs(got+slope) > 1e-6*math.Abs(slope)+1e-10 {
			t.Errorf("%g Hz: delay %.9g s, slope %.9g", f, got, -slope)
		}
	}
	n := Notch(200, 2, 4000)
	if at, near := n.Delay(200, 4000), n.Delay(200.0001, 4000); !(math.Abs(at-near) < 1e-6*math.Abs(near)) {
		t.Errorf("delay on the zero %g, beside it %g", at, near)
	}
}

// A notch that follows takes a wandering line out that a fixed one lets pass, and its mean power agrees with what it leaves of
// white noise in the time domain.
func TestFollower(t *testing.T) {
	const rate, n = 4000.0, 80000
	source := noise.Source(4)
	speeds, line, white := make([]float64, n), make([]float64, n), make([]float64, n)
	angle := 0.0
	for i := range speeds {
		speeds[i] = 200 + 30*math.Sin(2*math.Pi*0.1*float64(i)/rate)
		angle += 2 * math.Pi * speeds[i] / rate
		line[i] = math.Sin(angle)
		white[i] = source.Gauss()
	}
	f := Follower{Order: 1, Q: 5, Lowest: 60}
	power := func(x []float64) float64 {
		sum := 0.0
		for _, v := range x {
			sum += v * v
		}
		return sum / float64(len(x))
	}
	if left := power(f.Apply(line, speeds, rate)) / power(line); left > 0.001 {
		t.Errorf("%.4f of the line is left by the follower", left)
	}
	if left := power(Chain{Notch(200, 5, rate)}.Apply(line)) / power(line); left < 0.05 {
		t.Errorf("%.4f of the line is left by a fixed notch", left)
	}
	mean := 0.0
	few := Thin(speeds, 200)
	for k := range 200 {
		mean += f.MeanPower(10*(float64(k)+0.5), few, rate) / 200
	}
	if left := power(f.Apply(white, speeds, rate)) / power(white); math.Abs(left-mean) > 0.01 {
		t.Errorf("%.4f of the noise is left, mean power says %.4f", left, mean)
	}
}

// White noise of unit density through a first-order low-pass keeps π/2 times its cut-off, far below the rate.
func TestResidual(t *testing.T) {
	density := make([]float64, 40001)
	for i := range density {
		density[i] = 1
	}
	got := Chain{FirstOrderExact(50, 40000)}.Residual(density, 0.5, 0, 20000, 40000)
	if want := math.Sqrt(50 * math.Pi / 2); math.Abs(got/want-1) > 0.01 {
		t.Errorf("%.4f is left, want %.4f", got, want)
	}
}

// A chain of six sections over a million samples.
func BenchmarkApply(b *testing.B) {
	c := append(Cascade(100, 8000, 3), Notch(200, 3, 8000), Notch(400, 3, 8000), LowPass(150, 0.7, 8000))
	x := make([]float64, 1_000_000)
	b.SetBytes(int64(8 * len(x)))
	for range b.N {
		c.Apply(x)
	}
}
