package spectrum

import "gonum.org/v1/gonum/stat/distuv"

// Bounds returns the factors that turn a density estimate with ν degrees of freedom into the two-sided confidence
// interval of that level (0.95 for 95 %) for Gaussian noise:
//
//	lower = ν/χ²(1-α/2; ν),   upper = ν/χ²(α/2; ν),   α = 1-level
//
// At 0 Hz and half the sample rate ν is half that of the other bins. The interval does not apply to a line (a sine of
// steady amplitude), whose level varies far less. It panics unless freedom > 0 and 0 < level < 1.
func Bounds(freedom, level float64) (lower, upper float64) {
	if !(freedom > 0) || !(level > 0 && level < 1) {
		panic("spectrum: bounds need freedom above zero and a level between zero and one")
	}
	chi := distuv.ChiSquared{K: freedom}
	alpha := 1 - level
	return freedom / chi.Quantile(1-alpha/2), freedom / chi.Quantile(alpha/2)
}

// Bounds returns the factors of the confidence interval of that level for the bins other than the first and last.
func (a Average) Bounds(level float64) (lower, upper float64) { return Bounds(a.Freedom, level) }
