package compare

import (
	"fmt"
	"math"
	"slices"

	"hushframe/core/match"
	"hushframe/stages/kinds"
)

// sides are the modes that can be paired.
type sides struct {
	predicted []match.Mode
	numbers   []int // of the predicted ones
	strengths []float64
	observed  []match.Mode
	at        []int // rows of the identified modes
}

// pairModes pairs the modes of the frame with those identified in flight, over the axes that both have.
func pairModes(c *kinds.Comparison, modes *kinds.Modes, found *kinds.Identified, set settings) {
	var axes, channels []int
	for axis, name := range kinds.AxisNames {
		if at := slices.IndexFunc(found.Channels, func(x kinds.IdentifiedChannel) bool { return x.Axis == name && x.Quantity == "angular rate" }); at >= 0 {
			axes, channels = append(axes, axis), append(channels, at)
		}
	}
	if len(axes) == 0 {
		c.Notes = append(c.Notes, "the identified modes have no angular rate on roll, pitch or yaw, so no modes were paired")
		return
	}
	from, to := max(c.From, found.From), min(c.To, found.To)
	s := gatherSides(modes, found, axes, channels, from, to)
	r := match.Modes(s.predicted, s.observed, match.ModeOptions{Options: match.Options{Tolerance: set.tolerance, Reach: math.Log(1 + set.reach)}})
	strongest := slices.Max(append([]float64{0}, s.strengths...))
	for _, pair := range r.Pairs {
		p, o := s.predicted[pair.Predicted], s.observed[pair.Observed]
		c.ModePairs = append(c.ModePairs, kinds.ModePair{
			Mode: s.numbers[pair.Predicted], Predicted: p.Frequency, Observed: o.Frequency, ObservedError: o.Error, Error: pair.Error,
			Agreement: match.Agreement(p.Direction, o.Direction), PredictedDamping: p.Damping, ObservedDamping: o.Damping,
			ObservedDampingError: o.DampingError, DampingRatio: ratio(p.Damping, o.Damping), NearLoop: o.Frequency < nearLoop*set.loop, Confidence: pair.Confidence,
		})
	}
	full := func(d []float64) []float64 {
		out := make([]float64, 3)
		norm := 0.0
		for k, axis := range axes {
			out[axis] = d[k]
			norm = math.Hypot(norm, d[k])
		}
		for k := range out {
			out[k] /= norm
		}
		return out
	}
	for _, i := range r.Predicted {
		p := s.predicted[i]
		if p.Frequency < from || p.Frequency > to {
			continue // only there to be a partner beyond the edge
		}
		share := s.strengths[i] / strongest
		c.ModesAlone = append(c.ModesAlone, kinds.ModeAlone{
			Side: kinds.Predicted, Mode: s.numbers[i], Frequency: p.Frequency, Damping: p.Damping, Direction: full(p.Direction), Strength: share,
			Reason: whyMode(p, share, s.observed, set, "identified"),
		})
	}
	for _, j := range r.Observed {
		o := s.observed[j]
		c.ModesAlone = append(c.ModesAlone, kinds.ModeAlone{
			Side: kinds.Observed, Frequency: o.Frequency, Damping: o.Damping, Direction: full(o.Direction), Strength: math.NaN(),
			Reason: whyMode(o, 1, s.predicted, set, "predicted"),
		})
	}
}

// gatherSides lists identified modes within the band, and predicted ones within it or within reach of its ends.
func gatherSides(modes *kinds.Modes, found *kinds.Identified, axes, channels []int, from, to float64) sides {
	var s sides
	const beyond = 0.1
	for _, m := range modes.Survey.Modes {
		if m.Frequency < from*(1-beyond) || m.Frequency > to*(1+beyond) {
			continue
		}
		var direction []float64
		strength, norm := 0.0, 0.0
		for _, axis := range axes {
			direction = append(direction, m.Rotation[axis])
			strength, norm = math.Hypot(strength, m.Strength[axis]), math.Hypot(norm, m.Rotation[axis])
		}
		if !(norm > 0) || !(strength > 0) {
			continue // the gyro cannot see it
		}
		s.predicted = append(s.predicted, match.Mode{Frequency: m.Frequency, Damping: m.Loss / 2, Direction: direction, Strength: strength})
		s.numbers, s.strengths = append(s.numbers, m.Number), append(s.strengths, strength)
	}
	for i, m := range found.Modes {
		if m.Kind != kinds.ModeStructure || m.Frequency < from || m.Frequency > to {
			continue
		}
		var direction []float64
		norm := 0.0
		for _, k := range channels {
			direction = append(direction, m.Direction[k])
			norm = math.Hypot(norm, m.Direction[k])
		}
		if !(norm > 0) {
			continue
		}
		s.observed = append(s.observed, match.Mode{Frequency: m.Frequency, Error: m.FrequencyError, Damping: m.Damping, DampingError: m.DampingError,
			Direction: direction, DirectionError: m.DirectionError})
		s.at = append(s.at, i)
	}
	return s
}

// faintShare is the strength below which a mode is said to be too faint; common practice, as the gaps of solve count.
const faintShare = 0.1

// whyMode says why a mode has no partner among the others.
func whyMode(m match.Mode, share float64, others []match.Mode, set settings, side string) string {
	if share < faintShare {
		return fmt.Sprintf("too faint: %.2g %% of the strongest", 100*share)
	}
	best, alike := -1, false
	for i, o := range others {
		if math.Abs(math.Log(o.Frequency/m.Frequency)) > math.Log(1+set.reach) {
			continue
		}
		same := match.Agreement(o.Direction, m.Direction) > 0.5
		if best < 0 || same && !alike || same == alike && math.Abs(o.Frequency-m.Frequency) < math.Abs(others[best].Frequency-m.Frequency) {
			best, alike = i, same
		}
	}
	switch {
	case best < 0:
		return fmt.Sprintf("no %s mode within %.0f %%", side, 100*set.reach)
	case !alike:
		return fmt.Sprintf("the %s modes within reach move along other axes, the nearest at %.1f Hz", side, others[best].Frequency)
	}
	return fmt.Sprintf("the nearest %s mode of like direction, at %.1f Hz, goes better with another or is too far off", side, others[best].Frequency)
}
