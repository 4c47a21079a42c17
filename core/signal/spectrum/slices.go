package spectrum

import "math"

// Slices hands each whole segment of each run to take, in order: the index of its first sample within the run and its power
// spectrum, scaled as the settings say, which changes after take returns. It is what Welch averages. Errors and panics as Welch.
func Slices(runs [][]float64, s Settings, take func(run, first int, values []float64)) error {
	s.check()
	if _, err := survey(runs, s); err != nil {
		return err
	}
	t := newTransformer(s)
	factor := t.factor()
	values, bins := make([]float64, s.Bins()), make([]complex128, s.Bins())
	for r, run := range runs {
		for i, at := 0, 0; i < s.Segments(len(run)); i, at = i+1, at+s.Segment-s.Overlap {
			t.apply(bins, run[at:at+s.Segment])
			for k, v := range bins {
				values[k] = factor * (real(v)*real(v) + imag(v)*imag(v))
				if math.IsNaN(values[k]) || math.IsInf(values[k], 0) {
					return ErrNotFinite
				}
			}
			halve(values, s.Segment, 0.5)
			take(r, at, values)
		}
	}
	return nil
}

// CoherenceLimit is the coherence that two signals without a common cause stay below at that level (0.95 for 95 %), when ν
// degrees of freedom went into it: 1 - (1-level)^(1/(ν/2-1)) (J. S. Bendat and A. G. Piersol, Random Data, 4th ed., 2010, chapter 9;
// G. C. Carter, C. H. Knapp and A. H. Nuttall, Estimation of the magnitude-squared coherence function, IEEE Trans. Audio Electroacoust.
// 21, 1973). NaN for ν up to 2, where the coherence says nothing.
func CoherenceLimit(freedom, level float64) float64 {
	if !(freedom > 2) {
		return math.NaN()
	}
	return 1 - math.Pow(1-level, 1/(freedom/2-1))
}
