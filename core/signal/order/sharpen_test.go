package order

import (
	"math"
	"slices"
	"testing"

	"hushframe/core/signal/internal/noise"
	"hushframe/core/signal/spectrum"
)

// drawn is a flight with known speeds: rotors near each other that wander, alike and each by itself, on a frame with two modes.
type drawn struct {
	rate            float64
	channels, quiet [][]float64 // with and without the lines of the rotors
	speeds          [][]float64
}

// slowly is noise through two low-passes of first order with a corner in Hz, of about unit deviation.
func slowly(source *noise.Source, corner, rate float64, n int) []float64 {
	a := math.Exp(-2 * math.Pi * corner / rate)
	gain := math.Sqrt(math.Pow(1-a*a, 3) / (math.Pow(1-a, 4) * (1 + a*a))) // (1-a)⁴(1+a²)/(1-a²)³ is the variance behind both
	out := make([]float64, n)
	s1, s2 := 0.0, 0.0
	for i := range n + int(3*rate/corner/6) {
		s1 = a*s1 + (1-a)*source.Gauss()
		s2 = a*s2 + (1-a)*s1
		if k := i - int(3*rate/corner/6); k >= 0 {
			out[k] = gain * s2
		}
	}
	return out
}

// draw makes such a flight; orders 1 and, of the first rotor, 6, which folds. Amplitudes are in the same unit as the noise.
func draw(seed uint32, seconds float64, means, amplitudes []float64) drawn {
	const rate = 1000.0
	n := int(seconds * rate)
	source := noise.Source(seed)
	f := drawn{rate: rate}
	for range 2 {
		x, y1, y2, z1, z2 := make([]float64, n), 0.0, 0.0, 0.0, 0.0
		pole := func(hz, damping float64) (float64, float64) {
			w := 2 * math.Pi * hz / rate
			return 2 * math.Exp(-damping*w) * math.Cos(w*math.Sqrt(1-damping*damping)), -math.Exp(-2 * damping * w)
		}
		a1, a2 := pole(253, 0.05)
		b1, b2 := pole(140, 0.02)
		for i := range x {
			y1, y2 = a1*y1+a2*y2+source.Gauss(), y1
			z1, z2 = b1*z1+b2*z2+source.Gauss(), z1
			x[i] = 0.2*y1 + 0.1*z1 + 0.3*source.Gauss()
		}
		f.quiet = append(f.quiet, x)
		f.channels = append(f.channels, slices.Clone(x))
	}
	common := slowly(&source, 0.25, rate, n)
	for r, m := range means {
		own := slowly(&source, 0.25, rate, n)
		speed, angle := make([]float64, n), source.Uniform()
		shift := 3 * source.Uniform()
		for i := range speed {
			speed[i] = m * (1 + 0.012*common[i] + 0.004*own[i])
			angle += speed[i] / rate
			f.channels[0][i] += amplitudes[r] * math.Cos(2*math.Pi*angle)
			f.channels[1][i] += 0.6 * amplitudes[r] * math.Cos(2*math.Pi*angle+shift)
			if r == 0 {
				f.channels[1][i] += 0.5 * math.Cos(12*math.Pi*angle)
			}
		}
		f.speeds = append(f.speeds, speed)
	}
	return f
}

// sharpened follows and sharpens the rotors of a flight.
func (f drawn) sharpened(t *testing.T, threads int) (Sharp, [][]float64) {
	t.Helper()
	tracks := FindSpeeds(f.channels, TrackSettings{Rate: f.rate, From: 200, To: 330, Rotors: len(f.speeds), Threads: threads})
	got, ok := Sharpen(f.channels, tracks, SharpenSettings{Rate: f.rate, Orders: []float64{1, 2, 6}, Threads: threads})
	if !ok {
		t.Fatal("not sharpened")
	}
	time := make([]float64, len(f.channels[0]))
	for i := range time {
		time[i] = float64(i) / f.rate
	}
	var speeds [][]float64
	for _, s := range got.Speeds {
		speeds = append(speeds, Follow(got.Time, s, time))
	}
	return got, speeds
}

