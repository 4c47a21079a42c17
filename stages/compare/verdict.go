package compare

import (
	"fmt"
	"math"
	"strings"

	"hushframe/stages/kinds"
)

const (
	// onAxis is the least component of an identified mode along an axis on which it makes a peak; it must also be twice its error.
	onAxis = 0.1
	// wideBand is the width in Hz above which being in the band of an order says little; common practice.
	wideBand = 40
)

// judge gives a verdict on every observed peak in the band of one axis. identified may be nil.
func judge(c *kinds.Comparison, name string, observed *kinds.Spectra, at int, identified *kinds.Identified, set settings) {
	for _, o := range observed.Peaks {
		if o.Axis != at || o.Frequency < c.From || o.Frequency > c.To {
			continue
		}
		v := kinds.Verdict{Axis: name, Frequency: o.Frequency, Density: o.Density}
		v.Verdict, v.Reason = verdict(c, name, o, observed, identified, set)
		c.Verdicts = append(c.Verdicts, v)
	}
}

func verdict(c *kinds.Comparison, axis string, o kinds.SpectraPeak, observed *kinds.Spectra, identified *kinds.Identified, set settings) (string, string) {
	masked, others := holding(c.Orders, o.Frequency), holding(observed.Orders, o.Frequency)
	order := func(where, text string) (string, string) {
		if onlyFolded(observed.Orders, o.Frequency) {
			return kinds.VerdictAlias, text + where + ", mirrored about half the sample rate"
		}
		return kinds.VerdictOrder, text + where
	}
	mode := structureAt(identified, axis, o)
	var pair *kinds.ComparisonPair
	for i, p := range c.Pairs {
		if p.Axis == axis && p.Observed == o.Frequency {
			pair = &c.Pairs[i]
		}
	}
	switch {
	case o.Frequency <= set.loop:
		return kinds.VerdictLoop, fmt.Sprintf("below %.4g Hz, where the rate loop acts", set.loop)
	case mode != nil && identified.Span > 0 && masked != "" && math.Abs(mode.Frequency-o.Frequency) > max(3*mode.FrequencyError, 0.01*mode.Frequency):
		return order(masked, fmt.Sprintf("on the flank of the mode at %.1f Hz, where there is ", mode.Frequency))
	case mode != nil && identified.Span > 0: // the orders were taken out before it was found
		text := fmt.Sprintf("a mode was identified at %.1f Hz with %.1f %% damping", mode.Frequency, 100*mode.Damping)
		if others != "" {
			text += ", with " + others + " taken out"
		}
		return kinds.VerdictStructure, text
	case masked != "":
		return order(masked, "where there is ")
	case mode != nil:
		return kinds.VerdictStructure, fmt.Sprintf("a mode was identified at %.1f Hz with %.1f %% damping", mode.Frequency, 100*mode.Damping)
	case others != "" && pair != nil && pair.Confidence >= doubtful && !o.Narrow: // only orders that are not masked lie there
		return kinds.VerdictStructure, fmt.Sprintf("goes with the predicted peak at %.1f Hz; %s may add to it", pair.Predicted, others)
	case others != "" && (o.Narrow || narrowest(observed.Orders, o.Frequency) <= wideBand):
		return order(others, "where there is ")
	}
	if pair != nil {
		return kinds.VerdictStructure, fmt.Sprintf("goes with the predicted peak at %.1f Hz", pair.Predicted)
	}
	switch {
	case o.Narrow:
		return kinds.VerdictUnknown, "as narrow as a line, but no recorded order is there"
	case others != "":
		return kinds.VerdictUnknown, "no predicted peak goes with it; it may be " + others
	case len(observed.Rotors) == 0:
		return kinds.VerdictUnknown, "no predicted peak goes with it, and no rotor speed was recorded"
	}
	return kinds.VerdictUnknown, "no predicted peak goes with it, and no recorded order is there"
}

// structureAt returns the identified mode that makes a peak on an axis: the nearest one with a component along the axis within
// its own half-width, three of its errors, or one per cent.
func structureAt(identified *kinds.Identified, axis string, o kinds.SpectraPeak) *kinds.IdentifiedMode {
	if identified == nil {
		return nil
	}
	var best *kinds.IdentifiedMode
	for i := range identified.Modes {
		m := &identified.Modes[i]
		if m.Kind != kinds.ModeStructure {
			continue
		}
		for k, channel := range identified.Channels {
			if channel.Axis != axis || math.Abs(m.Direction[k]) < max(onAxis, 2*m.DirectionError) {
				continue
			}
			off := math.Abs(m.Frequency - o.Frequency)
			if off <= max(m.Damping*m.Frequency, 3*m.FrequencyError, 0.01*m.Frequency) && (best == nil || off < math.Abs(best.Frequency-o.Frequency)) {
				best = m
			}
		}
	}
	return best
}

// onlyFolded tells whether every order at a frequency is folded, and there is one.
func onlyFolded(bands []kinds.OrderBand, f float64) bool {
	any := false
	for _, b := range bands {
		if f < b.Low || f > b.High {
			continue
		}
		if !b.Folded {
			return false
		}
		any = true
	}
	return any
}

// narrowest is the width of the narrowest band at a frequency; infinite without one.
func narrowest(bands []kinds.OrderBand, f float64) float64 {
	out := math.Inf(1)
	for _, b := range bands {
		if b.Low <= f && f <= b.High {
			out = min(out, b.High-b.Low)
		}
	}
	return out
}

// withOrders adds to a reason the orders that are recorded at a frequency though they are not masked.
func withOrders(reason string, observed *kinds.Spectra, masked []kinds.OrderBand, f float64) string {
	if where := holding(observed.Orders, f); where != "" && !strings.Contains(holding(masked, f), where) {
		return reason + "; it may be " + where
	}
	return reason
}
