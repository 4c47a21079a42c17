package forced

import (
	"math"
	"math/cmplx"
)

// InStep gives the part of the motion under a source that is in step with the
// gyro rate about one axis, in modal coordinates per √Hz: the cross density of
// motion and rate over the root of the density of the rate, so that the rate of this motion about
// that axis is real and its square the density. q[input] are the modal coordinates under one unit of each input
// at the frequency. rotor "" stands for all rotors, else the source acts at that one alone. It is zero where
// the gyro feels nothing.
func (s *System) InStep(frequency float64, q [][]complex128, b Broadband, axis int, rotor string) []complex128 {
	omega := angular(frequency)
	var parts []drive
	if rotor == "" {
		parts = b.drives(s.inputs, frequency)
	} else {
		for j, in := range s.inputs {
			if in.Rotor == rotor {
				parts = append(parts, drive{b.density(in), []int{j}})
			}
		}
	}
	out := make([]complex128, len(s.vectors))
	total := 0.0
	for _, part := range parts {
		var h complex128
		for _, j := range part.inputs {
			h += complex(0, omega) * along(s.gyro[axis], q[j])
		}
		total += part.weight * power(h)
		f := complex(part.weight, 0) * cmplx.Conj(h)
		for _, j := range part.inputs {
			for v, x := range q[j] {
				out[v] += f * x
			}
		}
	}
	if total > 0 {
		for v := range out {
			out[v] /= complex(math.Sqrt(total), 0)
		}
	}
	return out
}

// Density sums what a source makes along one row of motion, motion[input] as Probe gives it, at a frequency:
// the one-sided density in the square of its unit per Hz.
func (b Broadband) Density(frequency float64, inputs []Input, motion []complex128) float64 {
	own, shared := 0.0, 0.0
	for j, in := range inputs {
		own += b.density(in) * power(motion[j])
	}
	gamma := b.coefficient(frequency)
	if gamma == 0 {
		return own
	}
	for c := range 6 {
		var all complex128
		for j, in := range inputs {
			if in.Component == c {
				all += motion[j]
			}
		}
		shared += b.density(Input{Component: c}) * power(all)
	}
	return (1-gamma)*own + gamma*shared
}

// Static gives the transfer functions of the frame taken as rigid, and of the
// frame with every elastic and residual vector following its load as at rest,
// without damping.
func (s *System) Static(frequency []float64) (rigid, static *Transfer) {
	var out [2]*Transfer
	for i := range out {
		out[i] = &Transfer{Frequency: frequency, Inputs: s.inputs}
	}
	for axis := range 3 {
		for _, load := range s.load {
			body, give := 0.0, 0.0 // the rotation is −body/ω² + give
			for v, k := range s.square {
				if x := s.gyro[axis][v] * load[v]; k > 0 {
					give += x / k
				} else {
					body += x
				}
			}
			alone, both := make([]complex128, len(frequency)), make([]complex128, len(frequency))
			for k, f := range frequency {
				omega := angular(f)
				alone[k] = complex(0, -body/omega)
				both[k] = complex(0, -body/omega+give*omega)
			}
			out[0].Rate[axis] = append(out[0].Rate[axis], alone)
			out[1].Rate[axis] = append(out[1].Rate[axis], both)
		}
	}
	return out[0], out[1]
}
