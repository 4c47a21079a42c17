package spectrum

import (
	"errors"
	"math"
)

// ErrNotFinite reports a signal that holds a value which is not a finite number.
var ErrNotFinite = errors.New("the signal holds a value that is not a finite number")

// Average tells what went into an averaged spectrum.
type Average struct {
	Step     float64 // df, Hz
	Segments int     // K
	Freedom  float64 // ν at the bins other than the first and last, see Freedom
	Used     int     // samples that are in at least one segment
	Unused   int     // samples after the last whole segment of a run, or in runs shorter than a segment
}

// Frequency returns the frequency of a bin in Hz.
func (a Average) Frequency(bin int) float64 { return float64(bin) * a.Step }

// Power is an averaged power spectrum: Values[k] at k·Step Hz, in unit²/Hz or unit² as the settings say.
type Power struct {
	Average
	Values []float64
}

// Welch averages the power of all whole segments of all runs. The runs are not changed. It returns a *ShortError if no
// run holds a whole segment and ErrNotFinite for a signal with NaN or infinity; it panics on impossible settings.
func Welch(runs [][]float64, s Settings) (Power, error) {
	s.check()
	average, err := survey(runs, s)
	if err != nil {
		return Power{}, err
	}
	t := newTransformer(s)
	values := make([]float64, s.Bins())
	bins := make([]complex128, s.Bins())
	for _, run := range runs {
		for i, at := 0, 0; i < s.Segments(len(run)); i, at = i+1, at+s.Segment-s.Overlap {
			t.apply(bins, run[at:at+s.Segment])
			for k, v := range bins {
				values[k] += real(v)*real(v) + imag(v)*imag(v)
			}
		}
	}
	factor := t.factor() / float64(average.Segments)
	for k := range values {
		values[k] *= factor
		if math.IsNaN(values[k]) || math.IsInf(values[k], 0) {
			return Power{}, ErrNotFinite
		}
	}
	halve(values, s.Segment, 0.5)
	return Power{Average: average, Values: values}, nil
}

// survey counts what the settings make of the runs.
func survey(runs [][]float64, s Settings) (Average, error) {
	a := Average{Step: s.Step()}
	counts := make([]int, len(runs))
	longest := 0
	for i, run := range runs {
		longest = max(longest, len(run))
		counts[i] = s.Segments(len(run))
		used := 0
		if counts[i] > 0 {
			used = s.Segment + (counts[i]-1)*(s.Segment-s.Overlap)
		}
		a.Segments += counts[i]
		a.Used += used
		a.Unused += len(run) - used
	}
	if a.Segments == 0 {
		return Average{}, &ShortError{Longest: longest, Segment: s.Segment}
	}
	a.Freedom = Freedom(counts, s)
	return a, nil
}

// Freedom returns the equivalent degrees of freedom ν of an average over runs that yield counts[r] segments each
// (Welch 1967, extended to several independent runs):
//
//	ν = 2K² / Σ_r [ K_r + 2 Σ_k (K_r-k)·ρ_k ],   ρ_k = (Σ w[i]·w[i+kS] / Σ w²)²,   K = Σ K_r
//
// It holds for white Gaussian noise at bins other than 0 and N/2, where ν is half as large, and well enough where the
// density changes little over the lobe of the window. It is 0 without segments.
func Freedom(counts []int, s Settings) float64 {
	s.check()
	step := s.Segment - s.Overlap
	w := s.Window.Samples(s.Segment)
	var rho []float64
	for at := step; at < s.Segment; at += step {
		c := overlap(w, at)
		rho = append(rho, c*c)
	}
	total, spread := 0.0, 0.0
	for _, n := range counts {
		total += float64(n)
		spread += float64(n)
		for k := 1; k < n && k <= len(rho); k++ {
			spread += 2 * float64(n-k) * rho[k-1]
		}
	}
	if total == 0 {
		return 0
	}
	return 2 * total * total / spread
}
