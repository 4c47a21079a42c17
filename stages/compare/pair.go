package compare

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/match"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/kinds"
)

// nearLoop is how far above the bandwidth of the rate loop its influence is mentioned; common practice.
const nearLoop = 1.5

// compare pairs the peaks of every axis that was recorded.
func compare(predicted *kinds.Response, observed *kinds.Spectra, modes *kinds.Modes, identified *kinds.Identified, set settings) (*kinds.Comparison, error) {
	c := &kinds.Comparison{From: 80, To: 0.4 * observed.Rate, Tolerance: set.tolerance, Reach: set.reach}
	if len(set.band) == 2 {
		c.From, c.To = set.band[0], set.band[1]
	}
	if half := observed.Rate / 2; c.From >= half {
		return nil, fault.New(fault.Input, "the band begins at %g Hz, but a recording at %.5g Hz ends at %.5g Hz", c.From, observed.Rate, half).
			In("compare", "").Of("band").Do("choose a lower band, or a faster recording")
	}
	if c.From >= predicted.To || c.To <= predicted.From {
		return nil, fault.New(fault.Input, "the band of %.4g to %.4g Hz and the sweep of %.4g to %.4g Hz have nothing in common", c.From, c.To, predicted.From, predicted.To).
			In("compare", "").Of("band").Do("choose a band within the sweep, or sweep further")
	}
	c.Orders, c.Notes = masks(predicted, observed, set)
	for axis, name := range kinds.AxisNames {
		at := slices.IndexFunc(observed.Axes, func(a kinds.SpectraAxis) bool { return a.Axis == name && a.Quantity == "angular rate" })
		if at < 0 {
			c.Notes = append(c.Notes, name+" was not recorded")
			continue
		}
		pairAxis(c, name, predicted, observed, at, set)
		judge(c, name, observed, at, identified, set)
		c.Axes = append(c.Axes, curves(c, axis, predicted, observed, at))
	}
	if len(c.Axes) == 0 {
		return nil, fault.New(fault.Input, "the recording has no angular rate on roll, pitch or yaw").In("compare", "").Of("observed").
			Do("name the columns of the gyro in columns of record")
	}
	switch {
	case identified != nil && modes != nil:
		pairModes(c, modes, identified, set)
	case identified != nil:
		c.Notes = append(c.Notes, "no modes were given, so the identified ones were not paired; give modes from solve")
	}
	sortAlone(c.Unpaired)
	sortAlone(c.Masked)
	c.Notes = append(c.Notes, consistency(c)...)
	c.Notes = append(c.Notes, loopNote(c, set.loop))
	return c, nil
}

// pairAxis pairs the peaks of one axis; at is its place in the spectra.
func pairAxis(c *kinds.Comparison, name string, predicted *kinds.Response, observed *kinds.Spectra, at int, set settings) {
	var ps []kinds.ResponsePeak
	for _, p := range predicted.Peaks {
		if p.Axis == name && c.From <= p.Frequency && p.Frequency <= c.To {
			ps = append(ps, p)
		}
	}
	var os []kinds.SpectraPeak
	for _, o := range observed.Peaks {
		if o.Axis != at || o.Frequency < c.From || o.Frequency > c.To {
			continue
		}
		if where := holding(c.Orders, o.Frequency); where != "" {
			c.Masked = append(c.Masked, alone(name, o, "where there is "+where))
			continue
		}
		os = append(os, o)
	}
	own := []float64{1}
	var left, right []match.Peak
	for _, p := range ps {
		left = append(left, match.Peak{Frequency: p.Frequency, Direction: own})
	}
	for _, o := range os {
		right = append(right, match.Peak{Frequency: o.Frequency, Error: o.FrequencyError, Direction: own})
	}
	r := match.Pairs(left, right, match.Options{Tolerance: set.tolerance, Reach: math.Log(1 + set.reach)})
	for _, pair := range r.Pairs {
		p, o := ps[pair.Predicted], os[pair.Observed]
		c.Pairs = append(c.Pairs, kinds.ComparisonPair{
			Axis: name, Predicted: p.Frequency, Observed: o.Frequency, ObservedError: o.FrequencyError, Error: pair.Error, Confidence: pair.Confidence,
			PredictedDensity: p.Density, ObservedDensity: o.Density, PredictedDamping: p.Damping,
			ObservedDamping: o.Damping, ObservedDampingError: o.DampingError, DampingRatio: ratio(p.Damping, o.Damping),
			NearLoop: o.Frequency < nearLoop*set.loop, Modes: p.Modes,
		})
	}
	for _, i := range r.Predicted {
		p := ps[i]
		x := kinds.ComparisonPeak{Side: kinds.Predicted, Axis: name, Frequency: p.Frequency, Density: p.Density, Damping: p.Damping, Modes: p.Modes}
		if where := holding(c.Orders, p.Frequency); where != "" {
			x.Reason = "an observed peak could not be told from " + where
			c.Masked = append(c.Masked, x)
			continue
		}
		x.Reason = whyAlone(p.Frequency, right, pairedWith(r, left), set.reach, "observed", "predicted")
		c.Unpaired = append(c.Unpaired, x)
	}
	for _, j := range r.Observed {
		o := os[j]
		reason := whyAlone(o.Frequency, left, observedWith(r, right), set.reach, "predicted", "observed")
		if o.Frequency < predicted.From || o.Frequency > predicted.To {
			reason = fmt.Sprintf("outside the sweep of %.4g to %.4g Hz", predicted.From, predicted.To)
		}
		if o.Narrow {
			reason += "; as narrow as the window shows a line"
		}
		c.Unpaired = append(c.Unpaired, alone(name, o, withOrders(reason, observed, c.Orders, o.Frequency)))
	}
}

