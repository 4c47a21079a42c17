package filter

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/signal/filter"
	"hushframe/stages/kinds"
)

// weigh evaluates the chain of the job, or chooses one.
func weigh(n *noise, set settings) (*kinds.Filtered, error) {
	x := &kinds.Filtered{Rate: set.rate, Bandwidth: set.bandwidth, From: n.from, To: n.to, Target: set.target, Met: true, Notes: n.notes, Filters: set.filters}
	for i, f := range x.Filters {
		if f.Type == kinds.FilterRotorNotch && len(n.speeds) == 0 {
			return nil, refuse("filters", "filter %d follows a rotor, but no rotor speed is known", i+1).
				Do("log the rotor speeds, or let identify follow them in the signal (find_rotors) and give identified")
		}
	}
	if len(x.Filters) == 0 {
		x.Chosen = true
		choose(x, n, set)
	}
	train := filter.Train{Rate: set.rate, Speeds: n.speeds}
	for _, f := range x.Filters {
		train.Filters = append(train.Filters, build(f, set.rate))
	}
	x.Lag, x.GroupDelay, x.Gain = train.Lag(set.bandwidth), train.Delay(set.bandwidth), math.Sqrt(train.Power(set.bandwidth))
	x.Delay = x.Lag / (2 * math.Pi * set.bandwidth)
	var at []int // bins kept
	for k := range n.bins {
		if f := float64(k) * n.step; k > 0 && f < set.rate/2 {
			at = append(at, k)
			x.Curves = append(x.Curves, kinds.FilteredCurve{Frequency: f, Power: train.Power(f), Lag: train.Lag(f), GroupDelay: train.Delay(f)})
		}
	}
	for _, a := range n.axes {
		x.Axes = append(x.Axes, n.through(a, train, at, x))
	}
	for i := range x.Filters {
		n.costs(&x.Filters[i], i, train, x)
	}
	for _, a := range x.Axes {
		if !math.IsNaN(set.target) && a.ObservedLeft > set.target {
			x.Met = false
		}
	}
	return x, nil
}

// through passes one axis through the train.
func (n *noise) through(a axis, train filter.Train, at []int, x *kinds.Filtered) kinds.FilteredAxis {
	pick := func(v []float64) []float64 {
		out := make([]float64, len(at))
		for i, k := range at {
			out[i] = v[k]
		}
		return out
	}
	left := train.Leaves(a.noise)
	out := kinds.FilteredAxis{Axis: a.name, Observed: pick(a.observed), ObservedAfter: pick(left), Predicted: []float64{}, PredictedAfter: []float64{},
		ObservedRMS: filter.RMS(a.observed, n.step, n.from, n.to), ObservedLeft: filter.RMS(left, n.step, n.from, n.to),
		PredictedRMS: math.NaN(), PredictedLeft: math.NaN()}
	if a.predicted == nil {
		return out
	}
	after := train.Leaves(filter.Noise{Step: n.step, Rest: a.predicted})
	out.Predicted, out.PredictedAfter = pick(a.predicted), pick(after)
	if rms := filter.RMS(a.predicted, n.step, n.from, n.to); rms > 0 {
		out.PredictedRMS, out.PredictedLeft = rms, filter.RMS(after, n.step, n.from, n.to)
	}
	return out
}

// costs says what one filter costs, and what it buys: what more would be left without it.
func (n *noise) costs(f *kinds.FilteredFilter, place int, train filter.Train, x *kinds.Filtered) {
	own := filter.Train{Rate: train.Rate, Speeds: train.Speeds, Filters: train.Filters[place : place+1]}
	f.Name = name(*f)
	f.Lag, f.GroupDelay, f.Gain = own.Lag(x.Bandwidth), own.Delay(x.Bandwidth), math.Sqrt(own.Power(x.Bandwidth))
	f.Delay = f.Lag / (2 * math.Pi * x.Bandwidth)
	f.Power = make([]float64, len(x.Curves))
	for i, c := range x.Curves {
		f.Power[i] = own.Power(c.Frequency)
	}
	without := filter.Train{Rate: train.Rate, Speeds: train.Speeds}
	for i, other := range train.Filters {
		if i != place {
			without.Filters = append(without.Filters, other)
		}
	}
	f.Buys = make([]float64, len(n.axes))
	for i, a := range n.axes {
		more := filter.RMS(without.Leaves(a.noise), n.step, n.from, n.to)
		f.Buys[i] = 20 * math.Log10(more/x.Axes[i].ObservedLeft)
	}
	if f.Type == kinds.FilterRotorNotch {
		f.Frequency, f.Count = f.Order*n.middle(), len(n.speeds)
	}
}

