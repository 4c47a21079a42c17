package sweep

import (
	"context"
	"math"
	"sort"

	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/rotor"
	"hushframe/stages/kinds"
)

// motionStep is the least distance in Hz of the frequencies at which operating
// motions are kept between peaks.
const motionStep = 1.0

// motions fills in the operating motions: in step with each axis of the gyro under
// all rotors over frequency, and under each rotor at the peaks; and at the lines of the rotors.
func motions(ctx context.Context, r *kinds.Response, basis *modal.Basis, f *fleet, sys *forced.System, set settings, threads int) error {
	frequency := motionFrequencies(r, set)
	rows := make([]struct {
		all     [3][]complex128
		byRotor map[[2]int][]complex128 // axis, rotor
	}, len(frequency))
	peak := map[float64][]int{} // axes with a peak at a frequency
	for _, p := range r.Peaks {
		for axis, name := range kinds.AxisNames {
			if p.Axis == name {
				peak[p.Frequency] = append(peak[p.Frequency], axis)
			}
		}
	}
	err := sys.Coordinates(ctx, frequency, threads, func(k int, q [][]complex128) {
		for axis := range kinds.AxisNames {
			rows[k].all[axis] = sys.InStep(frequency[k], q, set.source, axis, "")
		}
		rows[k].byRotor = map[[2]int][]complex128{}
		for _, axis := range peak[frequency[k]] {
			for i, x := range f.rotors {
				rows[k].byRotor[[2]int{axis, i}] = sys.InStep(frequency[k], q, set.source, axis, x.Name)
			}
		}
	})
	if err != nil {
		return err
	}
	add := func(source, name, axis string, at float64, q []complex128) {
		x := kinds.ResponseMotion{Source: source, Rotor: name, Axis: axis, Frequency: at,
			Real: make([]float64, len(basis.Kinds)), Imaginary: make([]float64, len(basis.Kinds))}
		for i, v := range sys.Vectors() {
			x.Real[v], x.Imaginary[v] = real(q[i]), imag(q[i])
		}
		r.Motions = append(r.Motions, x)
	}
	for axis, name := range kinds.AxisNames {
		for k, at := range frequency {
			add(kinds.BroadbandSource, "all", name, at, rows[k].all[axis])
		}
		for i, x := range f.rotors {
			for k, at := range frequency {
				if q, ok := rows[k].byRotor[[2]int{axis, i}]; ok {
					add(kinds.BroadbandSource, x.Name, name, at, q)
				}
			}
		}
	}
	return f.lineMotions(r, sys, set, add)
}

// motionFrequencies are even ones, the peaks, and those asked for.
func motionFrequencies(r *kinds.Response, set settings) []float64 {
	n := max(1, int((set.to-set.from)/math.Max(motionStep, set.step)))
	var all []float64
	for k := range n + 1 {
		all = append(all, set.from+(set.to-set.from)*float64(k)/float64(n))
	}
	for _, p := range r.Peaks {
		all = append(all, p.Frequency)
	}
	all = append(all, set.shapesAt...)
	sort.Float64s(all)
	out := all[:1]
	for _, f := range all[1:] {
		if f > out[len(out)-1] {
			out = append(out, f)
		}
	}
	return out
}

// lineMotions adds the motion at each line of each rotor of known direction.
func (f *fleet) lineMotions(r *kinds.Response, sys *forced.System, set settings, add func(source, name, axis string, at float64, q []complex128)) error {
	e := set.excitation(r.Thrust)
	for _, source := range rotor.ToneNames {
		for k, x := range f.rotors {
			for _, tone := range e.Tones(x) {
				at := rotor.Frequency(tone.Order, f.speeds[k])
				if tone.Name != source || len(tone.Loads) != 1 || !(at > 0) {
					continue
				}
				force := make([]complex128, len(sys.Vectors()))
				for j, in := range sys.Inputs() {
					if a := tone.Loads[0][in.Component] * complex(tone.Amplitude(f.speeds[k]), 0); in.Rotor == x.Name && a != 0 {
						for v, y := range sys.Load(j, a) {
							force[v] += y
						}
					}
				}
				q, err := sys.Solve(at, force)
				if err != nil {
					return err
				}
				add(source, x.Name, "", at, q)
			}
		}
	}
	return nil
}