// off gives the errors of a speed against the nearest true one, every fiftieth of a second.
func (f drawn) off(speed []float64) []float64 {
	var out []float64
	for i := 0; i < len(speed); i += 20 {
		best := math.Inf(1)
		for _, s := range f.speeds {
			if d := speed[i] - s[i]; math.Abs(d) < math.Abs(best) {
				best = d
			}
		}
		out = append(out, best)
	}
	return out
}

func rms(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v * v
	}
	return math.Sqrt(sum / float64(len(x)))
}

// Four rotors within 12 Hz: sharpened speeds are known to a fifth of a hertz, as they claim; by them at least 90 % of the power of the lines
// comes out, nearly what the true speeds take out, and structure away from the lines stays as it is.
func TestSharpen(t *testing.T) {
	f := draw(3, 24, []float64{262, 267, 269.5, 274}, []float64{1.4, 2, 1.7, 2.4})
	got, speeds := f.sharpened(t, 2)
	for r, speed := range speeds {
		off := f.off(speed)
		slices.SortFunc(off, func(a, b float64) int {
			if math.Abs(a) < math.Abs(b) {
				return -1
			}
			return 1
		})
		core := rms(off[:len(off)*9/10])
		t.Logf("rotor %d: off by %.3f Hz rms, nine tenths by %.3f; claimed ±%.3f Hz, ±%.3f rad, strength %.0f", r, rms(off), core, got.SpeedError[r], got.PhaseError[r], got.Strength[r])
		if !got.Sure(r) {
			t.Errorf("rotor %d is not sure", r)
		}
		if rms(off) > 0.8 || core > 0.25 {
			t.Errorf("rotor %d: off by %.3f Hz rms, nine tenths by %.3f", r, rms(off), core)
		}
		if ratio := core / got.SpeedError[r]; ratio < 0.4 || ratio > 2 {
			t.Errorf("rotor %d: off by %.3f Hz, ±%.3f claimed", r, core, got.SpeedError[r])
		}
	}
	set := RemoveSettings{Rate: f.rate, Orders: []float64{1, 6}, Threads: 2}
	bySharp, byTruth := Remove(f.channels, speeds, set).Rest, Remove(f.channels, f.speeds, set).Rest
	for c := range f.channels {
		lines, left, least := 0.0, 0.0, 0.0
		for i, q := range f.quiet[c] {
			lines += math.Pow(f.channels[c][i]-q, 2)
			left += math.Pow(bySharp[c][i]-q, 2)
			least += math.Pow(byTruth[c][i]-q, 2)
		}
		t.Logf("channel %d: %.2f %% of the power of the lines is left, with the true speeds %.2f %%", c, 100*left/lines, 100*least/lines)
		if left > 0.1*lines {
			t.Errorf("channel %d: %.3f of the power of the lines is left, with the true speeds %.3f", c, left/lines, least/lines)
		}
		was, is := density(t, f.quiet[c], f.rate), density(t, bySharp[c], f.rate)
		for k, v := range was {
			if hz := float64(k); hz > 20 && hz < 220 && math.Abs(is[k]/v-1) > 0.02 {
				t.Fatalf("channel %d: the density at %g Hz changes by %.3f, where no order is", c, hz, is[k]/v-1)
			}
		}
	}
}

// density is that of Welch in cells of 1 Hz.
func density(t *testing.T, x []float64, rate float64) []float64 {
	t.Helper()
	p, err := spectrum.Welch([][]float64{x}, spectrum.Settings{Rate: rate, Segment: int(rate), Overlap: int(rate) / 2})
	if err != nil {
		t.Fatal(err)
	}
	return p.Values
}

