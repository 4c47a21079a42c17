package spectrum

import "fmt"

// Detrend says what is taken out of each segment before the window. The zero value takes out the mean.
type Detrend uint8

const (
	// DetrendConstant takes out the mean of the segment.
	DetrendConstant Detrend = iota
	// DetrendNone takes out nothing.
	DetrendNone
	// DetrendLinear takes out the least-squares straight line of the segment.
	DetrendLinear
)

// Scaling says what the values of a spectrum are. The zero value is Density.
type Scaling uint8

const (
	// Density is a one-sided power spectral density in unit²/Hz.
	Density Scaling = iota
	// Spectrum is a power spectrum in unit²: a line reads its mean square.
	Spectrum
)

// Settings say how a signal is cut and averaged. Rate and Segment must be given; the zero value of everything else is
// usable: no overlap, Hann, mean taken out, density.
type Settings struct {
	Rate    float64 // fs, samples per second, above 0
	Segment int     // N, samples, at least 2
	Overlap int     // samples that neighbouring segments share, 0 to Segment-1
	Window  Window
	Detrend Detrend
	Scaling Scaling
}

// Bins returns the number of frequencies of a spectrum with these settings, N/2+1.
func (s Settings) Bins() int { return s.Segment/2 + 1 }

// Step returns the bin width df = Rate/Segment in Hz.
func (s Settings) Step() float64 { return s.Rate / float64(s.Segment) }

// Segments returns how many whole segments a run of that many samples yields.
func (s Settings) Segments(samples int) int {
	if samples < s.Segment {
		return 0
	}
	return (samples-s.Segment)/(s.Segment-s.Overlap) + 1
}

func (s Settings) check() {
	switch {
	case !(s.Rate > 0):
		panic("spectrum: sample rate must be above zero")
	case s.Segment < 2:
		panic("spectrum: a segment needs at least two samples")
	case s.Overlap < 0 || s.Overlap >= s.Segment:
		panic("spectrum: overlap must lie between zero and the segment less one")
	case s.Detrend > DetrendLinear:
		panic("spectrum: no such detrending")
	case s.Scaling > Spectrum:
		panic("spectrum: no such scaling")
	}
	s.Window.check()
}

// ShortError reports that no run holds a whole segment.
type ShortError struct {
	Longest int // samples of the longest run
	Segment int // samples of a segment
}

func (e *ShortError) Error() string {
	return fmt.Sprintf("the longest stretch without a gap has %d samples, a segment needs %d", e.Longest, e.Segment)
}

// transformer turns one segment at a time into its spectrum. It owns its scratch.
type transformer struct {
	settings Settings
	window   []float64
	scaled   []float64 // the segment, detrended and windowed
	fft      *realTransform
	centre   float64 // mean index of a segment
	spread   float64 // Σ (i-centre)²
}

func newTransformer(s Settings) *transformer {
	n := float64(s.Segment)
	return &transformer{
		settings: s,
		window:   s.Window.Samples(s.Segment),
		scaled:   make([]float64, s.Segment),
		fft:      newRealTransform(s.Segment),
		centre:   (n - 1) / 2,
		spread:   n * (n*n - 1) / 12,
	}
}

// factor returns what |X|² of an inner bin is multiplied by; bins 0 and, for even N, N/2 take half of it.
func (t *transformer) factor() float64 {
	sum, square, _ := moments(t.window)
	if t.settings.Scaling == Spectrum {
		return 2 / (sum * sum)
	}
	return 2 / (t.settings.Rate * square)
}

// apply writes the transform of x (N samples) into dst (N/2+1 bins).
func (t *transformer) apply(dst []complex128, x []float64) {
	mean, slope := 0.0, 0.0
	if t.settings.Detrend != DetrendNone {
		for _, v := range x {
			mean += v
		}
		mean /= float64(len(x))
	}
	if t.settings.Detrend == DetrendLinear {
		for i, v := range x {
			slope += (float64(i) - t.centre) * (v - mean)
		}
		slope /= t.spread
	}
	for i, v := range x {
		t.scaled[i] = (v - mean - slope*(float64(i)-t.centre)) * t.window[i]
	}
	t.fft.coefficients(dst, t.scaled)
}

// halve halves the bins that have no mirror image.
func halve[T float64 | complex128](values []T, segment int, half T) {
	values[0] *= half
	if segment%2 == 0 {
		values[len(values)-1] *= half
	}
}
