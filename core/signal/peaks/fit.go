package peaks

import "math"

const (
	fitReach  = 1.5 // half-widths γ on either side that the fit uses
	fitBins   = 5   // values below which there is no fit
	fitRounds = 12  // times the fit is moved to its own place and width
	fitSteps  = 25  // reweightings of one fit

	// widening is what a Hann window of unit noise bandwidth adds to γ², measured on exact Lorentz curves at half-widths
	// of 1.6 to 5 bins (there 0.68 to 0.82 of a squared bin, or of 4/9 squared noise bandwidths).
	widening = 0.75 / 2.25
)

// lorentz is a fit 1/P = a + b·x + c·x², x = (f - f0)/γ.
type lorentz struct {
	place, half           float64 // f0 and γ in Hz
	placeError, halfError float64 // standard errors
}

// refine replaces place and width by those of the fit, if there are values enough and it settles. The floor on which the
// peak stands widens it; the fit is repeated with the higher valley taken off, and the difference counts as an error.
func refine(peak *Peak, p []float64, step float64, left, right int, half float64, s Settings) {
	first, ok := fit(p, step, left, right, lorentz{place: peak.Frequency, half: half}, 0, s)
	if !ok {
		return
	}
	second, ok := fit(p, step, left, right, first, max(p[left], p[right]), s)
	if !ok {
		return
	}
	added := widening * s.Resolution * s.Resolution
	square := first.half * first.half
	if square <= 2*added {
		return
	}
	half = math.Sqrt(square - added)
	if 2*half <= narrowWidths*s.Resolution {
		peak.Narrow, peak.DampingError = true, peak.Damping
		return
	}
	stand := first.half - second.half
	bias := (first.half - half) / 2
	peak.Fitted = true
	peak.Frequency, peak.FrequencyError = first.place, math.Hypot(first.placeError, first.place-second.place)
	peak.Lower, peak.Upper = first.place-half, first.place+half
	peak.Damping = half / first.place
	peak.DampingError = math.Sqrt(first.halfError*first.halfError+stand*stand+bias*bias) / first.place
}

// fit moves and reweights until place and width stand still, using bins left to right less a pedestal.
func fit(p []float64, step float64, left, right int, start lorentz, pedestal float64, s Settings) (lorentz, bool) {
	at := start
	scatter := 2 / s.Freedom * max(1, s.BinCorrelation)
	for range fitRounds {
		low := max(left, int(math.Ceil((at.place-fitReach*at.half)/step)))
		high := min(right, int(math.Floor((at.place+fitReach*at.half)/step)))
		if high-low+1 < fitBins {
			return lorentz{}, false
		}
		next, ok := solve(p, step, low, high, at, pedestal, scatter)
		if !ok {
			return lorentz{}, false
		}
		// A fit that leaves its own values has found something else than this peak.
		if next.place < float64(low)*step || next.place > float64(high)*step || next.half > 2*start.half+2*step {
			return lorentz{}, false
		}
		moved := math.Abs(next.place-at.place) + math.Abs(next.half-at.half)
		at = next
		if moved < 1e-9*at.half {
			break
		}
	}
	return at, true
}

// solve fits bins low to high by reweighted least squares, gamma distribution with reciprocal link.
func solve(p []float64, step float64, low, high int, at lorentz, pedestal, scatter float64) (lorentz, bool) {
	n := high - low + 1
	x, y, mean := make([]float64, n), make([]float64, n), make([]float64, n)
	top := 0.0
	for i := range x {
		top = max(top, p[low+i])
	}
	for i := range x {
		x[i] = (float64(low+i)*step - at.place) / at.half
		y[i] = max(p[low+i]-pedestal, 1e-3*top) / top
		mean[i] = y[i]
	}
	var beta [3]float64
	var normal [3][3]float64
	for range fitSteps {
		normal, beta = [3][3]float64{}, [3]float64{}
		for i, u := range x {
			row := [3]float64{1, u, u * u}
			w := mean[i] * mean[i]
			z := 1/mean[i] - (y[i]-mean[i])/w
			for r := range 3 {
				for c := range 3 {
					normal[r][c] += w * row[r] * row[c]
				}
				beta[r] += w * row[r] * z
			}
		}
		inverse, ok := invert(normal)
		if !ok {
			return lorentz{}, false
		}
		beta = times(inverse, beta)
		change := 0.0
		for i, u := range x {
			eta := beta[0] + u*(beta[1]+u*beta[2])
			// A step may overshoot to where the reciprocal is negative; hold the mean to what the values allow.
			next := 1 / max(eta, 0.1)
			change = max(change, math.Abs(next-mean[i])/next)
			mean[i] = next
		}
		if change < 1e-12 {
			break
		}
	}
	a, b, c := beta[0], beta[1], beta[2]
	square := a/c - b*b/(4*c*c)
	if !(c > 0) || !(square > 0) {
		return lorentz{}, false
	}
	covariance, ok := invert(normal)
	if !ok {
		return lorentz{}, false
	}
	centre, width := -b/(2*c), math.Sqrt(square)
	placeBy := [3]float64{0, -1 / (2 * c), b / (2 * c * c)}
	halfBy := [3]float64{1 / (2 * c * width), -b / (4 * c * c * width), (-a/(c*c) + b*b/(2*c*c*c)) / (2 * width)}
	return lorentz{
		place: at.place + centre*at.half, half: width * at.half,
		placeError: at.half * math.Sqrt(scatter*quadratic(covariance, placeBy)),
		halfError:  at.half * math.Sqrt(scatter*quadratic(covariance, halfBy)),
	}, true
}

func invert(m [3][3]float64) (out [3][3]float64, ok bool) {
	for r := range 3 {
		for c := range 3 {
			r1, r2, c1, c2 := (r+1)%3, (r+2)%3, (c+1)%3, (c+2)%3
			out[c][r] = m[r1][c1]*m[r2][c2] - m[r1][c2]*m[r2][c1]
		}
	}
	det := m[0][0]*out[0][0] + m[0][1]*out[1][0] + m[0][2]*out[2][0]
	if !(math.Abs(det) > 1e-12*math.Abs(m[0][0]*m[1][1]*m[2][2])) {
		return out, false
	}
	for r := range 3 {
		for c := range 3 {
			out[r][c] /= det
		}
	}
	return out, true
}

func times(m [3][3]float64, v [3]float64) (out [3]float64) {
	for r := range 3 {
		for c := range 3 {
			out[r] += m[r][c] * v[c]
		}
	}
	return out
}

func quadratic(m [3][3]float64, v [3]float64) float64 {
	w := times(m, v)
	return v[0]*w[0] + v[1]*w[1] + v[2]*w[2]
}
