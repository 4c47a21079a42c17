package identify

import (
	"math"

	"hushframe/core/signal/identify"
	"hushframe/core/signal/order"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// trackPoints is about how many points of a speed are kept for drawing.
const trackPoints = 600

// tracks thins the speeds of the rotors to means over equal parts of the time.
func tracks(r *gather.Recording, lines *orders, times []float64) []kinds.RotorTrack {
	var out []kinds.RotorTrack
	for _, rotor := range lines.turning {
		t := kinds.RotorTrack{Rotor: rotor.Name, Source: kinds.TrackRecorded, Time: []float64{}, Speed: []float64{}}
		if r.Found {
			t.Source = kinds.TrackFollowed
		}
		n := len(rotor.Speed)
		parts := min(n, trackPoints)
		for k := range parts {
			from, to := n*k/parts, n*(k+1)/parts
			sum, count := 0.0, 0.0
			for _, v := range rotor.Speed[from:to] {
				if v > 0 && !math.IsInf(v, 0) {
					sum += v
					count++
				}
			}
			t.Time = append(t.Time, times[(from+to-1)/2])
			t.Speed = append(t.Speed, 2*math.Pi*sum/max(1, count))
		}
		out = append(out, t)
	}
	return out
}

// crossings lists where orders meet modes: the order lies within the half-power width of the mode, as the recording shows it, for
// some of the time.
func crossings(x *kinds.Identified, turning []order.Rotor, multiples []float64) []kinds.OrderCrossing {
	var out []kinds.OrderCrossing
	for row, m := range x.Modes {
		if m.Kind != kinds.ModeStructure {
			continue
		}
		for _, n := range multiples {
			for _, rotor := range turning {
				inside, folded, count, sum := 0.0, 0.0, 0.0, 0.0
				for _, v := range rotor.Speed {
					if !(v > 0) || math.IsInf(v, 0) {
						continue
					}
					count++
					if math.Abs(order.Fold(n*v, x.Rate)-m.Frequency) > m.Damping*m.Frequency {
						continue
					}
					inside++
					sum += order.Meets(m.Frequency, n*v, x.Rate) / n
					if n*v > x.Rate/2 {
						folded++
					}
				}
				if inside > 0 {
					out = append(out, kinds.OrderCrossing{Mode: row, Rotor: rotor.Name, Order: n, Folded: 2*folded > inside,
						Speed: 2 * math.Pi * sum / inside, Share: inside / count})
				}
			}
		}
	}
	return out
}

// densities are the spectra with and without the orders.
func densities(x *kinds.Identified, lines *orders, s spectrum.Settings) ([]kinds.IdentifiedDensity, error) {
	welch := func(r identify.Record, channel int) ([]float64, error) {
		var runs [][]float64
		for _, run := range r.Runs {
			runs = append(runs, run[channel])
		}
		p, err := spectrum.Welch(runs, s)
		if err != nil {
			return nil, err
		}
		return p.Values, nil
	}
	var out []kinds.IdentifiedDensity
	for c, channel := range x.Channels {
		before, err := welch(lines.before, c)
		if err != nil {
			return nil, err
		}
		after, err := welch(lines.record, c)
		if err != nil {
			return nil, err
		}
		out = append(out, kinds.IdentifiedDensity{Axis: channel.Axis, Before: before, After: after})
	}
	return out, nil
}
