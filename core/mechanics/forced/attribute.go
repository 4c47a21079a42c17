package forced

import (
	"math"
	"math/cmplx"
)

// Attribute says how much each pole adds to the gyro rate at a peak under a
// source: its phasor projected on the total, weighted over the inputs by power,
// as Peak.Shares does for vectors. With spinning rotors poles are what modes
// are at rest. The shares need not add up to 1: what the poles given leave
// to others is missing.
//
// A pole at ω_k with shape x makes
//
//	(o·x)(x̄·f) / (d (ω−ω_k)) + conj(...)-partner (o·x̄)(x·f) / (−d (ω+ω̄_k)),   d = −2ω_k x̄·x + i x̄ᵀ G x
//
// of the rotation o·q under a force f, the left shape being x̄ but for terms of the order of the loss factor.
func (s *System) Attribute(p *Peak, b Broadband, poles []Pole) ([]float64, error) {
	d := s.driver(false)
	if err := d.gyroRates(p.Frequency); err != nil {
		return nil, err
	}
	shares := make([]float64, len(poles))
	omega := angular(p.Frequency)
	parts := b.drives(s.inputs, p.Frequency)
	total := 0.0
	for _, part := range parts {
		total += part.weight * power(part.sum(d.rates[p.Axis]))
	}
	if total == 0 {
		return shares, nil
	}
	made := make([]complex128, len(s.inputs))
	for k, pole := range poles {
		w := complex(2*math.Pi*pole.Frequency, 0) * complex(math.Sqrt(1-sq(pole.Damping)), pole.Damping)
		norm := 0.0
		for _, x := range pole.Shape {
			norm += power(x)
		}
		scale := -2*w*complex(norm, 0) + s.gyroscopicForm(pole.Shape)
		out := along(s.gyro[p.Axis], pole.Shape)
		near := out / (scale * (complex(omega, 0) - w))
		far := cmplx.Conj(out) / (-scale * (complex(omega, 0) + cmplx.Conj(w)))
		for j, load := range s.load {
			in := along(load, pole.Shape)
			made[j] = complex(0, omega) * (near*cmplx.Conj(in) + far*in)
		}
		for _, part := range parts {
			shares[k] += part.weight * real(part.sum(made)*cmplx.Conj(part.sum(d.rates[p.Axis]))) / total
		}
	}
	return shares, nil
}

// gyroscopicForm is i x̄ᵀ G x, a real number.
func (s *System) gyroscopicForm(x []complex128) complex128 {
	sum := 0.0
	for r, h := range s.momentum {
		a, b := along(s.tilt[2*r], x), along(s.tilt[2*r+1], x)
		// i (ā b − b̄ a) = −2 Im(ā b)
		sum -= 2 * h * imag(cmplx.Conj(a)*b)
	}
	return complex(sum, 0)
}
