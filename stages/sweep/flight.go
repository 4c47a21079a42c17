package sweep

import (
	"fmt"
	"math"
	"sort"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// normal is a part of a flight in which a rotor's speed strays about a mean.
type normal struct{ mean, deviation, share float64 }

// flight is a speed of the first rotor with the share of the flight about it, and by how much it strays at least.
type flight struct{ speed, share, stray float64 }

func readFlown(list []any) []flight {
	var out []flight
	for _, x := range list {
		m := x.(map[string]any)
		out = append(out, flight{speed: m["speed"].(stage.Quantity).SI, share: m["share"].(float64)})
	}
	return out
}

// quantile99 is the 99 % point of the standard normal distribution.
const quantile99 = 2.3263478740408408

// fly says how the speed of each rotor is spread over a flight: as recorded,
// else as told or as throttle made it, else about its speed in this response. Parts of a rotor add up to 1.
func (f *fleet) fly(set settings, recorded *kinds.Spectra) error {
	f.flown = nil
	for k, x := range f.rotors {
		if recorded != nil && len(set.flown) == 0 {
			n, err := asRecorded(x.Name, recorded)
			if err != nil {
				return err
			}
			f.flown = append(f.flown, []normal{n})
			continue
		}
		told := set.flown
		if len(told) == 0 {
			told = []flight{{speed: f.speeds[0], share: 1}}
		}
		total := 0.0
		for _, y := range told {
			total += y.share
		}
		ratio := f.speeds[k] / f.speeds[0]
		var parts []normal
		for _, y := range told {
			parts = append(parts, normal{y.speed * ratio, max(set.spread*y.speed, y.stray) * ratio, y.share / total})
		}
		f.flown = append(f.flown, parts)
	}
	return nil
}

// asRecorded takes the speeds of a rotor for normal, with the recorded median and
// the recorded distance of the 1 % and 99 % points.
func asRecorded(rotor string, s *kinds.Spectra) (normal, error) {
	var names []string
	for _, x := range s.Rotors {
		names = append(names, x.Rotor)
		if x.Rotor != rotor {
			continue
		}
		n := normal{x.Median, (x.High - x.Low) / (2 * quantile99), 1}
		if !(n.mean > 0) || !(n.deviation >= 0) {
			return n, fault.New(fault.Input, "the recording holds no speed of rotor %s", rotor).In("sweep", "rotor "+rotor).Of("recording").
				Do("let the window of record hold flight, or leave recording out and give speeds_flown")
		}
		n.deviation = max(n.deviation, 1e-3*n.mean) // a line of no width has no density
		return n, nil
	}
	if len(names) == 0 && len(s.MapOf(0, kinds.MapThrottle)) > 0 {
		return normal{}, fault.New(fault.Input, "the recording has throttle, but no rotor speeds").In("sweep", "rotor "+rotor).Of("recording").
			Do("give speed_at_throttle, or name the columns of the speeds in rotors of record")
	}
	return normal{}, fault.New(fault.Input, "the recording has no speed of rotor %s, only of %v", rotor, names).In("sweep", "rotor "+rotor).Of("recording").
		Do("name the columns of the speeds in rotors of record after the rotors of the airframe")
}

// chance is the density of the speed of a rotor over the flight, per rad/s.
func (f *fleet) chance(rotor int, speed float64) float64 {
	sum := 0.0
	for _, n := range f.flown[rotor] {
		if z := (speed - n.mean) / n.deviation; math.Abs(z) < 8 {
			sum += n.share * math.Exp(-z*z/2) / (n.deviation * math.Sqrt(2*math.Pi))
		}
	}
	return sum
}

// parts samples the speeds of the first rotor over the flight, within two and a
// half deviations of each mean, ascending; the shares add up to 1.
func (f *fleet) parts() []kinds.ResponseFlight {
	const perDeviation, reach = 2, 5
	var out []kinds.ResponseFlight
	total := 0.0
	for _, n := range f.flown[0] {
		for k := -reach; k <= reach; k++ {
			z := float64(k) / perDeviation
			speed := n.mean + z*n.deviation
			if !(speed > 0) {
				continue
			}
			share := n.share * math.Exp(-z*z/2)
			total += share
			out = append(out, kinds.ResponseFlight{Speed: speed, Share: share})
		}
	}
	for k := range out {
		out[k].Share /= total
	}
	sort.SliceStable(out, func(a, b int) bool { return out[a].Speed < out[b].Speed })
	return out
}

// flownTooFast warns of a told flight in which a rotor turns faster than it can.
func flownTooFast(r *kinds.Response, set settings) []stage.Warning {
	var out []stage.Warning
	for _, x := range r.Rotors {
		fastest := 0.0
		for _, y := range set.flown {
			fastest = max(fastest, y.speed*x.Hover/r.Rotors[0].Hover)
		}
		if x.Highest > 0 && fastest > x.Highest*(1+1e-9) {
			out = append(out, stage.Warning{
				ID: "sweep.flown-beyond-speed", Text: fmt.Sprintf("rotor %s turns at up to %.0f rpm over the flight, and by its airframe at no more than %.0f rpm", x.Rotor, fastest/rpm, x.Highest/rpm),
				Where: "speeds_flown", Remedy: "lower the speeds of the flight, or raise max_speed in the airframe file",
			})
		}
	}
	return out
}

// flownNote says what the spectrum over a flight rests on.
func flownNote(set settings, recorded bool) string {
	switch {
	case len(set.throttles) > 0:
		return throttleNote(set, recorded)
	case recorded:
		return "rotor speeds over a flight are those of the recording"
	case len(set.flown) > 0:
		return fmt.Sprintf("rotor speed is assumed to stray by %.3g %% about each of the speeds flown", 100*set.spread)
	}
	return fmt.Sprintf("rotor speed is assumed to stray by %.3g %% over a flight", 100*set.spread)
}
