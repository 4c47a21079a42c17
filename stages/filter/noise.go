package filter

import (
	"fmt"
	"math"
	"slices"

	"hushframe/core/match"
	"hushframe/core/signal/filter"
	"hushframe/core/signal/order"
	"hushframe/stages/kinds"
)

// noise is what reaches the filters.
type noise struct {
	from, to  float64 // Hz, the band that counts
	step      float64
	bins      int
	axes      []axis
	speeds    [][]float64 // by rotor, revolutions per second at common times
	orders    []float64   // that stand out, the strongest first
	predicted bool
	peaks     []kinds.SpectraPeak // outside rotor orders, the strongest first
	notes     []string
}

// axis is one axis of it.
type axis struct {
	name      string
	observed  []float64
	noise     filter.Noise
	predicted []float64 // per bin, NaN outside the sweep; nil without one
}

// speedTimes is the number of times at which rotor speeds are taken: enough for a mean over a flight.
const speedTimes = 150

// gather takes densities, rotor orders and rotor speeds from the artifacts.
func gather(observed *kinds.Spectra, predicted *kinds.Response, identified *kinds.Identified, set *settings) (*noise, error) {
	n := &noise{from: 2 * set.bandwidth, to: 0.45 * observed.Rate, step: observed.Step, bins: observed.Segment/2 + 1, predicted: predicted != nil}
	if len(set.band) == 2 {
		n.from, n.to = set.band[0], set.band[1]
	}
	if most := min(observed.Rate, set.rate) / 2; n.to > most {
		n.notes = append(n.notes, fmt.Sprintf("the band is cut at %.4g Hz, half the rate of the recording or of the loop", most))
		n.to = most
	}
	if !(n.to > n.from) {
		return nil, refuse("band", "nothing is left of the band from %.4g Hz in a recording at %.5g Hz and a loop at %.5g Hz", n.from, observed.Rate, set.rate).
			Do("choose a lower band")
	}
	n.rotors(observed, identified)
	bands := observed.Orders
	if identified != nil {
		bands = identified.Orders
	}
	power := map[float64]float64{}
	for i, a := range observed.Axes {
		if a.Quantity != "angular rate" || !slices.Contains(kinds.AxisNames[:], a.Axis) {
			continue
		}
		x := axis{name: a.Axis, observed: a.Density}
		x.noise = n.split(a, observed, identified, bands, power)
		if predicted != nil {
			at := make([]float64, n.bins)
			for k := range at {
				at[k] = observed.Frequency(k)
			}
			x.predicted = match.Resample(predicted.Frequency, predicted.Density[slices.Index(kinds.AxisNames[:], a.Axis)], at)
		}
		n.axes = append(n.axes, x)
		for _, p := range observed.Peaks {
			if p.Axis == i && p.Frequency >= n.from && p.Frequency <= n.to && !within(bands, p.Frequency) {
				n.peaks = append(n.peaks, p)
			}
		}
	}
	if len(n.axes) == 0 {
		return nil, refuse("observed", "the recording has no angular rate on roll, pitch or yaw").Do("name the columns of the gyro in columns of record")
	}
	slices.SortStableFunc(n.peaks, func(a, b kinds.SpectraPeak) int { return falling(a.Density*a.Frequency, b.Density*b.Frequency) })
	for o := range power {
		n.orders = append(n.orders, o)
	}
	slices.Sort(n.orders)
	slices.SortStableFunc(n.orders, func(a, b float64) int { return falling(power[a], power[b]) })
	if len(power) == 0 && len(n.speeds) > 0 {
		n.orders = []float64{1, 2}
	}
	return n, nil
}

func falling(a, b float64) int {
	switch {
	case a > b:
		return -1
	case a < b:
		return 1
	}
	return 0
}

func within(bands []kinds.OrderBand, f float64) bool {
	return slices.ContainsFunc(bands, func(b kinds.OrderBand) bool { return b.Low <= f && f <= b.High })
}

