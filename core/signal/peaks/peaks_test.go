package peaks

import (
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/signal/internal/noise"
	"hushframe/core/signal/spectrum"
)

// resonance returns |H|² of a single degree of freedom of unit static gain.
func resonance(f, f0, zeta float64) float64 {
	r := f / f0
	return 1 / ((1-r*r)*(1-r*r) + 4*zeta*zeta*r*r)
}

// Rows F-HALFPOWER-*: exact edges from the curve, and the damping of the curve sampled on a grid.
func TestHalfPowerRows(t *testing.T) {
	for _, id := range []string{"F-HALFPOWER-180", "F-HALFPOWER-320"} {
		var setup struct {
			F0   float64 `json:"f0_Hz"`
			Zeta float64 `json:"zeta"`
			Grid float64 `json:"grid_Hz"`
		}
		row := known.One(t, "F_signals.json", id)
		row.Decode(t, &setup)
		// A grid so fine that linear interpolation is exact to the digits of the row, started below the lower edge.
		damping := func(step, start float64) (lower, upper, zeta float64) {
			p := make([]float64, int((2*setup.F0-start)/step))
			top := 0
			for i := range p {
				p[i] = resonance(start+float64(i)*step, setup.F0, setup.Zeta)
				if p[i] > p[top] {
					top = i
				}
			}
			lower, upper = HalfPower(p, step, top)
			return start + lower, start + upper, (upper - lower) / (2 * setup.F0)
		}
		f1, f2, exact := damping(1e-3, setup.F0*0.8)
		_, _, coarse := damping(setup.Grid, 0)
		row.Check(t, 1, f1, f2, exact, coarse)
	}
}

// Row F-LOGDEC-180.
func TestDecrementRow(t *testing.T) {
	var setup struct {
		F0     float64 `json:"f0_Hz"`
		Zeta   float64 `json:"zeta"`
		Cycles float64 `json:"cycles"`
	}
	row := known.One(t, "F_signals.json", "F-LOGDEC-180")
	row.Decode(t, &setup)
	delta := Decrement(setup.Zeta)
	row.Check(t, 1, delta, math.Exp(delta*setup.Cycles), DampedFrequency(setup.F0, setup.Zeta))
	if got := DecayDamping(row.Values[1], setup.Cycles); math.Abs(got-setup.Zeta) > 1e-9 {
		t.Errorf("damping from the decay %g, want %g", got, setup.Zeta)
	}
}

// Two modes and an exact spectrum: both are found at their place, with the damping of the half-power formula.
func TestFindExact(t *testing.T) {
	const step = 0.5
	p := make([]float64, 1000)
	for i := range p {
		f := float64(i) * step
		p[i] = resonance(f, 120.2, 0.01) + 0.2*resonance(f, 310.6, 0.02)
	}
	got := Find(p, step, Settings{From: 50, To: 450})
	if len(got) != 2 {
		t.Fatalf("%d peaks", len(got))
	}
	for i, want := range []struct{ f, zeta float64 }{{120.2, 0.01}, {310.6, 0.02}} {
		g := got[i]
		// The top of a resonance lies at f0·√(1-2ζ²); a parabola over bins of 0.5 Hz finds it within a twentieth of one.
		if f := want.f * math.Sqrt(1-2*want.zeta*want.zeta); math.Abs(g.Frequency-f) > 0.05*step {
			t.Errorf("frequency %g, want %g", g.Frequency, f)
		}
		if math.Abs(g.Damping-want.zeta) > 0.05*want.zeta {
			t.Errorf("damping %g, want %g", g.Damping, want.zeta)
		}
		if g.FrequencyError != 0 || g.DampingError != 0 || g.Narrow || g.Fitted || g.Prominence < 100 || g.OverFloor < 50 {
			t.Errorf("%+v", g)
		}
	}
	if got := Find(p, step, Settings{From: 130, To: 300}); len(got) != 0 {
		t.Errorf("peaks outside the band: %+v", got)
	}
}

// A shoulder that rises less than the wanted ratio over its valley is none; a mode cut off by a valley has no width.
func TestProminence(t *testing.T) {
	p := []float64{0, 0, 1, 2, 4, 8, 4, 3, 4.4, 3, 2, 1, 0.5, 0.6, 0.5, 0.1, 0, 0}
	if got := Find(p, 1, Settings{}); len(got) != 1 || got[0].Bin != 5 || got[0].Prominence != 8 {
		t.Errorf("%+v", got)
	}
	got := Find(p, 1, Settings{Prominence: 1.4})
	if len(got) != 2 || got[1].Bin != 8 || math.Abs(got[1].Prominence-4.4/3) > 1e-12 {
		t.Fatalf("%+v", got)
	}
	if !math.IsNaN(got[1].Lower) || !math.IsNaN(got[1].Damping) {
		t.Errorf("a width across a valley: %+v", got[1])
	}
	// Of a flat top the first bin counts, and only once.
	if got := Find([]float64{0, 0, 1, 5, 5, 1, 0, 0}, 1, Settings{}); len(got) != 1 || got[0].Bin != 3 {
		t.Errorf("%+v", got)
	}
}

