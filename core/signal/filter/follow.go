package filter

import (
	"math"
	"slices"
)

// Follower is a notch at a multiple of a rotor's speed.
type Follower struct {
	Order float64
	Q     float64
	// Lowest is the centre frequency in Hz below which the notch stays where it is; it must be above 0.
	Lowest float64
}

// Section returns the notch at a speed in revolutions per second. Its centre is kept from Lowest to 0.45 of the rate.
func (f Follower) Section(speed, rate float64) Section {
	return Notch(f.centre(speed, rate), f.Q, rate)
}

func (f Follower) centre(speed, rate float64) float64 {
	if !(f.Lowest > 0) || !(f.Order > 0) {
		panic("filter: a notch that follows needs an order and a lowest frequency above zero")
	}
	if !(speed > 0) {
		speed = 0
	}
	return min(max(f.Order*speed, f.Lowest), 0.45*rate)
}

// MeanPower returns the mean of |H|² at f Hz over samples of the speed at equal intervals of time: what the follower leaves of
// a density at f that does not depend on the speed. Without a sample it is 1.
func (f Follower) MeanPower(at float64, speeds []float64, rate float64) float64 {
	if len(speeds) == 0 {
		return 1
	}
	sum := 0.0
	for _, v := range speeds {
		h := f.Section(v, rate).Response(at, rate)
		sum += real(h)*real(h) + imag(h)*imag(h)
	}
	return sum / float64(len(speeds))
}

// Delay returns the mean group delay at f Hz over samples of the speed, in seconds; 0 without a sample.
func (f Follower) Delay(at float64, speeds []float64, rate float64) float64 {
	sum := 0.0
	for _, v := range speeds {
		sum += f.Section(v, rate).Delay(at, rate)
	}
	return sum / math.Max(1, float64(len(speeds)))
}

// Apply filters x from rest with the notch at the speed of each sample. It panics if the lengths differ.
func (f Follower) Apply(x, speeds []float64, rate float64) []float64 {
	if len(x) != len(speeds) {
		panic("filter: signal and speeds differ in samples")
	}
	out := make([]float64, len(x))
	var state [2]float64
	var s Section
	last := math.NaN()
	for i, v := range x {
		if c := f.centre(speeds[i], rate); c != last {
			s, last = Notch(c, f.Q, rate), c
		}
		out[i] = s.step(v, &state)
	}
	return out
}

// Thin returns about count of the samples, spread evenly over their sorted values: enough for means over a distribution.
func Thin(speeds []float64, count int) []float64 {
	sorted := slices.Clone(speeds)
	slices.Sort(sorted)
	if len(sorted) <= count {
		return sorted
	}
	out := make([]float64, count)
	for i := range out {
		out[i] = sorted[(2*i+1)*len(sorted)/(2*count)]
	}
	return out
}