// peakWidth is the width of a notch over the half-power width of the peak it takes out; common practice, as is the range of Q.
const (
	peakWidth      = 3
	leastQ, mostQ  = 1.0, 6.0
	withoutWidthsQ = 3.0
)

// choose takes the smallest sensible chain for the target.
func choose(x *kinds.Filtered, n *noise, set settings) {
	g := filter.Goal{Rate: set.rate, Speeds: n.speeds, From: n.from, To: n.to, Target: set.target, Bandwidth: set.bandwidth, FollowQ: followQ, Lowest: followLow,
		Orders: n.orders}
	if set.orders != nil {
		g.Orders = set.orders
	} else if len(g.Orders) > 2 {
		g.Orders = g.Orders[:2]
	}
	for _, p := range n.peaks {
		apart := true
		for i, f := range g.Centres {
			apart = apart && math.Abs(p.Frequency-f) > f/(2*g.Q[i])
		}
		if !apart || len(g.Centres) >= set.notches || p.Frequency >= 0.45*set.rate || p.Frequency < 2*set.bandwidth {
			continue
		}
		q := withoutWidthsQ
		if width := p.Upper - p.Lower; width > 0 {
			q = min(max(p.Frequency/(peakWidth*width), leastQ), mostQ)
		}
		g.Centres, g.Q = append(g.Centres, math.Round(p.Frequency)), append(g.Q, math.Round(10*q)/10)
	}
	var noises []filter.Noise
	for _, a := range n.axes {
		noises = append(noises, a.noise)
	}
	trials, best := filter.Choose(noises, g)
	chain := func(t filter.Trial) []kinds.FilteredFilter {
		out := []kinds.FilteredFilter{}
		for _, o := range g.Orders[:t.Orders] {
			out = append(out, kinds.FilteredFilter{Type: kinds.FilterRotorNotch, Frequency: followLow, Q: followQ, Count: 1, Order: o})
		}
		for i, f := range g.Centres[:t.Centres] {
			out = append(out, kinds.FilteredFilter{Type: kinds.FilterNotch, Frequency: f, Q: g.Q[i], Count: 1, Order: math.NaN()})
		}
		switch t.LowPass {
		case 1:
			out = append(out, kinds.FilteredFilter{Type: kinds.FilterFirstOrder, Frequency: t.Cutoff, Q: math.NaN(), Count: 1, Order: math.NaN()})
		case 2:
			out = append(out, kinds.FilteredFilter{Type: kinds.FilterLowPass, Frequency: t.Cutoff, Q: lowPassQ, Count: 1, Order: math.NaN()})
		}
		return out
	}
	for _, t := range trials {
		var names []string
		for _, f := range chain(t) {
			names = append(names, name(f))
		}
		if len(names) == 0 {
			names = []string{"none"}
		}
		x.Tried = append(x.Tried, kinds.FilteredTrial{Chain: strings.Join(names, ", "), Filters: t.Filters(), Lag: t.Lag, Left: t.Left, Met: t.Met})
	}
	if best < 0 { // the one that comes nearest
		for i, t := range trials {
			if best < 0 || t.Left < trials[best].Left {
				best = i
			}
		}
		x.Notes = append(x.Notes, fmt.Sprintf("no chain with its low-pass above the control's bandwidth of %.4g Hz meets the target; the one that comes nearest is shown", set.bandwidth))
	}
	x.Filters = chain(trials[best])
}
