package filter

import (
	"math"
)

// Filter is one member of a train: fixed sections, or a notch that follows every rotor.
type Filter struct {
	Fixed  Chain
	Follow *Follower
}

// Train is filters in a row at one sample rate, with the speeds of the rotors that some of them follow.
type Train struct {
	Rate    float64 // Hz
	Filters []Filter
	// Speeds holds, by rotor, the speed in revolutions per second at common times, equal intervals apart. Without any,
	// followers are taken as not there.
	Speeds [][]float64
}

// Noise is what reaches the filters on one axis: one-sided densities in unit²/Hz at multiples of Step Hz, from 0 Hz.
type Noise struct {
	Step float64
	Rest []float64 // that does not move with the rotors
	// Lines are densities of rotor orders. A notch that follows an order takes all of it out.
	Lines []Line
}

// Line is the density of one order of the rotors.
type Line struct {
	Order   float64
	Density []float64 // per bin, as Rest
	// True is the frequency in Hz at which the line of a bin is in truth, where the recording shows it folded.
	True []float64
}

func (t Train) times() int {
	n := 0
	for i, s := range t.Speeds {
		if i > 0 && len(s) != n {
			panic("filter: rotors differ in samples")
		}
		n = len(s)
	}
	return n
}

// fixed returns the response of the fixed filters.
func (t Train) fixed(f float64) complex128 {
	out := complex(1, 0)
	for _, m := range t.Filters {
		out *= m.Fixed.Response(f, t.Rate)
	}
	return out
}

// followed returns, by frequency, the mean over the time of the squared magnitude of the notches that follow, and of their lag; one
// order may be left out (0 leaves out none).
//
// With x = cos ω - cos ω0 the notch is x/(x + iα sin ω), so that its magnitude and lag cost no complex exponentials.
func (t Train) followed(fs []float64, without float64) (power, lag []float64) {
	power, lag = make([]float64, len(fs)), make([]float64, len(fs))
	n := t.times()
	type notch struct{ cos, alpha float64 }
	var followers [][]notch // by time
	for k := range n {
		var now []notch
		for _, m := range t.Filters {
			if m.Follow == nil || m.Follow.Order == without {
				continue
			}
			for _, speeds := range t.Speeds {
				cos, alpha := biquad(m.Follow.centre(speeds[k], t.Rate), m.Follow.Q, t.Rate)
				now = append(now, notch{cos, alpha})
			}
		}
		if len(now) > 0 {
			followers = append(followers, now)
		}
	}
	for i, f := range fs {
		if len(followers) == 0 {
			power[i] = 1
			continue
		}
		sin, cos := math.Sincos(2 * math.Pi * f / t.Rate)
		for _, now := range followers {
			product := 1.0
			for _, c := range now {
				x, y := cos-c.cos, c.alpha*sin
				product *= x * x / (x*x + y*y)
				lag[i] += math.Atan2(y*math.Copysign(1, x), math.Abs(x)) / float64(n)
			}
			power[i] += product / float64(n)
		}
	}
	return power, lag
}

// Power returns the mean of |H|² at f Hz over the time: what the train leaves of a density that does not move with the rotors.
func (t Train) Power(f float64) float64 {
	h := t.fixed(f)
	power, _ := t.followed([]float64{f}, 0)
	return (real(h)*real(h) + imag(h)*imag(h)) * power[0]
}

// Lag returns by how much the train is late at f Hz, in rad: that of PhaseLag, and the mean over the time for notches that follow.
func (t Train) Lag(f float64) float64 {
	_, lag := t.followed([]float64{f}, 0)
	out := lag[0]
	for _, m := range t.Filters {
		out += m.Fixed.PhaseLag(f, t.Rate)
	}
	return out
}

// Delay returns the group delay at f Hz in seconds, the mean over the time for notches that follow.
func (t Train) Delay(f float64) float64 {
	out := 0.0
	for _, m := range t.Filters {
		out += m.Fixed.Delay(f, t.Rate)
		if m.Follow != nil {
			for _, speeds := range t.Speeds {
				out += m.Follow.Delay(f, speeds, t.Rate)
			}
		}
	}
	return out
}

// Leaves returns the density behind the train, bin by bin up to half its rate; bins beyond are NaN.
func (t Train) Leaves(n Noise) []float64 {
	out, fs := make([]float64, len(n.Rest)), make([]float64, len(n.Rest))
	for k := range fs {
		fs[k] = float64(k) * n.Step
	}
	add := func(density, at []float64, without float64) {
		power, _ := t.followed(at, without)
		for k, v := range density {
			if v != 0 {
				h := t.fixed(at[k])
				out[k] += v * power[k] * (real(h)*real(h) + imag(h)*imag(h))
			}
		}
	}
	add(n.Rest, fs, 0)
	for _, l := range n.Lines {
		if t.follows(l.Order) {
			continue
		}
		at := make([]float64, len(l.True))
		for k, f := range l.True {
			at[k] = math.Abs(f - t.Rate*math.Round(f/t.Rate)) // a line above half the rate folds about it
		}
		add(l.Density, at, l.Order)
	}
	for k, f := range fs {
		if f >= t.Rate/2 {
			out[k] = math.NaN()
		}
	}
	return out
}

// follows tells whether a notch follows that order.
func (t Train) follows(order float64) bool {
	if t.times() == 0 {
		return false
	}
	for _, m := range t.Filters {
		if m.Follow != nil && m.Follow.Order == order {
			return true
		}
	}
	return false
}

// RMS returns the root mean square of a density at multiples of step Hz, from 0 Hz, between from and to Hz; bins that are not numbers count
// nothing.
func RMS(density []float64, step, from, to float64) float64 {
	sum := 0.0
	for k, v := range density {
		if f := float64(k) * step; f >= from && f <= to && v > 0 {
			sum += v * step
		}
	}
	return math.Sqrt(sum)
}
