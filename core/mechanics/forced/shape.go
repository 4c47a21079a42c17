package forced

import (
	"math/cmplx"
)

// Nodes gives the complex displacement of every mesh node, three components
// each (m), for modal coordinates q.
func (s *System) Nodes(q []complex128) []complex128 {
	if len(s.vectors) == 0 || len(s.basis.Shapes) == 0 {
		return nil
	}
	u := make([]complex128, len(s.basis.Shapes[s.vectors[0]]))
	for i, v := range s.vectors {
		for k, x := range s.basis.Shapes[v] {
			u[k] += q[i] * complex(x, 0)
		}
	}
	return u
}

// Dissipation gives the mean power that each loss group takes at modal
// coordinates q, W: ½ ω η_g qᴴ K_g q, with the loss at the frequency, in the order of Basis.Groups, and what
// the symmetric part of C takes, ½ ω² qᴴ C q.
func (s *System) Dissipation(frequency float64, q []complex128) (groups []float64, rate float64) {
	omega := angular(frequency)
	all := len(s.basis.Frequency)
	groups = make([]float64, len(s.basis.Groups))
	for g := range s.basis.Groups {
		group := &s.basis.Groups[g]
		sum := 0.0
		for i, v := range s.vectors {
			for j, w := range s.vectors {
				sum += group.Stiffness[v*all+w] * real(cmplx.Conj(q[i])*q[j])
			}
		}
		groups[g] = omega / 2 * imag(group.At(frequency)) * sum
	}
	if s.rate != nil {
		n := len(s.vectors)
		for i := range n {
			for j := range n {
				rate += s.rate[i*n+j] * real(cmplx.Conj(q[i])*q[j])
			}
		}
		rate *= omega * omega / 2
	}
	return groups, rate
}

// PowerIn gives the mean power that a modal force puts in, W: ½ Re(fᴴ iω q).
func (s *System) PowerIn(frequency float64, force, q []complex128) float64 {
	omega := angular(frequency)
	sum := 0.0
	for v := range q {
		sum += real(cmplx.Conj(force[v]) * complex(0, omega) * q[v])
	}
	return sum / 2
}

// Load gives the modal force of an input with a complex amplitude.
func (s *System) Load(input int, amplitude complex128) []complex128 {
	f := make([]complex128, len(s.vectors))
	for v, x := range s.load[input] {
		f[v] = complex(x, 0) * amplitude
	}
	return f
}
