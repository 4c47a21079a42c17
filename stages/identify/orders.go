package identify

import (
	"math"
	"slices"

	"hushframe/core/signal/identify"
	"hushframe/core/signal/order"
	"hushframe/core/signal/recording"
	"hushframe/core/signal/spectrum"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// orders is a record with what is known of the rotor orders in it.
type orders struct {
	record  identify.Record
	before  identify.Record // the same before orders were taken out
	turning []order.Rotor   // speeds by sample of all axes
	bands   []identify.Band // in which a pole may be a line
	seen    []kinds.OrderBand
	removed []kinds.RemovedOrder
	span    float64 // NaN if none were taken out
	left    func(f float64) float64
}

const (
	// seenOver is how much more an order must hold than the noise that is taken out with any line, to count as there.
	seenOver = 3
	// remains is the share of an order that may be left where it was taken out, and disturbing the share of what is left
	// in its bands above which that could pass for a mode.
	remains, disturbing = 0.1, 0.25
)

// takeOut cuts the axes into runs and takes the orders out of each. Orders that hold no more than noise have no bands.
func takeOut(r *gather.Recording, axes gather.Series, timing recording.Timing, set settings, threads int) (*orders, error) {
	out := &orders{record: identify.Record{Rate: timing.Rate}, span: math.NaN()}
	for _, run := range timing.Runs {
		var channels [][]float64
		for _, v := range axes.Values {
			channels = append(channels, v[run.First:run.End])
		}
		out.record.Runs = append(out.record.Runs, channels)
	}
	out.before = out.record
	if len(r.Plan.Rotors) == 0 {
		return out, nil
	}
	for i, c := range r.Plan.Rotors {
		s := r.Data.Rotors[i].Cut(timing.Start, timing.End)
		for k := range s.Values[0] {
			s.Values[0][k] = math.Abs(s.Values[0][k]) / (2 * math.Pi)
		}
		out.turning = append(out.turning, order.Rotor{Name: c.Name, Speed: order.Follow(s.Time, s.Values[0], axes.Time)})
	}
	turning := out.turning
	if len(set.orders) == 0 {
		return out, nil
	}
	// One Hz is fine beside the width of a band, and a line is as wide as the inverse of its span.
	margin, sure := 1.0, sureRotors(r, len(turning))
	if !slices.Contains(sure, true) {
		set.remove = false
	}
	if slices.Contains(sure, false) {
		margin = 2
	}
	bands := order.Bands(turning, order.Settings{Orders: set.orders, Rate: timing.Rate, Step: 1, Margin: margin})
	power := make([][][]float64, len(axes.Values)) // channel, rotor, order
	for c := range power {
		power[c] = make([][]float64, len(turning))
		for k := range turning {
			power[c][k] = make([]float64, len(set.orders))
		}
	}
	rest, told := identify.Record{Rate: timing.Rate}, identify.Record{Rate: timing.Rate}
	for i, run := range timing.Runs {
		var speeds, known [][]float64
		for k, rotor := range turning {
			speeds = append(speeds, rotor.Speed[run.First:run.End])
			if sure[k] {
				known = append(known, rotor.Speed[run.First:run.End])
			}
		}
		taken := order.Remove(out.record.Runs[i], speeds, order.RemoveSettings{Rate: timing.Rate, Orders: set.orders, Span: set.span, Threads: threads})
		rest.Runs = append(rest.Runs, taken.Rest)
		if set.remove && len(known) < len(turning) {
			only := order.Remove(out.record.Runs[i], known, order.RemoveSettings{Rate: timing.Rate, Orders: set.orders, Span: set.span, Threads: threads})
			told.Runs = append(told.Runs, only.Rest)
		} else {
			told.Runs = append(told.Runs, taken.Rest)
		}
		for c := range power {
			for k := range turning {
				for n := range set.orders {
					power[c][k][n] += taken.Power[c][k][n] * float64(run.Len()) / float64(timing.Samples)
				}
			}
		}
	}
	floor, err := floors(rest, bands)
	if err != nil {
		return nil, err
	}
	for n, multiple := range set.orders {
		there, disturbs := false, !set.remove
		for c := range power {
			held, noise, rest, stays := 0.0, 0.0, 0.0, 0.0
			for k, rotor := range turning {
				held += power[c][k][n]
				stays += remaining(r, sure, k, multiple) * power[c][k][n]
				for b, band := range bands {
					if band.Rotor == rotor.Name && band.Order == multiple {
						noise += band.Share * floor[c][b] * 2 / set.span
						rest = max(rest, floor[c][b]*(band.High-band.Low))
					}
				}
			}
			there = there || held > seenOver*noise
			disturbs = disturbs || stays > disturbing*rest
		}
		for _, b := range bands {
			if b.Order != multiple || !there {
				continue
			}
			out.seen = append(out.seen, kinds.OrderBand{Rotor: b.Rotor, Order: b.Order, Low: b.Low, High: b.High, Share: b.Share, Folded: b.Folded})
			if disturbs {
				out.bands = append(out.bands, identify.Band{Low: b.Low, High: b.High, Removed: set.remove})
			}
		}
	}
	out.bands = joined(out.bands)
	if !set.remove {
		return out, nil
	}
	out.record, out.span = told, set.span
	var known []order.Rotor
	for k, rotor := range turning {
		if sure[k] {
			known = append(known, rotor)
		}
	}
	out.left = left(known, set, timing.Rate)
	for c, channel := range r.Plan.Axes {
		for k, rotor := range turning {
			if !sure[k] {
				continue
			}
			for n, multiple := range set.orders {
				out.removed = append(out.removed, kinds.RemovedOrder{Axis: channel.Name, Rotor: rotor.Name, Order: multiple, MeanSquare: power[c][k][n]})
			}
		}
	}
	return out, nil
}

// sureRotors tells by rotor whether its angle is known: a speed that was followed in the signal gives none unless it was sharpened.
func sureRotors(r *gather.Recording, count int) []bool {
	out := make([]bool, count)
	for k := range out {
		out[k] = !r.Found || r.Sharp != nil && r.Sharp[k].Sure
	}
	return out
}

// remaining is the power of an order that stays, over that taken out: an angle that is off by a standard error of e rad leaves 1-exp(-(n·e)²) of
// the power of its order n.
func remaining(r *gather.Recording, sure []bool, rotor int, n float64) float64 {
	switch {
	case !sure[rotor]:
		return 1
	case r.Sharp == nil:
		return remains
	}
	off := n * r.Sharp[rotor].PhaseError
	return max(remains, math.Expm1(off*off))
}

// left tells what share of the noise is left at a frequency where orders were taken out.
func left(turning []order.Rotor, set settings, rate float64) func(f float64) float64 {
	var speeds [][]float64
	for _, rotor := range turning {
		speeds = append(speeds, rotor.Speed)
	}
	// Cells as wide as a line, so that the share does not jump between those that happen to be visited.
	step := max(1, 2/set.span)
	cells := order.Left(speeds, order.RemoveSettings{Rate: rate, Orders: set.orders, Span: set.span}, step)
	return func(f float64) float64 { return cells[min(max(0, int(math.Round(f/step))), len(cells)-1)] }
}

// floors returns, by channel and band, the mean density of the rest within it.
func floors(rest identify.Record, bands []order.Band) ([][]float64, error) {
	longest := 0
	for _, run := range rest.Runs {
		longest = max(longest, len(run[0]))
	}
	segment := 16
	for float64(segment) < rest.Rate && 2*segment <= longest {
		segment *= 2
	}
	var out [][]float64
	for c := range rest.Runs[0] {
		var runs [][]float64
		for _, run := range rest.Runs {
			runs = append(runs, run[c])
		}
		p, err := spectrum.Welch(runs, spectrum.Settings{Rate: rest.Rate, Segment: segment, Overlap: segment / 2})
		if err != nil {
			return nil, err
		}
		var means []float64
		for _, b := range bands {
			sum, count := 0.0, 0.0
			for k, v := range p.Values {
				if f := p.Frequency(k); f >= b.Low-p.Step && f <= b.High+p.Step {
					sum += v
					count++
				}
			}
			means = append(means, sum/max(1, count))
		}
		out = append(out, means)
	}
	return out, nil
}

// joined merges bands that touch; rotors near each other make one band, whose width is what a pole is judged by.
func joined(bands []identify.Band) []identify.Band {
	var out []identify.Band
	for _, b := range bands {
		out = append(out, b)
		for merged := true; merged; {
			merged = false
			last := len(out) - 1
			for i := range last {
				if out[i].Low <= out[last].High && out[last].Low <= out[i].High {
					out[i].Low, out[i].High = min(out[i].Low, out[last].Low), max(out[i].High, out[last].High)
					out[i], out[last-1] = out[last-1], out[i]
					out = out[:last]
					merged = true
					break
				}
			}
		}
	}
	return out
}
