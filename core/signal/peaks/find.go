package peaks

import (
	"math"
	"slices"
)

// Settings say where to look and what to believe. The zero value searches the whole of an exact spectrum.
type Settings struct {
	From, To float64 // band in Hz in which a peak may lie; To 0 means to the end
	// Prominence is the least ratio of a peak to its valleys; 0 means 2 (3 dB). Values below 1 count as 1.
	Prominence float64
	// Freedom is ν of the values; 0 for an exact spectrum.
	Freedom float64
	// Resolution is the equivalent noise bandwidth of the window in Hz; 0 for an exact spectrum.
	Resolution float64
	// BinCorrelation is how much the likeness of neighbouring bins raises the variance of a mean over bins (Window.
	// BinCorrelation of package spectrum); 0 means 1.
	BinCorrelation float64
}

// Peak is one peak.
type Peak struct {
	Bin int
	// Frequency is the place of the peak in Hz, FrequencyError its standard error from scatter (0 for an exact spectrum).
	Frequency, FrequencyError float64
	// Value is P at the peak, interpolated over three bins.
	Value float64
	// Prominence and OverFloor are P over the higher valley and over the local median.
	Prominence, OverFloor float64
	// Lower and Upper are the half-power frequencies in Hz; NaN on a side where a valley or the end comes first.
	Lower, Upper float64
	// Damping is ζ and DampingError its standard error; both NaN if either half-power frequency is.
	Damping, DampingError float64
	// Narrow tells that the width is that of the window: a line, or a mode with less damping than can be seen.
	Narrow bool
	// Fitted tells that place and width come from the fit to 1/P.
	Fitted bool
}

const (
	defaultProminence = 2
	endBins           = 2 // bins at either end that are not looked at: taking out the mean lowers them
	scatterSpan       = 7 // standard deviations of ln P that noise alone does not span, see the package comment
)

// Find returns the peaks of the spectrum p, whose bins lie step Hz apart from 0 Hz, by rising frequency. Values must be
// finite and not negative. The two bins at
// either end are not looked at, since taking out a mean lowers them. It panics unless step > 0.
func Find(p []float64, step float64, s Settings) []Peak {
	if !(step > 0) {
		panic("peaks: bin width must be above zero")
	}
	limit := s.Prominence
	if limit == 0 {
		limit = defaultProminence
	}
	if s.Freedom > 0 {
		limit = max(limit, math.Exp(scatterSpan*math.Sqrt(2/s.Freedom)))
	}
	limit = max(limit, 1)
	to := s.To
	if to == 0 {
		to = float64(len(p)) * step
	}
	var out []Peak
	for i := endBins; i < len(p)-endBins; i++ {
		if f := float64(i) * step; f < s.From || f > to || !isMaximum(p, i) {
			continue
		}
		left, right := valleys(p, i)
		valley := max(p[left], p[right])
		if !(p[i] > valley) || p[i] < limit*valley {
			continue
		}
		peak := Peak{Bin: i, Prominence: p[i] / valley, OverFloor: p[i] / floor(p, i, step, s.From, to)}
		describe(&peak, p, step, left, right, s)
		out = append(out, peak)
	}
	return out
}

// isMaximum tells whether p[i] is higher than its neighbours; of equal neighbours the first counts.
func isMaximum(p []float64, i int) bool {
	if p[i] <= p[i-1] {
		return false
	}
	for k := i + 1; k < len(p); k++ {
		if p[k] != p[i] {
			return p[k] < p[i]
		}
	}
	return false
}

// valleys returns the places of the lowest values between i and the next higher value on either side, or the end.
func valleys(p []float64, i int) (left, right int) {
	left, right = i, i
	for k := i - 1; k >= endBins && p[k] <= p[i]; k-- {
		if p[k] < p[left] {
			left = k
		}
	}
	for k := i + 1; k < len(p)-endBins && p[k] <= p[i]; k++ {
		if p[k] < p[right] {
			right = k
		}
	}
	return left, right
}

// floor returns the median over the octave around bin i, cut to the band and to the spectrum; at least five bins.
func floor(p []float64, i int, step, from, to float64) float64 {
	low := int(math.Ceil(max(from/step, float64(i)/math.Sqrt2)))
	high := int(math.Floor(min(to/step, float64(i)*math.Sqrt2)))
	low, high = max(0, min(low, i-2)), min(len(p)-1, max(high, i+2))
	sorted := slices.Clone(p[low : high+1])
	slices.Sort(sorted)
	return sorted[len(sorted)/2]
}

// describe fills in place, width and their errors.
func describe(peak *Peak, p []float64, step float64, left, right int, s Settings) {
	place(peak, p, step, s)
	lower, upper := HalfPower(p[left:right+1], step, peak.Bin-left)
	peak.Lower, peak.Upper = lower+float64(left)*step, upper+float64(left)*step
	peak.Damping, peak.DampingError = math.NaN(), math.NaN()
	if math.IsNaN(lower) || math.IsNaN(upper) {
		return
	}
	half := (upper - lower) / 2
	peak.Damping = half / peak.Frequency
	peak.Narrow = 2*half <= narrowWidths*s.Resolution
	switch {
	case peak.Narrow:
		peak.DampingError = peak.Damping
	case s.Freedom == 0:
		peak.DampingError = 0
	default:
		// Without a fit each half-power point scatters by γ/2 per unit of ln P (the slope of a Lorentz curve at half its
		// height is 1/γ), from its own value and from that of the maximum.
		peak.DampingError = peak.Damping * math.Sqrt(2/s.Freedom)
		refine(peak, p, step, left, right, half, s)
	}
}

// narrowWidths is the half-power width, in noise bandwidths of the window, up to which a peak counts as narrow. A line
// seen through a Hann window has 0.96.
const narrowWidths = 1.5

// place puts the peak at the top of the parabola through the logarithms of three values.
func place(peak *Peak, p []float64, step float64, s Settings) {
	i := peak.Bin
	peak.Frequency, peak.Value = float64(i)*step, p[i]
	if p[i-1] <= 0 || p[i+1] <= 0 {
		return
	}
	a, b, c := math.Log(p[i-1]), math.Log(p[i]), math.Log(p[i+1])
	bend := 2*b - a - c
	if bend <= 0 {
		return
	}
	shift := (c - a) / (2 * bend)
	peak.Frequency += shift * step
	peak.Value = math.Exp(b + (c-a)*shift/4)
	if s.Freedom > 0 {
		// The difference of two logarithms scatters by √2·√(2/ν) = 2/√ν; the top cannot lie outside the three values.
		peak.FrequencyError = step * min(1, 1/(bend*math.Sqrt(s.Freedom)))
	}
}

// HalfPower returns the half-power frequencies beside the maximum at bin i, by linear interpolation in amplitude, in Hz
// from bin 0; NaN on a side where the spectrum ends first. P is not negative.
func HalfPower(p []float64, step float64, i int) (lower, upper float64) {
	lower, upper = math.NaN(), math.NaN()
	edge := math.Sqrt(p[i] / 2)
	for k := i - 1; k >= 0; k-- {
		if a := math.Sqrt(p[k]); a <= edge {
			b := math.Sqrt(p[k+1])
			lower = step * (float64(k) + (edge-a)/(b-a))
			break
		}
	}
	for k := i + 1; k < len(p); k++ {
		if a := math.Sqrt(p[k]); a <= edge {
			b := math.Sqrt(p[k-1])
			upper = step * (float64(k) - (edge-a)/(b-a))
			break
		}
	}
	return lower, upper
}
