package recording

import (
	"fmt"
	"math"
	"slices"
)

// Spikes are single values, or pairs, that stand far out from those beside them.
type Spikes struct {
	At []int // indices
	// Largest is the greatest magnitude among them, Rest that among the other values.
	Largest, Rest float64
	// Share is how much of the mean square about the mean goes with them, 0 to 1: what would be gone if each were as the
	// middle one of its neighbours.
	Share float64
}

// Thresholds of spikes; common practice.
const (
	spikeSteps  = 30.0 // usual distances from the middle of the neighbours
	spikeSpread = 8.0  // usual distances from the median of all
	mostSpikes  = 1e-3 // of the values; more is how the signal is
	enoughUsual = 1 << 15
)

// FindSpikes looks for values that lie farther from the median of themselves and the two on either side than such
// distances and the spread of the values make likely (running medians: J. W. Tukey, Exploratory Data Analysis, 1977). Usual is the
// median of the magnitudes over 0.6745, the standard deviation if they were normal; of a long recording, evenly chosen values tell.
// NaN is not expected.
func FindSpikes(values []float64) Spikes {
	var s Spikes
	if len(values) < 5 {
		return s
	}
	stride := max(1, len(values)/enoughUsual)
	var some, off []float64
	for i := 0; i < len(values); i += stride {
		some = append(some, values[i])
		off = append(off, math.Abs(values[i]-middle(values, i)))
	}
	slices.Sort(some)
	center := some[len(some)/2]
	for i, v := range some {
		some[i] = math.Abs(v - center)
	}
	limit := max(spikeSteps*usual(off), spikeSpread*usual(some))
	for i, v := range values {
		// A value near both neighbours is near the median of five.
		near := i > 0 && i+1 < len(values) && math.Abs(v-values[i-1]) <= limit && math.Abs(v-values[i+1]) <= limit
		if limit > 0 && !near && math.Abs(v-middle(values, i)) > limit {
			s.At, s.Largest = append(s.At, i), max(s.Largest, math.Abs(v))
		} else {
			s.Rest = max(s.Rest, math.Abs(v))
		}
	}
	if float64(len(s.At)) > max(1, mostSpikes*float64(len(values))) {
		return Spikes{Rest: max(s.Rest, s.Largest)}
	}
	if len(s.At) > 0 {
		s.Share = 1 - spread(values, s.At)/spread(values, nil)
		if math.IsNaN(s.Share) { // the squares are too large to be written
			s.Share = 1
		}
	}
	return s
}

// middle is the median of a value and the two on either side, at the ends that of the five there.
func middle(values []float64, i int) float64 {
	var five [5]float64
	first := min(max(i-2, 0), len(values)-5)
	copy(five[:], values[first:first+5])
	slices.Sort(five[:])
	return five[2]
}

// usual is the standard deviation that normal values of such magnitudes would have. The magnitudes are sorted.
func usual(magnitudes []float64) float64 {
	slices.Sort(magnitudes)
	return magnitudes[len(magnitudes)/2] / 0.6745
}

// spread is the mean square about the mean, with the values at some places replaced by the middle of their neighbours.
func spread(values []float64, at []int) float64 {
	sum := func(of func(v float64) float64) float64 {
		total, next := 0.0, 0
		for i, v := range values {
			if next < len(at) && at[next] == i {
				v = middle(values, i)
				next++
			}
			total += of(v)
		}
		return total / float64(len(values))
	}
	mean := sum(func(v float64) float64 { return v })
	return sum(func(v float64) float64 { return (v - mean) * (v - mean) })
}

// Count writes a number of things: "1 gap", "2 gaps".
func Count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}
