package spectrum

import (
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/signal/internal/noise"
)

func gauss(seed uint32, n int) []float64 {
	source := noise.Source(seed)
	x := make([]float64, n)
	for i := range x {
		x[i] = source.Gauss()
	}
	return x
}

// Segments of several runs are those of each run by itself: the mean of single spectra weighted by their segments.
func TestRunsAreNotStraddled(t *testing.T) {
	x := gauss(7, 3000)
	s := Settings{Rate: 500, Segment: 128, Overlap: 64, Detrend: DetrendLinear}
	runs := [][]float64{x[:1000], x[1000:1100], x[1100:]} // the middle one is shorter than a segment
	all, err := Welch(runs, s)
	if err != nil {
		t.Fatal(err)
	}
	a, _ := Welch(runs[:1], s)
	b, _ := Welch(runs[2:], s)
	for k := range all.Values {
		want := (a.Values[k]*float64(a.Segments) + b.Values[k]*float64(b.Segments)) / float64(a.Segments+b.Segments)
		if math.Abs(all.Values[k]-want) > 1e-14*want {
			t.Fatalf("bin %d: %g, want %g", k, all.Values[k], want)
		}
	}
	if all.Segments != a.Segments+b.Segments || all.Unused != 100+a.Unused+b.Unused || all.Used+all.Unused != 3000 {
		t.Errorf("segments %d, used %d, unused %d", all.Segments, all.Used, all.Unused)
	}
	// Independent runs add their degrees of freedom in the sense of Welch 1967: 1/ν is the weighted sum of variances.
	ka, kb := float64(a.Segments), float64(b.Segments)
	want := (ka + kb) * (ka + kb) / (ka*ka/a.Freedom + kb*kb/b.Freedom)
	if math.Abs(all.Freedom-want) > 1e-9*want {
		t.Errorf("freedom %g, want %g", all.Freedom, want)
	}
}

// The flat-top window reads the amplitude of a line between two bins: a²/2 within 0.3 % (0.01 dB).
func TestFlatTopReadsAmplitude(t *testing.T) {
	const rate, n, a = 1000.0, 1000, 2.5
	for _, f := range []float64{100, 100.25, 100.5} {
		x := make([]float64, 8*n)
		for i := range x {
			x[i] = a * math.Sin(2*math.Pi*f*float64(i)/rate)
		}
		p, err := Welch([][]float64{x}, Settings{Rate: rate, Segment: n, Window: FlatTop, Scaling: Spectrum})
		if err != nil {
			t.Fatal(err)
		}
		if got := p.Values[100]; math.Abs(got-a*a/2) > 0.003*a*a/2 {
			t.Errorf("line at %g Hz reads %g, want %g", f, got, a*a/2)
		}
	}
}

// The flat-top window as published: noise bandwidth 3.7702 bins, scalloping 0.01 dB (values from memory).
func TestFlatTopFigures(t *testing.T) {
	if got := FlatTop.NoiseBandwidth(512); math.Abs(got-3.7702) > 1e-4 {
		t.Errorf("noise bandwidth %g", got)
	}
	if got := FlatTop.ScallopingLoss(512); math.Abs(got) > 0.011 {
		t.Errorf("scalloping %g dB", got)
	}
}

// The cross spectrum of a signal with itself is its power at every bin, the ends among them.
func TestCrossOfItself(t *testing.T) {
	for _, n := range []int{64, 65} {
		x, s := [][]float64{gauss(2, 1000)}, Settings{Rate: 100, Segment: n, Overlap: 32, Detrend: DetrendNone}
		p, err := Welch(x, s)
		if err != nil {
			t.Fatal(err)
		}
		c, err := CrossSpectrum(x, x, s)
		if err != nil {
			t.Fatal(err)
		}
		for k, v := range p.Values {
			if math.Abs(c.XX[k]-v)+math.Abs(c.YY[k]-v)+math.Abs(real(c.XY[k])-v)+math.Abs(imag(c.XY[k])) > 1e-12*v {
				t.Errorf("bin %d: %g, %g, %g, want %g", k, c.XX[k], c.YY[k], c.XY[k], v)
			}
			if math.Abs(c.Coherence()[k]-1) > 1e-12 {
				t.Errorf("bin %d: coherence %g", k, c.Coherence()[k])
			}
		}
	}
}

