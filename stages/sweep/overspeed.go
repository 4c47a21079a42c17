package sweep

import (
	"context"
	"math"

	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/rotor"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// mapSpeeds is the number of even speeds of the map, up to the highest.
const mapSpeeds = 200

// voice is one tone of one rotor.
type voice struct {
	rotor int
	tone  rotor.Tone
	ratio float64 // speed of the rotor over that of the first
	order float64 // multiple of the speed of the first
}

// voices lists what a source makes, by rotor.
func (f *fleet) voices(e rotor.Excitation, source string) []voice {
	var out []voice
	for k, x := range f.rotors {
		for _, tone := range e.Tones(x) {
			if tone.Name == source {
				ratio := x.HoverSpeed / f.rotors[0].HoverSpeed
				out = append(out, voice{k, tone, ratio, tone.Order * ratio})
			}
		}
	}
	return out
}

// overSpeed fills in the lines over rotor speed, each with the gyroscopic
// moments of its speed, and the spectrum over a flight. There are none where
// rotors have no hover speed or no highest one.
func (f *fleet) overSpeed(ctx context.Context, r *kinds.Response, sys *forced.System, tr *forced.Transfer, set settings, threads int) error {
	e := set.excitation(r.Thrust)
	highest := f.highest()
	if !(highest > 0) {
		return nil
	}
	for k := range mapSpeeds {
		r.MapSpeeds = append(r.MapSpeeds, highest*float64(k+1)/mapSpeeds)
	}
	for axis := range r.Flown {
		r.Flown[axis] = append([]float64(nil), r.Density[axis]...)
	}
	for _, source := range rotor.ToneNames {
		left := f.voices(e, source)
		for len(left) > 0 { // those of one frequency make one line
			var now, later []voice
			for _, v := range left {
				if v.order == left[0].order {
					now = append(now, v)
				} else {
					later = append(later, v)
				}
			}
			row, err := f.overMap(ctx, sys, now, r.MapSpeeds, set.spinning, threads)
			if err != nil {
				return err
			}
			r.Orders = append(r.Orders, row)
			f.smear(r, tr, now, set)
			left = later
		}
	}
	return nil
}

// highest is the highest speed of the first rotor at which any rotor is at its
// highest; 0 where it is not known.
func (f *fleet) highest() float64 {
	highest := 0.0
	for _, x := range f.rotors {
		if !(x.HoverSpeed > 0) {
			return 0
		}
		highest = max(highest, x.MaxSpeed*f.rotors[0].HoverSpeed/x.HoverSpeed)
	}
	return highest
}

// overMap gives the line of some voices of one frequency over the speeds of the
// first rotor, the rotors added as power.
func (f *fleet) overMap(ctx context.Context, sys *forced.System, voices []voice, speeds []float64, spinning bool, threads int) (kinds.ResponseOrder, error) {
	row := kinds.ResponseOrder{Source: voices[0].tone.Name, Order: voices[0].order}
	frequency := make([]float64, len(speeds))
	var momenta [][]float64
	for k, speed := range speeds {
		frequency[k] = rotor.Frequency(row.Order, speed)
		if spinning {
			var at []float64
			for _, x := range f.rotors {
				at = append(at, rotor.Momentum(x, speed*x.HoverSpeed/f.rotors[0].HoverSpeed))
			}
			momenta = append(momenta, at)
		}
	}
	tr, err := sys.TransferSpun(ctx, frequency, momenta, threads)
	if err != nil {
		return row, err
	}
	for axis := range row.Rate {
		row.Rate[axis] = make([]float64, len(speeds))
	}
	for _, v := range voices {
		name := f.rotors[v.rotor].Name
		row.Rotors = append(row.Rotors, name)
		for k, speed := range speeds {
			for axis, a := range loud(tr, k, name, v.tone, speed*v.ratio) {
				row.Rate[axis][k] = math.Hypot(row.Rate[axis][k], a)
			}
		}
	}
	return row, nil
}

// smear adds to the spectrum over a flight what lines make when the speed of
// the first rotor has a density p: at frequency f a line of order k has the density
// p(2πf/k) 2π/k A²/2, which integrates to the mean square of the line. The
// gyroscopic moments are those of the speed of this response.
func (f *fleet) smear(r *kinds.Response, tr *forced.Transfer, voices []voice, set settings) {
	for k, frequency := range r.Frequency {
		for _, v := range voices {
			speed := 2 * math.Pi * frequency / v.order
			p := set.chance(speed, f.speeds[0]) * 2 * math.Pi / v.order
			if p == 0 {
				continue
			}
			for axis, a := range loud(tr, k, f.rotors[v.rotor].Name, v.tone, speed*v.ratio) {
				r.Flown[axis][k] += p * a * a / 2
			}
		}
	}
}

// flight is a speed of the first rotor with the share of the flight about it.
type flight struct{ speed, share float64 }

func readFlown(list []any) []flight {
	var out []flight
	for _, x := range list {
		m := x.(map[string]any)
		out = append(out, flight{m["speed"].(stage.Quantity).SI, m["share"].(float64)})
	}
	return out
}

// chance is the density of the speed of the first rotor over a flight, per
// rad/s: about each speed flown, or the present one, a normal one with a standard deviation of
// spread times that speed.
func (s settings) chance(speed, present float64) float64 {
	flown := s.flown
	if len(flown) == 0 {
		flown = []flight{{present, 1}}
	}
	sum, total := 0.0, 0.0
	for _, x := range flown {
		sd := s.spread * x.speed
		z := (speed - x.speed) / sd
		total += x.share
		if math.Abs(z) < 8 {
			sum += x.share * math.Exp(-z*z/2) / (sd * math.Sqrt(2*math.Pi))
		}
	}
	return sum / total
}
