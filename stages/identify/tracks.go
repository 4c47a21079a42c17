package identify

import (
	"fmt"
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
	for k, rotor := range lines.turning {
		t := kinds.RotorTrack{Rotor: rotor.Name, Source: kinds.TrackRecorded, Time: []float64{}, Speed: []float64{}, SpeedError: math.NaN()}
		if r.Found {
			t.Source = kinds.TrackFollowed
		}
		if r.Sharp != nil {
			t.SpeedError = r.Sharp[k].SpeedError
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

// oftenTogether is the share of the time from which on rotors that cannot be told apart are told.
const oftenTogether = 0.02

// together tells which rotors, whose speeds were followed, run so near each other that their orders are one line over a span.
func together(turning []order.Rotor, span float64) []string {
	var out []string
	for b, second := range turning {
		for _, first := range turning[:b] {
			count, near := 0.0, 0.0
			for i, v := range second.Speed {
				if v > 0 && first.Speed[i] > 0 {
					count++
					if math.Abs(v-first.Speed[i]) < 1/span {
						near++
					}
				}
			}
			if near > oftenTogether*count {
				out = append(out, fmt.Sprintf("rotors %s and %s run within %.2g Hz of each other for %.0f %% of the time: what is taken out there is what both of them hold, and its parts are a guess",
					first.Name, second.Name, 1/span, 100*near/count))
			}
		}
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
