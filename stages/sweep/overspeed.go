package sweep

import (
	"context"
	"math"

	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/rotor"
	"hushframe/stages/kinds"
)

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
func (f *fleet) overSpeed(ctx context.Context, r *kinds.Response, sys *forced.System, rest *forced.Rest, set settings, threads int) error {
	e := set.excitation(r.Thrust)
	highest := f.highest()
	if !(highest > 0) {
		return nil
	}
	for k := range set.mapSpeeds {
		r.MapSpeeds = append(r.MapSpeeds, highest*float64(k+1)/float64(set.mapSpeeds))
	}
	if err := f.weigh(r, sys, rest, set); err != nil {
		return err
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
			row, err := f.overMap(ctx, sys, now, r.MapSpeeds, set, threads)
			if err != nil {
				return err
			}
			r.Orders = append(r.Orders, row)
			if err := f.smear(r, sys, rest, now, set); err != nil {
				return err
			}
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
func (f *fleet) overMap(ctx context.Context, sys *forced.System, voices []voice, speeds []float64, set settings, threads int) (kinds.ResponseOrder, error) {
	row := kinds.ResponseOrder{Source: voices[0].tone.Name, Order: voices[0].order}
	frequency := make([]float64, len(speeds))
	var momenta [][]float64
	for k, speed := range speeds {
		frequency[k] = rotor.Frequency(row.Order, speed)
		if set.spinning {
			momenta = append(momenta, f.momenta(speed, set))
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
			for axis, a := range loud(tr.Inputs, tr.At(k), name, v.tone, speed*v.ratio) {
				row.Rate[axis][k] = math.Hypot(row.Rate[axis][k], a)
			}
		}
	}
	return row, nil
}

// weigh begins the spectrum over a flight with the broadband density at the speeds flown and the noise of the gyro.
func (f *fleet) weigh(r *kinds.Response, sys *forced.System, rest *forced.Rest, set settings) error {
	r.Flight = f.parts()
	for axis := range r.Flown {
		r.Flown[axis] = make([]float64, len(r.Frequency))
	}
	for _, part := range r.Flight {
		density := r.Density
		if set.spinning {
			var err error
			if density, err = spectrumAt(rest, sys, f.momenta(part.Speed, set), set); err != nil {
				return err
			}
		}
		for axis := range r.Flown {
			for k, x := range density[axis] {
				r.Flown[axis][k] += part.Share * x
			}
		}
	}
	for axis := range r.Flown {
		for k := range r.Flown[axis] {
			r.Flown[axis][k] += set.noise
		}
	}
	return nil
}

// smear adds to the spectrum over a flight what lines make when the speed of
// their rotor has a density p: at frequency f a line of order k has the density
// p(2πf/k) 2π/k A²/2, which integrates to the mean square of the line. The gyroscopic
// moments are those of the speed at which the line lies at f.
func (f *fleet) smear(r *kinds.Response, sys *forced.System, rest *forced.Rest, voices []voice, set settings) error {
	reader := rest.Reader()
	for k, frequency := range r.Frequency {
		for i, v := range voices {
			speed := 2 * math.Pi * frequency / v.tone.Order // of the rotor
			p := f.chance(v.rotor, speed) * 2 * math.Pi / v.tone.Order
			if p == 0 {
				continue
			}
			if i == 0 || voices[i-1].ratio != v.ratio || f.chance(voices[i-1].rotor, speed) == 0 {
				if err := reader.At(k, f.momenta(speed/v.ratio, set)); err != nil {
					return err
				}
			}
			for axis, a := range loud(sys.Inputs(), reader.Rates, f.rotors[v.rotor].Name, v.tone, speed) {
				r.Flown[axis][k] += p * a * a / 2
			}
		}
	}
	return nil
}
