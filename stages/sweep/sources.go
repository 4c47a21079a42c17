package sweep

import (
	"context"
	"math"
	"math/cmplx"

	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/rotor"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// excitation is what shakes the frame at the orders of the rotors.
func (s settings) excitation(thrust float64) rotor.Excitation {
	e := rotor.Excitation{Unbalance: s.unbalance, BladeThrust: s.bladeShare, BladeSide: s.sideShare, Ripple: s.ripple, RippleOrder: s.rippleOrder}
	if !math.IsNaN(thrust) {
		e.Thrust = thrust
	}
	return e
}

// readTogether reads the bands in which rotors are correlated.
func readTogether(list []any) ([]forced.Correlation, error) {
	var out []forced.Correlation
	for _, x := range list {
		m := x.(map[string]any)
		c := forced.Correlation{From: m["from"].(stage.Quantity).SI, To: math.Inf(1), Coefficient: m["coefficient"].(float64)}
		if to, ok := m["to"].(stage.Quantity); ok {
			c.To = to.SI
		}
		if !(c.To > c.From) {
			return nil, fault.New(fault.Input, "the band ends at %g Hz, where it has not begun", c.To).In("sweep", "").Of("correlation").
				Do("make to higher than from, which is %g Hz", c.From)
		}
		for k, other := range out {
			if c.From < other.To && other.From < c.To && c.Coefficient != other.Coefficient {
				return nil, fault.New(fault.Input, "bands %d and %d overlap from %g to %g Hz with coefficients of %g and %g", k+1, len(out)+1, max(c.From, other.From), min(c.To, other.To), other.Coefficient, c.Coefficient).
					In("sweep", "").Of("correlation").Do("let each frequency lie in one band")
			}
		}
		out = append(out, c)
	}
	return out, nil
}

// correlated checks the coefficients against the number of rotors: −1/(n−1) is
// the least that n rotors can have with each other.
func correlated(set settings, rotors int) error {
	for _, c := range set.source.Together {
		if rotors > 1 && c.Coefficient < -1/float64(rotors-1)*(1+1e-9) {
			return fault.New(fault.Input, "%d rotors cannot all be correlated by %g with each other", rotors, c.Coefficient).In("sweep", "").Of("correlation").
				Do("make the coefficient %.3g or more", -1/float64(rotors-1))
		}
	}
	return nil
}

// loud gives the peak amplitudes of the gyro rate, rad/s, under a tone of a rotor
// at a speed, from the rates per unit of each input.
func loud(inputs []forced.Input, rates [3][]complex128, name string, t rotor.Tone, speed float64) (out [3]float64) {
	for axis := range out {
		out[axis] = under(inputs, rates[axis], name, t, speed)
	}
	return out
}

// under gives the peak amplitude of a motion under a tone of a rotor at a
// speed, from the motion per unit of each input. Loads of unknown phase add as power.
func under(inputs []forced.Input, motion []complex128, name string, t rotor.Tone, speed float64) float64 {
	square := 0.0
	for _, load := range t.Loads {
		var sum complex128
		for j, in := range inputs {
			if in.Rotor == name {
				sum += motion[j] * load[in.Component]
			}
		}
		square += real(sum * cmplx.Conj(sum))
	}
	return t.Amplitude(speed) * math.Sqrt(square)
}

// lines gives every tone of every rotor at its speed. Rotors of equal frequency are added as
// power, since they are not locked to each other.
func (f *fleet) lines(ctx context.Context, sys *forced.System, e rotor.Excitation) ([]kinds.ResponseLine, error) {
	var out []kinds.ResponseLine
	for _, source := range rotor.ToneNames {
		first := len(out)
		for k, x := range f.rotors {
			for _, tone := range e.Tones(x) {
				frequency := rotor.Frequency(tone.Order, f.speeds[k])
				if tone.Name != source || !(frequency > 0) {
					continue
				}
				tr, err := sys.Transfer(ctx, []float64{frequency}, 1)
				if err != nil {
					return nil, err
				}
				out = append(out, kinds.ResponseLine{Source: source, Rotor: x.Name, Order: tone.Order, Frequency: frequency,
					Force: tone.Amplitude(f.speeds[k]), Rate: loud(tr.Inputs, tr.At(0), x.Name, tone, f.speeds[k])})
			}
		}
		if all, ok := together(out[first:]); ok {
			out = append(out, all)
		}
	}
	return out, nil
}

// together adds lines as power when all have one frequency and there are two
// or more; the amplitude at one rotor is not a number where rotors differ.
func together(rows []kinds.ResponseLine) (kinds.ResponseLine, bool) {
	if len(rows) < 2 {
		return kinds.ResponseLine{}, false
	}
	sum := rows[0]
	sum.Rotor = "all"
	var square [3]float64
	for _, x := range rows {
		if math.Abs(x.Frequency-sum.Frequency) > 1e-9*sum.Frequency {
			return kinds.ResponseLine{}, false
		}
		if !(math.Abs(x.Force-sum.Force) <= 1e-9*sum.Force) {
			sum.Force = math.NaN()
		}
		for axis := range square {
			square[axis] += x.Rate[axis] * x.Rate[axis]
		}
	}
	for axis := range square {
		sum.Rate[axis] = math.Sqrt(square[axis])
	}
	return sum, true
}