// The interval must hold the true density as often as it says. White noise of unit variance has the density 2/fs.
func TestBoundsHoldTheTruth(t *testing.T) {
	s := Settings{Rate: 2, Segment: 64, Overlap: 32}
	inside, total := 0, 0
	for seed := uint32(1); seed <= 60; seed++ {
		p, err := Welch([][]float64{gauss(seed, 1024)}, s)
		if err != nil {
			t.Fatal(err)
		}
		lower, upper := p.Bounds(0.9)
		for k := 2; k < 31; k += 3 { // three bins apart the estimates are all but independent
			total++
			if p.Values[k]*lower <= 1 && 1 <= p.Values[k]*upper {
				inside++
			}
		}
	}
	// 600 trials at 0.9 have a standard deviation of 0.012.
	if share := float64(inside) / float64(total); share < 0.86 || share > 0.94 {
		t.Errorf("90 %% interval holds the truth in %.1f %% of %d cases", 100*share, total)
	}
}

// The variance of a mean over M bins is (2/ν)·BinCorrelation/M.
func TestBinCorrelation(t *testing.T) {
	if got := Hann.BinCorrelation(256); math.Abs(got-35.0/18) > 1e-12 {
		t.Errorf("Hann: %g, want 35/18", got)
	}
	s := Settings{Rate: 2, Segment: 128}
	var squares float64
	const trials, bins = 400, 40
	var freedom float64
	for seed := uint32(1); seed <= trials; seed++ {
		p, err := Welch([][]float64{gauss(seed*977, 1024)}, s)
		if err != nil {
			t.Fatal(err)
		}
		mean := 0.0
		for k := 12; k < 12+bins; k++ {
			mean += p.Values[k] / bins
		}
		squares += (mean - 1) * (mean - 1) / trials
		freedom = p.Freedom
	}
	want := 2 / freedom * Hann.BinCorrelation(128) / bins
	if math.Abs(squares-want) > 0.25*want {
		t.Errorf("variance of the band mean %g, want %g", squares, want)
	}
}

func TestBadSignals(t *testing.T) {
	s := Settings{Rate: 1, Segment: 8}
	var short *ShortError
	if _, err := Welch([][]float64{make([]float64, 3), make([]float64, 5)}, s); !errors.As(err, &short) || short.Longest != 5 {
		t.Errorf("short: %v", err)
	}
	x := make([]float64, 16)
	x[9] = math.NaN()
	if _, err := Welch([][]float64{x}, s); !errors.Is(err, ErrNotFinite) {
		t.Errorf("NaN: %v", err)
	}
	if _, err := CrossSpectrum([][]float64{make([]float64, 16)}, [][]float64{x}, s); !errors.Is(err, ErrNotFinite) {
		t.Errorf("NaN in the output: %v", err)
	}
}

// Three axes of a minute at 2 kHz.
func BenchmarkWelchThreeAxes(b *testing.B) {
	x := gauss(3, 120000)
	s := Settings{Rate: 2000, Segment: 4096, Overlap: 2048}
	b.SetBytes(3 * 8 * int64(len(x)))
	for b.Loop() {
		for range 3 {
			if _, err := Welch([][]float64{x}, s); err != nil {
				b.Fatal(err)
			}
		}
	}
}

// The matrix of two channels holds their Welch spectra on the diagonal and their cross spectrum beside it.
func TestCrossMatrix(t *testing.T) {
	source := noise.Source(8)
	x, y := make([]float64, 3000), make([]float64, 3000)
	for i := range x {
		x[i] = source.Gauss()
		y[i] = source.Gauss()
		if i > 2 {
			y[i] += x[i-2]
		}
	}
	s := Settings{Rate: 500, Segment: 256, Overlap: 100}
	m, err := CrossMatrix([][][]float64{{x[:1800], y[:1800]}, {x[1800:], y[1800:]}}, s)
	if err != nil {
		t.Fatal(err)
	}
	c, err := CrossSpectrum([][]float64{x[:1800], x[1800:]}, [][]float64{y[:1800], y[1800:]}, s)
	if err != nil {
		t.Fatal(err)
	}
	for k, v := range m.Values {
		near := func(got, want complex128) bool { return cmplx.Abs(got-want) < 1e-12*(c.XX[k]+c.YY[k]) }
		if !near(v[0], complex(c.XX[k], 0)) || !near(v[3], complex(c.YY[k], 0)) || !near(v[2], c.XY[k]) || !near(v[1], cmplx.Conj(c.XY[k])) {
			t.Fatalf("bin %d: %v, want %g, %g, %v", k, v, c.XX[k], c.YY[k], c.XY[k])
		}
	}
}
