package match

import "math"

// Level is the result of fitting one curve's level to another's.
type Level struct {
	// Factor is what the predicted densities are multiplied by.
	Factor float64
	// Residual is the root mean square, in dB, of what is left of the ratio.
	Residual float64
	// Bins is the number of values that were compared.
	Bins int
}

// Scale returns the factor k on predicted densities that makes Σ (ln observed - ln(k·predicted))² least: the geometric mean
// of their ratio, so that a deep valley counts as much as a high peak. Entries for which use is false, or where either
// value is not a finite number above zero, are left out; nil use means all. Without any entry Factor and Residual are
// NaN. It panics on different lengths.
func Scale(predicted, observed []float64, use []bool) Level {
	if len(predicted) != len(observed) || use != nil && len(use) != len(observed) {
		panic("match: curves of different lengths")
	}
	var sum float64
	var logs []float64
	for i, p := range predicted {
		if use != nil && !use[i] || !positive(p) || !positive(observed[i]) {
			continue
		}
		l := math.Log(observed[i] / p)
		logs = append(logs, l)
		sum += l
	}
	if len(logs) == 0 {
		return Level{Factor: math.NaN(), Residual: math.NaN()}
	}
	mean := sum / float64(len(logs))
	squares := 0.0
	for _, l := range logs {
		squares += (l - mean) * (l - mean)
	}
	return Level{
		Factor:   math.Exp(mean),
		Residual: 10 / math.Ln10 * math.Sqrt(squares/float64(len(logs))),
		Bins:     len(logs),
	}
}

// Assurance returns how alike two spectra are in shape, 0 to 1 whatever their levels: of the amplitudes a = √density,
//
//	(Σ a_p·a_o)² / (Σ a_p² · Σ a_o²)
//
// the frequency response assurance criterion (R. J. Allemang, The modal assurance criterion: twenty years of use and
// abuse, Sound and Vibration 37, 2003) without the phase that a density lacks. Entries are left out as in Scale; NaN without any.
func Assurance(predicted, observed []float64, use []bool) float64 {
	if len(predicted) != len(observed) || use != nil && len(use) != len(observed) {
		panic("match: curves of different lengths")
	}
	var both, p, o float64
	for i, v := range predicted {
		if use != nil && !use[i] || !positive(v) || !positive(observed[i]) {
			continue
		}
		both += math.Sqrt(v) * math.Sqrt(observed[i])
		p += v
		o += observed[i]
	}
	if p == 0 {
		return math.NaN()
	}
	return both * both / p / o
}

func positive(v float64) bool { return v > 0 && !math.IsInf(v, 1) }

// Resample reads the curve y(x), given at rising x, at each place of at by straight lines in ln y (in y where a value is
// zero). Places outside x give NaN. It panics if x and y differ in length.
func Resample(x, y, at []float64) []float64 {
	if len(x) != len(y) {
		panic("match: curves of different lengths")
	}
	out := make([]float64, len(at))
	k := 0
	for i, v := range at {
		out[i] = math.NaN()
		if len(x) == 0 || !(v >= x[0]) || v > x[len(x)-1] {
			continue
		}
		if k > 0 && x[k-1] > v {
			k = 0 // places need not rise
		}
		for k < len(x)-1 && x[k] < v {
			k++
		}
		if x[k] == v || k == 0 {
			out[i] = y[k]
			continue
		}
		w := (v - x[k-1]) / (x[k] - x[k-1])
		if a, b := y[k-1], y[k]; a > 0 && b > 0 {
			out[i] = math.Exp((1-w)*math.Log(a) + w*math.Log(b))
		} else {
			out[i] = (1-w)*a + w*b
		}
	}
	return out
}