// rotors takes the speeds from the tracks, or makes a few from the quantiles that record keeps.
func (n *noise) rotors(observed *kinds.Spectra, identified *kinds.Identified) {
	if identified != nil && len(identified.Tracks) > 0 {
		longest := 0
		for _, t := range identified.Tracks {
			longest = max(longest, len(t.Speed))
		}
		count := min(longest, speedTimes)
		for _, t := range identified.Tracks {
			speeds := make([]float64, count)
			for k := range speeds {
				speeds[k] = t.Speed[(2*k+1)*len(t.Speed)/(2*count)] / (2 * math.Pi)
			}
			n.speeds = append(n.speeds, speeds)
		}
		return
	}
	for _, r := range observed.Rotors {
		if !(r.Median > 0) || !(r.High >= r.Low) {
			continue
		}
		var speeds []float64
		for k := range 9 {
			// By straight lines between the quantiles 0.01, 0.5 and 0.99.
			p := (float64(k) + 0.5) / 9
			v := r.Median + (p-0.5)/0.49*(r.High-r.Median)
			if p < 0.5 {
				v = r.Median + (p-0.5)/0.49*(r.Median-r.Low)
			}
			speeds = append(speeds, v/(2*math.Pi))
		}
		n.speeds = append(n.speeds, speeds)
	}
	if len(n.speeds) > 0 {
		n.notes = append(n.notes, "rotor speeds are known by median and spread only, and the rotors are taken to run fast and slow together; give identified for their course")
	}
}

// split tells what of the density of an axis moves with the rotors: the share that identify took out there, within the bands of orders. It adds
// the power of each order to the sums.
func (n *noise) split(a kinds.SpectraAxis, observed *kinds.Spectra, identified *kinds.Identified, bands []kinds.OrderBand, power map[float64]float64) filter.Noise {
	out := filter.Noise{Step: n.step, Rest: slices.Clone(a.Density)}
	if identified == nil {
		return out
	}
	at := slices.IndexFunc(identified.Densities, func(d kinds.IdentifiedDensity) bool { return d.Axis == a.Axis })
	if at < 0 {
		return out
	}
	d := identified.Densities[at]
	lines := map[float64]*filter.Line{}
	for k, v := range a.Density {
		f := observed.Frequency(k)
		bin := int(math.Round(f / identified.Step))
		b := narrowest(bands, f)
		if b == nil || bin >= len(d.Before) || !(d.Before[bin] > 0) {
			continue
		}
		share := max(0, 1-d.After[bin]/d.Before[bin])
		l := lines[b.Order]
		if l == nil {
			l = &filter.Line{Order: b.Order, Density: make([]float64, len(a.Density)), True: make([]float64, len(a.Density))}
			lines[b.Order] = l
		}
		l.Density[k], l.True[k] = share*v, order.Meets(f, b.Order*n.middle(), observed.Rate)
		out.Rest[k] = (1 - share) * v
		if f >= n.from && f <= n.to {
			power[b.Order] += share * v * n.step
		}
	}
	var orders []float64
	for o := range lines {
		orders = append(orders, o)
	}
	slices.Sort(orders)
	for _, o := range orders {
		out.Lines = append(out.Lines, *lines[o])
	}
	return out
}

// middle is the mean speed of all rotors in revolutions per second; 0 without one.
func (n *noise) middle() float64 {
	sum, count := 0.0, 0.0
	for _, r := range n.speeds {
		for _, v := range r {
			if v > 0 {
				sum += v
				count++
			}
		}
	}
	return sum / max(1, count)
}

// narrowest is the narrowest band at a frequency; nil without one.
func narrowest(bands []kinds.OrderBand, f float64) *kinds.OrderBand {
	var out *kinds.OrderBand
	for i := range bands {
		if b := &bands[i]; b.Low <= f && f <= b.High && (out == nil || b.High-b.Low < out.High-out.Low) {
			out = b
		}
	}
	return out
}