// The response of a single degree of freedom to white noise, seen through Welch: places and dampings scatter about the
// truth by as much as their errors say.
func TestErrorsAreHonest(t *testing.T) {
	const (
		rate, f0, zeta = 1000.0, 150.0, 0.02
		samples        = 50000
		trials         = 60
	)
	settings := spectrum.Settings{Rate: rate, Segment: 2048, Overlap: 1024}
	var place, width, placeSum, widthSum float64
	for seed := uint32(1); seed <= trials; seed++ {
		p, err := spectrum.Welch([][]float64{ring(seed, samples, rate, f0, zeta)}, settings)
		if err != nil {
			t.Fatal(err)
		}
		got := Find(p.Values, p.Step, Settings{
			From: 50, To: 400, Freedom: p.Freedom, Resolution: spectrum.Hann.NoiseBandwidth(2048) * p.Step,
			BinCorrelation: spectrum.Hann.BinCorrelation(2048),
		})
		if len(got) != 1 || !got[0].Fitted {
			t.Fatalf("seed %d: %+v", seed, got)
		}
		g := got[0]
		a, b := (g.Frequency-f0)/g.FrequencyError, (g.Damping-zeta)/g.DampingError
		place += a * a / trials
		width += b * b / trials
		placeSum += g.Frequency / trials
		widthSum += g.Damping / trials
	}
	t.Logf("mean place %.3f Hz, mean damping %.5f; squared normalised errors %.2f, %.2f", placeSum, widthSum, place, width)
	// The mean square of 60 normalised errors has a standard deviation of √(2/60) = 0.18 about 1; the damping error also
	// holds allowances for floor and window, so it may be too large but not by more than half.
	if place < 0.5 || place > 1.6 || width < 0.35 || width > 1.6 {
		t.Errorf("normalised squared errors %.2f of frequency, %.2f of damping, want about 1", place, width)
	}
	if math.Abs(placeSum-f0) > 0.001*f0 || math.Abs(widthSum-zeta) > 0.05*zeta {
		t.Errorf("mean frequency %g, mean damping %g", placeSum, widthSum)
	}
}

// ring is the discrete response (impulse invariant) of a single degree of freedom to white noise.
func ring(seed uint32, n int, rate, f0, zeta float64) []float64 {
	source := noise.Source(seed * 7919)
	w := 2 * math.Pi * f0 / rate
	a1, a2 := 2*math.Exp(-zeta*w)*math.Cos(w*math.Sqrt(1-zeta*zeta)), -math.Exp(-2*zeta*w)
	var y1, y2 float64
	out := make([]float64, n)
	for i := range out {
		y := a1*y1 + a2*y2 + source.Gauss()
		y1, y2 = y, y1
		out[i] = y
	}
	return out
}

// White noise has no peaks.
func TestNoiseHasNoPeaks(t *testing.T) {
	found := 0
	for seed := uint32(1); seed <= 30; seed++ {
		source := noise.Source(seed * 104729)
		x := make([]float64, 60000)
		for i := range x {
			x[i] = source.Gauss()
		}
		p, err := spectrum.Welch([][]float64{x}, spectrum.Settings{Rate: 2000, Segment: 2048, Overlap: 1024})
		if err != nil {
			t.Fatal(err)
		}
		found += len(Find(p.Values, p.Step, Settings{From: 20, To: 800, Freedom: p.Freedom}))
	}
	if found > 1 {
		t.Errorf("%d peaks in 30 spectra of noise", found)
	}
}

// A steady line is as narrow as the window, and its place is found within a hundredth of a bin.
func TestLine(t *testing.T) {
	const rate, f = 1000.0, 123.37
	source := noise.Source(5)
	x := make([]float64, 40000)
	for i := range x {
		x[i] = math.Sin(2*math.Pi*f*float64(i)/rate) + 0.1*source.Uniform()
	}
	p, err := spectrum.Welch([][]float64{x}, spectrum.Settings{Rate: rate, Segment: 1024, Overlap: 512})
	if err != nil {
		t.Fatal(err)
	}
	got := Find(p.Values, p.Step, Settings{Freedom: p.Freedom, Resolution: 1.5 * p.Step, BinCorrelation: 35.0 / 18})
	if len(got) != 1 || !got[0].Narrow || got[0].DampingError < got[0].Damping {
		t.Fatalf("%+v", got)
	}
	// A parabola through the logarithms of a Hann lobe is off by up to 0.016 bins.
	if math.Abs(got[0].Frequency-f) > 0.02*p.Step {
		t.Errorf("line at %g, want %g", got[0].Frequency, f)
	}
}

func BenchmarkFind(b *testing.B) {
	p, err := spectrum.Welch([][]float64{ring(1, 120000, 2000, 150, 0.02)}, spectrum.Settings{Rate: 2000, Segment: 4096, Overlap: 2048})
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		Find(p.Values, p.Step, Settings{From: 20, To: 800, Freedom: p.Freedom, Resolution: 1.5 * p.Step})
	}
}