func alone(axis string, o kinds.SpectraPeak, reason string) kinds.ComparisonPeak {
	return kinds.ComparisonPeak{Side: kinds.Observed, Axis: axis, Frequency: o.Frequency, Density: o.Density, Damping: o.Damping, Reason: reason}
}

// ratio of two damping ratios; NaN if either is not known.
func ratio(predicted, observed float64) float64 {
	if !(predicted > 0) || !(observed > 0) {
		return math.NaN()
	}
	return predicted / observed
}

// pairedWith gives, by observed index, the frequency of the predicted partner; observedWith the reverse.
func pairedWith(r match.Result, predicted []match.Peak) map[int]float64 {
	out := map[int]float64{}
	for _, p := range r.Pairs {
		out[p.Observed] = predicted[p.Predicted].Frequency
	}
	return out
}

func observedWith(r match.Result, observed []match.Peak) map[int]float64 {
	out := map[int]float64{}
	for _, p := range r.Pairs {
		out[p.Predicted] = observed[p.Observed].Frequency
	}
	return out
}

// whyAlone says why a peak has no partner among the others, of which partners have one.
func whyAlone(f float64, others []match.Peak, partner map[int]float64, reach float64, side, own string) string {
	best := -1
	for i, o := range others {
		if best < 0 || math.Abs(math.Log(o.Frequency/f)) < math.Abs(math.Log(others[best].Frequency/f)) {
			best = i
		}
	}
	if best < 0 || math.Abs(math.Log(others[best].Frequency/f)) > math.Log(1+reach) {
		return fmt.Sprintf("no %s peak within %.0f %%", side, 100*reach)
	}
	if with, taken := partner[best]; taken {
		return fmt.Sprintf("the %s peak nearest to it, at %.1f Hz, goes better with the %s one at %.1f Hz", side, others[best].Frequency, own, with)
	}
	return fmt.Sprintf("the %s peak nearest to it, at %.1f Hz, is too far off for the tolerance", side, others[best].Frequency)
}

// curves reads both densities at the bins of the recording within the sweep, and fits the level within the band.
func curves(c *kinds.Comparison, axis int, predicted *kinds.Response, observed *kinds.Spectra, at int) kinds.ComparisonAxis {
	out := kinds.ComparisonAxis{Axis: kinds.AxisNames[axis]}
	var use []bool
	for k, density := range observed.Axes[at].Density {
		f := observed.Frequency(k)
		if k == 0 || f < predicted.From || f > predicted.To {
			continue
		}
		out.Frequency, out.Observed = append(out.Frequency, f), append(out.Observed, density)
		use = append(use, c.From <= f && f <= c.To && holding(c.Orders, f) == "")
	}
	out.Predicted = match.Resample(predicted.Frequency, predicted.Density[axis], out.Frequency)
	level := match.Scale(out.Predicted, out.Observed, use)
	out.Scale, out.Residual, out.Bins = level.Factor, level.Residual, level.Bins
	out.Assurance = match.Assurance(out.Predicted, out.Observed, use)
	if level.Bins == 0 {
		c.Notes = append(c.Notes, "no bin of "+out.Axis+" is left to fit a level to")
	}
	return out
}

func sortAlone(peaks []kinds.ComparisonPeak) {
	axis := func(name string) int { return slices.Index(kinds.AxisNames[:], name) }
	slices.SortStableFunc(peaks, func(a, b kinds.ComparisonPeak) int {
		if a.Side != b.Side {
			return -strings.Compare(a.Side, b.Side) // predicted first
		}
		if d := axis(a.Axis) - axis(b.Axis); d != 0 {
			return d
		}
		switch {
		case a.Frequency < b.Frequency:
			return -1
		case a.Frequency > b.Frequency:
			return 1
		}
		return 0
	})
}

// apart is the relative difference above which two observed peaks are not those of one mode; common practice.
const apart = 0.03

// consistency names modes that lead pairs on several axes with observed frequencies that cannot be one mode's.
func consistency(c *kinds.Comparison) []string {
	var out []string
	for i, a := range c.Pairs {
		for _, b := range c.Pairs[i+1:] {
			if a.Axis == b.Axis || len(a.Modes) == 0 || len(b.Modes) == 0 || a.Modes[0] != b.Modes[0] {
				continue
			}
			if math.Abs(a.Observed/b.Observed-1) > apart && math.Abs(a.Predicted/b.Predicted-1) <= apart {
				out = append(out, fmt.Sprintf("mode %d leads pairs at %.1f Hz on %s and at %.1f Hz on %s, which are too far apart for one mode: at least one of them is doubtful",
					a.Modes[0], a.Observed, a.Axis, b.Observed, b.Axis))
			}
		}
	}
	return out
}

// loopNote says what the control does to what was observed.
func loopNote(c *kinds.Comparison, loop float64) string {
	near := 0
	for _, p := range c.Pairs {
		if p.Observed < nearLoop*loop {
			near++
		}
	}
	text := fmt.Sprintf("in flight the rate loop acts up to about %.4g Hz: near and below that, what is observed is frame and control together, "+
		"and its frequency and damping differ from those of the frame alone", loop)
	switch near {
	case 0:
		return text + "; no pair lies there"
	case 1:
		return text + fmt.Sprintf("; one pair lies below %.4g Hz", nearLoop*loop)
	}
	return text + fmt.Sprintf("; %d pairs lie below %.4g Hz", near, nearLoop*loop)
}
