package contrast

import (
	"fmt"
	"math"
	"slices"

	"hushframe/core/match"
	"hushframe/stages/kinds"
)

// response sets two responses side by side over the range that both sweep. ratios are those of followed modes, by number
// before.
func response(d *kinds.Difference, before, after *kinds.Response, ratios map[int]float64, o Options) error {
	from, to := math.Max(before.From, after.From), math.Min(before.To, after.To)
	if o.From > 0 {
		from = math.Max(from, o.From)
	}
	if o.To > 0 {
		to = math.Min(to, o.To)
	}
	if !(from > 0) || !(to > from) {
		return fmt.Errorf("the responses have no frequency in common: %.4g to %.4g Hz and %.4g to %.4g Hz", before.From, before.To, after.From, after.To)
	}
	d.From, d.To = from, to
	for _, f := range slices.Concat(before.Frequency, after.Frequency) {
		if f >= from && f <= to {
			d.Frequency = append(d.Frequency, f)
		}
	}
	d.Frequency = append(d.Frequency, from, to)
	slices.Sort(d.Frequency)
	d.Frequency = slices.Compact(d.Frequency)
	bands := append(match.ThirdOctaves(from, to), match.Band{From: from, To: to})
	for axis, name := range kinds.AxisNames {
		for k, r := range []*kinds.Response{before, after} {
			d.Density[k][axis] = match.Resample(r.Frequency, r.Density[axis], d.Frequency)
		}
		for i, b := range bands {
			x := kinds.BandChange{Axis: name, From: b.From, To: b.To, Whole: i == len(bands)-1}
			for k := range x.RMS {
				x.RMS[k] = math.Sqrt(match.Power(d.Frequency, d.Density[k][axis], b.From, b.To))
			}
			x.Change = decibels(x.RMS[1] / x.RMS[0])
			d.Bands = append(d.Bands, x)
		}
		peaks(d, before, after, name, ratios)
	}
	lines(d, before, after)
	return nil
}

// decibels of a ratio of amplitudes.
func decibels(ratio float64) float64 { return 20 * math.Log10(ratio) }

// peaks pairs the peaks of an axis. A peak is looked for where the mode that leads it has gone, so that a large shift does
// not hide it.
func peaks(d *kinds.Difference, before, after *kinds.Response, axis string, ratios map[int]float64) {
	within := func(r *kinds.Response) (out []kinds.ResponsePeak) {
		for _, p := range r.Peaks {
			if p.Axis == axis && p.Frequency >= d.From && p.Frequency <= d.To {
				out = append(out, p)
			}
		}
		return out
	}
	old, now := within(before), within(after)
	places := [2][]match.Peak{}
	one := []float64{1}
	for _, p := range old {
		at := p.Frequency
		if len(p.Modes) > 0 {
			if r, ok := ratios[p.Modes[0]]; ok {
				at *= r
			}
		}
		places[0] = append(places[0], match.Peak{Frequency: at, Direction: one})
	}
	for _, p := range now {
		places[1] = append(places[1], match.Peak{Frequency: p.Frequency, Direction: one})
	}
	found := match.Pairs(places[0], places[1], match.Options{})
	nan := math.NaN()
	row := func(a, b *kinds.ResponsePeak) {
		x := kinds.PeakChange{Axis: axis, Frequency: [2]float64{nan, nan}, Density: [2]float64{nan, nan}, Change: nan, Modes: [2][]int{{}, {}}}
		for k, p := range []*kinds.ResponsePeak{a, b} {
			if p != nil {
				x.Frequency[k], x.Density[k] = p.Frequency, p.Density
				x.Modes[k] = append(x.Modes[k], p.Modes...)
			}
		}
		if a != nil && b != nil {
			x.Change = decibels(math.Sqrt(b.Density / a.Density))
		}
		d.Peaks = append(d.Peaks, x)
	}
	start := len(d.Peaks)
	for _, p := range found.Pairs {
		row(&old[p.Predicted], &now[p.Observed])
	}
	for _, i := range found.Predicted {
		row(&old[i], nil)
	}
	for _, j := range found.Observed {
		row(nil, &now[j])
	}
	slices.SortStableFunc(d.Peaks[start:], func(a, b kinds.PeakChange) int {
		switch fa, fb := first(a.Frequency), first(b.Frequency); {
		case fa < fb:
			return -1
		case fa > fb:
			return 1
		}
		return 0
	})
}

// first is the frequency before, or that after where there is none.
func first(f [2]float64) float64 {
	if math.IsNaN(f[0]) {
		return f[1]
	}
	return f[0]
}

// lines sets the rotor lines at hover side by side that both have, all rotors of a source together.
func lines(d *kinds.Difference, before, after *kinds.Response) {
	for _, a := range before.Lines {
		if a.Rotor != allRotors {
			continue
		}
		for _, b := range after.Lines {
			if b.Rotor != allRotors || b.Source != a.Source || b.Order != a.Order {
				continue
			}
			for axis, name := range kinds.AxisNames {
				d.Lines = append(d.Lines, kinds.LineChange{Source: a.Source, Order: a.Order, Axis: name, Frequency: [2]float64{a.Frequency, b.Frequency},
					Rate: [2]float64{a.Rate[axis], b.Rate[axis]}, Change: decibels(b.Rate[axis] / a.Rate[axis])})
			}
			break
		}
	}
}

// allRotors is the name of the rows of lines that hold every rotor.
const allRotors = "all"
