package spectrum

import "math"

// Window names one of the cosine-sum windows, all in their periodic form:
//
//	w[i] = a0 - a1·cos(2πi/N) + a2·cos(4πi/N) - …,   i = 0 … N-1
//
// The zero value is Hann.
type Window uint8

const (
	// Hann has a = 0.5, 0.5: the usual choice for broadband vibration.
	Hann Window = iota
	// Boxcar has a = 1: no window at all; the best resolution and the worst leakage.
	Boxcar
	// Hamming has a = 0.54, 0.46.
	Hamming
	// Blackman has a = 0.42, 0.5, 0.08: little leakage, wider lobe.
	Blackman
	// FlatTop has five terms: it reads the amplitude of a line within 0.01 dB wherever it falls between two bins, with a
	// lobe of ten bins (coefficients of G. D'Antona and A. Ferrero, Digital Signal Processing for Measurement Systems, 2006).
	FlatTop

	windowCount
)

var windowTerms = [windowCount][]float64{
	Hann:     {0.5, 0.5},
	Boxcar:   {1},
	Hamming:  {0.54, 0.46},
	Blackman: {0.42, 0.5, 0.08},
	FlatTop:  {0.21557895, 0.41663158, 0.277263158, 0.083578947, 0.006947368},
}

var windowNames = [windowCount]string{
	Hann: "hann", Boxcar: "boxcar", Hamming: "hamming", Blackman: "blackman", FlatTop: "flat-top",
}

// WindowNames lists the names that ParseWindow knows, in a fixed order.
func WindowNames() []string { return append([]string(nil), windowNames[:]...) }

// ParseWindow returns the window of that name; ok tells whether there is one.
func ParseWindow(name string) (w Window, ok bool) {
	for i, n := range windowNames {
		if n == name {
			return Window(i), true
		}
	}
	return Hann, false
}

// String returns the name that ParseWindow reads.
func (w Window) String() string {
	w.check()
	return windowNames[w]
}

func (w Window) check() {
	if w >= windowCount {
		panic("spectrum: no such window")
	}
}

// Samples returns the n samples of the window. It panics if n is below 1.
func (w Window) Samples(n int) []float64 {
	w.check()
	if n < 1 {
		panic("spectrum: a window needs at least one sample")
	}
	out := make([]float64, n)
	for i := range out {
		sign := 1.0
		for k, a := range windowTerms[w] {
			// The integer product is reduced first, so that long windows stay symmetric to the last digit.
			out[i] += sign * a * math.Cos(2*math.Pi*float64((i*k)%n)/float64(n))
			sign = -sign
		}
	}
	return out
}

// CoherentGain returns Σw/N for n samples: the factor by which the window lowers the amplitude of a line.
func (w Window) CoherentGain(n int) float64 {
	sum, _, _ := moments(w.Samples(n))
	return sum / float64(n)
}

// NoiseBandwidth returns the equivalent noise bandwidth N·Σw²/(Σw)² for n samples, in bins.
func (w Window) NoiseBandwidth(n int) float64 {
	sum, square, _ := moments(w.Samples(n))
	return float64(n) * square / (sum * sum)
}

// ScallopingLoss returns, in dB, how much lower a line half-way between two bins reads than one on a bin.
func (w Window) ScallopingLoss(n int) float64 {
	var re, im, sum float64
	for i, v := range w.Samples(n) {
		sin, cos := math.Sincos(math.Pi * float64(i) / float64(n))
		re += v * cos
		im += v * sin
		sum += v
	}
	return -20 * math.Log10(math.Hypot(re, im)/sum)
}

// OverlapCorrelation returns Σ w[i]·w[i+step] / Σ w², the correlation between the windows of two segments of n samples
// that start step samples apart. Its square is the correlation of their powers for white noise.
func (w Window) OverlapCorrelation(n, step int) float64 {
	if step < 0 {
		panic("spectrum: negative step between segments")
	}
	return overlap(w.Samples(n), step)
}

// BinCorrelation returns N·Σw⁴/(Σw²)² for n samples: the factor by which the correlation of neighbouring bins raises
// the variance of a mean over many bins of a density (1 without a window, 35/18 for Hann).
func (w Window) BinCorrelation(n int) float64 {
	_, square, fourth := moments(w.Samples(n))
	return float64(n) * fourth / (square * square)
}

func moments(w []float64) (sum, square, fourth float64) {
	for _, v := range w {
		sum += v
		square += v * v
		fourth += v * v * v * v
	}
	return sum, square, fourth
}

func overlap(w []float64, step int) float64 {
	var shared, square float64
	for i, v := range w {
		square += v * v
		if i+step < len(w) {
			shared += v * w[i+step]
		}
	}
	return shared / square
}
