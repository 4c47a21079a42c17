package spectrum

import (
	"math"
	"testing"

	"hushframe/core/signal/internal/noise"
)

// tried calls f with many settings and signals of lengths that do and do not suit the transform.
func tried(t *testing.T, f func(t *testing.T, s Settings, x []float64)) {
	t.Helper()
	source := noise.Source(77)
	lengths := []int{2, 3, 7, 8, 15, 16, 60, 100, 128, 250, 256, 1000, 1024}
	for i := range 120 {
		n := lengths[i%len(lengths)]
		s := Settings{Rate: 1 + 3000*(source.Uniform()+0.5), Segment: n, Overlap: int((source.Uniform() + 0.5) * float64(n)), Window: Window(i % int(windowCount)),
			Detrend: []Detrend{DetrendConstant, DetrendNone, DetrendLinear}[i%3]}
		s.Overlap = min(s.Overlap, n-1)
		if n < 8 {
			s.Window = Boxcar // a window of three samples may be zero
		}
		x := make([]float64, n+int(3*(source.Uniform()+0.5)*float64(n)))
		for k := range x {
			x[k] = 2*source.Gauss() + 0.5
		}
		f(t, s, x)
	}
}

func near(a, b, scale float64) bool { return math.Abs(a-b) <= 1e-10*(scale+math.Abs(b)) }

// Parseval: the integral of the density over frequency is the mean square of the windowed segments over that of the window, whatever window
// and detrending; without a window it is the mean square itself.
func TestParseval(t *testing.T) {
	tried(t, func(t *testing.T, s Settings, x []float64) {
		p, err := Welch([][]float64{x}, s)
		if err != nil {
			t.Fatal(err)
		}
		integral := 0.0
		for _, v := range p.Values {
			integral += v * p.Step
		}
		w := s.Window.Samples(s.Segment)
		_, square, _ := moments(w)
		tr := newTransformer(s)
		bins := make([]complex128, s.Bins())
		want := 0.0
		for i, at := 0, 0; i < s.Segments(len(x)); i, at = i+1, at+s.Segment-s.Overlap {
			tr.apply(bins, x[at:at+s.Segment])
			for _, v := range tr.scaled { // detrended and windowed
				want += v * v / square / float64(p.Segments)
			}
		}
		if !near(integral, want, 1) {
			t.Errorf("%+v: the density holds %g, the signal %g", s, integral, want)
		}
	})
}

// Shift: turning a segment round within itself changes no bin of its power without a window; leaving out whole steps at the beginning
// leaves the other segments as they are.
func TestShiftInvariance(t *testing.T) {
	tried(t, func(t *testing.T, s Settings, x []float64) {
		turned := s
		turned.Window, turned.Detrend, turned.Overlap = Boxcar, DetrendConstant, 0
		one := x[:s.Segment]
		whole, err := Welch([][]float64{one}, turned)
		if err != nil {
			t.Fatal(err)
		}
		k := s.Segment / 3
		other, err := Welch([][]float64{append(append([]float64(nil), one[k:]...), one[:k]...)}, turned)
		if err != nil {
			t.Fatal(err)
		}
		for b := range whole.Values {
			if !near(other.Values[b], whole.Values[b], 1e-2) {
				t.Errorf("%d samples turned by %d: bin %d is %g and was %g", s.Segment, k, b, other.Values[b], whole.Values[b])
			}
		}
		step := s.Segment - s.Overlap
		if len(x) < s.Segment+step {
			return
		}
		var all, later [][]float64
		keep := func(into *[][]float64) func(int, int, []float64) {
			return func(_, _ int, v []float64) { *into = append(*into, append([]float64(nil), v...)) }
		}
		if err := Slices([][]float64{x}, s, keep(&all)); err != nil {
			t.Fatal(err)
		}
		if err := Slices([][]float64{x[step:]}, s, keep(&later)); err != nil {
			t.Fatal(err)
		}
		if len(later) != len(all)-1 {
			t.Fatalf("%d segments of %d are left", len(later), len(all))
		}
		for i, v := range later {
			for b := range v {
				if v[b] != all[i+1][b] {
					t.Errorf("segment %d, bin %d: %g and %g", i, b, v[b], all[i+1][b])
				}
			}
		}
	})
}

// Chunks: the mean of the segments one by one is what Welch gives, and so it is when the signal comes in runs that are cut where segments
// end, whatever the cut.
func TestChunkedEqualsWhole(t *testing.T) {
	tried(t, func(t *testing.T, s Settings, x []float64) {
		whole, err := Welch([][]float64{x}, s)
		if err != nil {
			t.Fatal(err)
		}
		mean := make([]float64, s.Bins())
		if err := Slices([][]float64{x}, s, func(_, _ int, v []float64) {
			for b := range v {
				mean[b] += v[b] / float64(whole.Segments)
			}
		}); err != nil {
			t.Fatal(err)
		}
		s.Overlap = 0
		apart, err := Welch([][]float64{x}, s)
		if err != nil {
			t.Fatal(err)
		}
		var runs [][]float64
		for at := 0; at < len(x); at += s.Segment {
			runs = append(runs, x[at:min(len(x), at+s.Segment)])
		}
		cut, err := Welch(runs, s)
		if err != nil {
			t.Fatal(err)
		}
		for b := range mean {
			if !near(mean[b], whole.Values[b], 1e-2) || !near(cut.Values[b], apart.Values[b], 0) {
				t.Errorf("%+v, bin %d: %g and %g, %g and %g", s, b, mean[b], whole.Values[b], cut.Values[b], apart.Values[b])
			}
		}
		if cut.Segments != apart.Segments || !near(cut.Freedom, apart.Freedom, 0) {
			t.Errorf("%d segments and %d, ν %g and %g", cut.Segments, apart.Segments, cut.Freedom, apart.Freedom)
		}
	})
}

// Of independent noise, the share of bins beyond the limit is one less the level. Bendat and Piersol, Random Data, 4th ed., 2010, chapter 9.
func TestCoherenceLimit(t *testing.T) {
	s := Settings{Rate: 1, Segment: 64, Overlap: 32}
	above, count := 0, 0
	freedom := 0.0
	for trial := range 60 {
		x, y := gauss(uint32(2*trial+1), 1600), gauss(uint32(2*trial+2), 1600)
		c, err := CrossSpectrum([][]float64{x}, [][]float64{y}, s)
		if err != nil {
			t.Fatal(err)
		}
		freedom = c.Freedom
		limit := CoherenceLimit(c.Freedom, 0.95)
		for _, v := range c.Coherence()[2:31] {
			count++
			if v > limit {
				above++
			}
		}
	}
	if share := float64(above) / float64(count); math.Abs(share-0.05) > 0.012 { // 1740 bins, half of them independent: ±0.0074
		t.Errorf("%.4f of the bins exceed the limit for ν %.1f", share, freedom)
	}
	if !math.IsNaN(CoherenceLimit(2, 0.95)) {
		t.Error("one segment has a limit")
	}
}
