package sweep

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// throttled is a throttle, 0 to 1, with the share of the flight at it.
type throttled struct{ throttle, share float64 }

func readThrottles(list []any) []throttled {
	var out []throttled
	for _, x := range list {
		m := x.(map[string]any)
		out = append(out, throttled{m["throttle"].(float64), m["share"].(float64)})
	}
	return out
}

// answer is a throttle with the speed of the first rotor that it makes, rad/s.
type answer struct{ throttle, speed float64 }

// curve is the speed of the first rotor over throttle, ascending in both, straight between its points.
type curve []answer

func readCurve(list []any) (curve, error) {
	var out curve
	for _, x := range list {
		m := x.(map[string]any)
		out = append(out, answer{m["throttle"].(float64), m["speed"].(stage.Quantity).SI})
	}
	sort.SliceStable(out, func(a, b int) bool { return out[a].throttle < out[b].throttle })
	said := func(format string, args ...any) *fault.Error {
		return fault.New(fault.Input, format, args...).In("sweep", "").Of("speed_at_throttle")
	}
	if len(out) == 1 {
		return nil, said("one point does not tell how speed goes with throttle").Do("give at least two, such as idle and full throttle")
	}
	for k := 1; k < len(out); k++ {
		switch a, b := out[k-1], out[k]; {
		case a.throttle == b.throttle:
			return nil, said("a throttle of %g has two speeds", a.throttle).Do("give each throttle once")
		case b.speed < a.speed:
			return nil, said("speed falls from %.0f to %.0f rpm where throttle rises from %g to %g", a.speed/rpm, b.speed/rpm, a.throttle, b.throttle).
				Do("check both points; rotors turn faster with more throttle")
		}
	}
	return out, nil
}

// at gives the speed at a throttle, and rad/s per unit of throttle there; false outside of the points.
func (c curve) at(throttle float64) (speed, slope float64, ok bool) {
	for k := 1; k < len(c); k++ {
		a, b := c[k-1], c[k]
		if throttle < a.throttle || throttle > b.throttle {
			continue
		}
		slope = (b.speed - a.speed) / (b.throttle - a.throttle)
		return a.speed + slope*(throttle-a.throttle), slope, true
	}
	return 0, 0, false
}

// steered turns throttles into speeds of the first rotor; width is that of a class of throttle, whose
// speeds then stray at least by half of it. Faults name the argument that told the throttles.
func (c curve) steered(list []throttled, width float64, argument string) ([]flight, error) {
	var out []flight
	for _, x := range list {
		speed, slope, ok := c.at(x.throttle)
		if !ok {
			return nil, fault.New(fault.Input, "no speed is known at a throttle of %.3g, only from %g to %g", x.throttle, c[0].throttle, c[len(c)-1].throttle).
				In("sweep", "").Of(argument).Do("add a point at or beyond it to speed_at_throttle")
		}
		out = append(out, flight{speed: speed, share: x.share, stray: slope * width / 2})
	}
	return out, nil
}

// mostClasses bounds the classes of a recorded throttle, leastClass is the width of the finest.
const (
	mostClasses = 12
	leastClass  = 0.02
)

// recordedThrottle sums up the throttle of a recording in even classes: of the pieces that its spectra come from, or
// of its window.
func recordedThrottle(s *kinds.Spectra) (list []throttled, width float64) {
	var all []throttled
	if s.ChosenBy == kinds.MapThrottle {
		for _, p := range s.Pieces {
			if p.Used {
				all = append(all, throttled{p.Level, float64(p.Samples)})
			}
		}
	} else {
		for _, cell := range s.MapOf(0, kinds.MapThrottle) {
			all = append(all, throttled{cell.Centre, float64(cell.Segments)})
		}
	}
	all = slices.DeleteFunc(all, func(x throttled) bool { return math.IsNaN(x.throttle) })
	least, most := math.Inf(1), math.Inf(-1)
	for _, x := range all {
		least, most = min(least, x.throttle), max(most, x.throttle)
	}
	width = max(leastClass, (most-least)/mostClasses)
	classes := make([]throttled, mostClasses) // of each the mean and the whole share
	for _, x := range all {
		c := &classes[min(mostClasses-1, int((x.throttle-least)/width))]
		c.throttle += x.share * x.throttle
		c.share += x.share
	}
	for _, c := range classes {
		if c.share > 0 {
			list = append(list, throttled{c.throttle / c.share, c.share})
		}
	}
	return list, width
}

// steer fills set.flown from the throttle over a flight, told or recorded, where there is one.
func (s *settings) steer(recorded *kinds.Spectra) error {
	told := len(s.throttles) > 0
	clash := func(text, argument, remedy string) error {
		return fault.New(fault.Input, "%s", text).In("sweep", "").Of(argument).Do("%s", remedy)
	}
	switch {
	case told && recorded != nil:
		return clash("both the recording and throttle_flown say how a flight is spread", "throttle_flown", "leave one of them out")
	case told && len(s.flown) > 0:
		return clash("both speeds_flown and throttle_flown say how a flight is spread", "throttle_flown", "leave one of them out")
	case told && len(s.curve) == 0:
		return clash("how fast the rotors turn at these throttles is not known", "throttle_flown",
			`add speed_at_throttle = [{ throttle = 0.2, speed = "9500 rpm" }, { throttle = 0.7, speed = "24000 rpm" }] with your own points`)
	case len(s.curve) == 0:
		return nil
	case told:
		flown, err := s.curve.steered(s.throttles, 0, "throttle_flown")
		s.flown = flown
		return err
	case recorded == nil:
		return clash("nothing says what the throttle is over a flight", "speed_at_throttle", "add throttle_flown or a recording that has throttle, or leave it out")
	case len(recorded.Rotors) > 0:
		return clash("the recording has the speeds of rotors, which count more than its throttle", "speed_at_throttle", "leave it out")
	}
	list, width := recordedThrottle(recorded)
	if len(list) == 0 {
		return clash("the recording has neither rotor speeds nor throttle", "recording", "name its column in throttle of record, or leave recording out and give throttle_flown")
	}
	flown, err := s.curve.steered(list, width, "recording")
	s.throttles, s.flown = list, flown
	return err
}

// throttleNote says what throttle stands for over a flight.
func throttleNote(set settings, recorded bool) string {
	source, total := "told", 0.0
	if recorded {
		source = "recorded"
	}
	for _, x := range set.throttles {
		total += x.share
	}
	var parts []string
	for k, x := range set.throttles {
		parts = append(parts, fmt.Sprintf("%.3g for %.0f %% (%.0f rpm)", x.throttle, 100*x.share/total, set.flown[k].speed/rpm))
	}
	wide, least := 0.0, ""
	for _, y := range set.flown {
		wide = max(wide, y.stray)
	}
	if wide > 0 {
		least = fmt.Sprintf(", and by no less than half the speeds of its class, up to %.0f rpm", wide/rpm)
	}
	return fmt.Sprintf("rotor speed over a flight follows the throttle as %s: %s; it is assumed to stray by %.3g %% about each%s", source, strings.Join(parts, ", "), 100*set.spread, least)
}