// Where fewer rotors turn than are sought, the speeds of the others claim to be worth nothing, or lie on a line that is there.
func TestSharpenWithoutLine(t *testing.T) {
	f := draw(4, 20, []float64{262, 270}, []float64{0, 0})
	tracks := FindSpeeds(f.channels, TrackSettings{Rate: f.rate, From: 200, To: 330, Rotors: 2, Threads: 2})
	got, ok := Sharpen(f.channels, tracks, SharpenSettings{Rate: f.rate, Threads: 2})
	if !ok {
		t.Fatal("not sharpened")
	}
	for r := range got.Speeds {
		t.Logf("±%.3f rad, strength %.1f", got.PhaseError[r], got.Strength[r])
		if got.Sure(r) {
			t.Errorf("rotor %d is sure to %.2f rad, strength %.1f, and there is none", r, got.PhaseError[r], got.Strength[r])
		}
	}
	if _, ok := Sharpen([][]float64{f.channels[0][:5000]}, tracks, SharpenSettings{Rate: f.rate}); ok {
		t.Error("five seconds are sharpened")
	}
	dead := make([]float64, len(f.channels[0]))
	for name, channels := range map[string][][]float64{"dead": {dead, dead}, "one dead": {f.channels[0][:8000], dead[:8000]}} {
		if x, ok := Sharpen(channels, tracks, SharpenSettings{Rate: f.rate, Threads: 2}); ok && x.Sure(0) {
			t.Errorf("%s channels have a rotor", name)
		}
	}
	if _, ok := Sharpen(f.channels, nil, SharpenSettings{Rate: f.rate}); ok {
		t.Error("no track is sharpened")
	}
}

func TestSharpenThreads(t *testing.T) {
	f := draw(8, 8, []float64{262, 268}, []float64{1.4, 2})
	one, _ := f.sharpened(t, 1)
	two, _ := f.sharpened(t, 2)
	for r := range one.Speeds {
		if !slices.Equal(one.Speeds[r], two.Speeds[r]) {
			t.Errorf("the number of threads changes the speed of rotor %d", r)
		}
	}
}

// Two lines that cross, told as if each had turned back: it is found that they crossed.
func TestUntangle(t *testing.T) {
	const rate, n = 400.0, 8000
	source := noise.Source(12)
	channels := [][]float64{make([]float64, n), make([]float64, n)}
	var time, up, down, high, low []float64
	a, b := 0.0, 0.0
	reference := make([]float64, n)
	for i := range n {
		at := float64(i) / rate
		f := 0.4 * (at - 10) // Hz from the reference
		time = append(time, at)
		up, down = append(up, f), append(down, -f)
		high, low = append(high, math.Abs(f)), append(low, -math.Abs(f))
		a += (100 + f) / rate
		b += (100 - f) / rate
		reference[i] = 100 * at
		channels[0][i] = math.Cos(2*math.Pi*a) + 0.7*math.Cos(2*math.Pi*b) + source.Gauss()
		channels[1][i] = 0.3*math.Cos(2*math.Pi*a) - math.Cos(2*math.Pi*b+1) + source.Gauss()
	}
	l := newLines(channels, reference, []float64{1}, []float64{6}, rate)
	l.set(0, time, high)
	l.set(1, time, low)
	d := drift{own: 2, common: 1, memory: 0.3}
	l.improve(d, 2, 4)
	before := l.cost()
	if l.untangle(d, 2, 2) != 1 {
		t.Error("the crossing is not found")
	}
	l.improve(d, 2, 4)
	if l.cost() > before-3 {
		t.Errorf("cost %.1f, before %.1f", l.cost(), before)
	}
	at, offset := l.frequency(0)
	_, other := l.frequency(1)
	for k, v := range at {
		i := min(n-1, int(v*rate))
		d := math.Max(math.Abs(offset[k]-up[i]), math.Abs(other[k]-down[i]))
		if v > 1 && v < 19 && math.Min(d, math.Max(math.Abs(offset[k]-down[i]), math.Abs(other[k]-up[i]))) > 0.4 {
			t.Fatalf("at %g s: %.2f and %.2f Hz, want ±%.2f", v, offset[k], other[k], up[i])
		}
	}
}

// Four rotors in two channels of 60 s at 1 kHz.
func BenchmarkSharpen(b *testing.B) {
	f := draw(3, 60, []float64{262, 267, 269.5, 274}, []float64{1.4, 2, 1.7, 2.4})
	tracks := FindSpeeds(f.channels, TrackSettings{Rate: f.rate, From: 200, To: 330, Rotors: 4, Threads: 2})
	b.ResetTimer()
	for range b.N {
		Sharpen(f.channels, tracks, SharpenSettings{Rate: f.rate, Orders: []float64{1, 2, 6}, Threads: 2})
	}
}
