package recording

import (
	"math"
	"slices"
)

// Steps tells in what steps the values of a column come.
type Steps struct {
	// Step is the smallest difference between two values of the column, where all differences are whole multiples of it
	// within a tenth; 0 where they are not.
	Step float64
	// Density is that of the noise that rounding to it adds, step²/(6·rate), one-sided, unit²/Hz.
	Density float64
}

// Quantised looks for the step of a column sampled at a rate in Hz. NaN is not expected.
func Quantised(values []float64, rate float64) Steps {
	distinct := slices.Clone(values)
	slices.Sort(distinct)
	distinct = slices.Compact(distinct)
	if len(distinct) < 2 {
		return Steps{}
	}
	least := math.Inf(1)
	for i := 1; i < len(distinct); i++ {
		least = min(least, distinct[i]-distinct[i-1])
	}
	// Rounded text makes steps of two nearly equal sizes, such as 0.30 and 0.31; the smallest may be a tenth short.
	span := distinct[len(distinct)-1] - distinct[0]
	if span/least > 1e6 {
		return Steps{} // finer than any sensor: the digits of a computation
	}
	sum, count := 0.0, 0.0
	for i := 1; i < len(distinct); i++ {
		ratio := (distinct[i] - distinct[i-1]) / least
		whole := math.Round(ratio)
		if math.Abs(ratio-whole) > 0.1*whole {
			return Steps{}
		}
		sum += distinct[i] - distinct[i-1]
		count += whole
	}
	step := sum / count
	return Steps{Step: step, Density: step * step / (6 * rate)}
}

// Stuck is the longest stretch of one value.
type Stuck struct {
	First, Length int
	Value         float64
}

const shortStuck = 50

// Longest returns the longest stretch of equal values.
func Longest(values []float64) Stuck {
	var out Stuck
	for i := 0; i < len(values); {
		j := i + 1
		for j < len(values) && values[j] == values[i] {
			j++
		}
		if j-i > out.Length {
			out = Stuck{First: i, Length: j - i, Value: values[i]}
		}
		i = j
	}
	return out
}

// Unlikely tells whether a stretch of equal values is longer than chance makes it among n values of which a share repeats the
// one before: longer than three times ln(n·(1-share))/ln(1/share), the usual longest one (P. Erdős and A. Rényi, On a new law of large
// numbers, J. Analyse Math. 23, 1970), and than fifty: quiet stretches between coarse steps repeat, too.
func (s Stuck) Unlikely(n int, share float64) bool {
	if share >= 1 || share <= 0 {
		return s.Length > shortStuck
	}
	usual := math.Log(float64(n)*(1-share)) / math.Log(1/share)
	return float64(s.Length) > max(shortStuck, 3*usual)
}

// RollOff is a fall of the floor of a density towards half the sample rate.
type RollOff struct {
	// Slope is in dB per octave, from 0.55 to 0.95 of half the rate, of a line through the lower quartiles of narrow bands.
	Slope float64
	// Steady tells that no band lies more than 3 dB off the line.
	Steady bool
}

// Fall fits the floor of a density given at equal steps from 0 Hz to half the rate. Fewer than 64 bins have none.
func Fall(density []float64) RollOff {
	n := len(density) - 1
	if n < 64 {
		return RollOff{}
	}
	const bands = 12
	var x, y []float64
	for b := range bands {
		from := int(float64(n) * (0.55 + 0.40*float64(b)/bands))
		to := int(float64(n) * (0.55 + 0.40*float64(b+1)/bands))
		sorted := slices.Clone(density[from:max(to, from+1)])
		slices.Sort(sorted)
		v := sorted[len(sorted)/4]
		if !(v > 0) {
			return RollOff{}
		}
		x, y = append(x, math.Log2(float64(from+to)/2)), append(y, 10*math.Log10(v))
	}
	mx, my := 0.0, 0.0
	for i := range x {
		mx += x[i] / bands
		my += y[i] / bands
	}
	var xx, xy float64
	for i := range x {
		xx += (x[i] - mx) * (x[i] - mx)
		xy += (x[i] - mx) * (y[i] - my)
	}
	out := RollOff{Slope: xy / xx, Steady: true}
	for i := range x {
		if math.Abs(y[i]-my-out.Slope*(x[i]-mx)) > 3 {
			out.Steady = false
		}
	}
	return out
}

// Dips returns the bins at which every one of several densities has a hole at least depth dB deep beside the median of the
// bins 6 to 20 % off on either side: where a notch was, in all channels alike. Bins of one hole give its deepest, of the sum.
func Dips(densities [][]float64, depth float64) []int {
	if len(densities) == 0 {
		return nil
	}
	n := len(densities[0])
	hole := make([]float64, n) // depth in dB of the shallowest
	for k := 16; k < n; k++ {
		hole[k] = math.Inf(1)
		for _, d := range densities {
			hole[k] = min(hole[k], sunk(d, k))
		}
	}
	var out []int
	for k := 16; k < n; k++ {
		if hole[k] < depth {
			continue
		}
		best := k
		for ; k < n && hole[k] >= depth/2; k++ {
			if hole[k] > hole[best] {
				best = k
			}
		}
		out = append(out, best)
	}
	return out
}

// sunk is how far below both sides a density, smoothed over five bins, lies at a bin, in dB.
func sunk(d []float64, k int) float64 {
	side := func(near, far float64) float64 {
		from, to := int(float64(k)*near), int(float64(k)*far)
		if from > to {
			from, to = to, from
		}
		if from < 1 || to >= len(d) || to-from < 3 {
			return math.NaN()
		}
		sorted := slices.Clone(d[from : to+1])
		slices.Sort(sorted)
		return sorted[len(sorted)/2]
	}
	below, above := side(0.80, 0.94), side(1.06, 1.20)
	here := 0.0
	for i := max(0, k-2); i <= min(len(d)-1, k+2); i++ {
		here += d[i] / 5
	}
	if !(here > 0) || !(below > 0) || !(above > 0) {
		return math.Inf(-1)
	}
	return 10 * math.Log10(min(below, above)/here)
}
