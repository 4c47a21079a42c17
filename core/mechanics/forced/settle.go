package forced

import (
	"math"
	"math/cmplx"
)

// CoreAt is Core for a system whose stiffness may depend on frequency: its Poles and Synchronous take
// every law as it is at one frequency, Hz, and Settle moves each pole to the law at its own.
func (s *System) CoreAt(frequency float64) (*Core, error) {
	c, err := s.Frozen(frequency).Core()
	if err != nil {
		return nil, err
	}
	for _, l := range s.laws {
		c.laws = append(c.laws, law{law: l.law, stiffness: c.project(l.stiffness, len(s.vectors))})
	}
	c.lawsAt = frequency
	return c, nil
}

// Settle gives the natural motion that a pole of Poles or Synchronous becomes when every law is taken at
// the frequency of that motion, |λ|/2π. momenta gives the angular momenta of the rotors at an angular frequency
// of the motion in rad/s: constant for Poles, in proportion for Synchronous. It gives false where no motion
// is reached that has a frequency. A core without laws gives the pole back.
//
// The equation is not linear in λ; it is solved by inverse iteration with Newton's correction of λ (A. Ruhe,
// Algorithms for the nonlinear eigenvalue problem, 1973). The laws move from the frequency
// of the core to their own in steps that keep the shape recognisable, so that neighbours are not mistaken.
func (c *Core) Settle(p Pole, momenta func(omega float64) []float64) (Pole, bool) {
	if len(c.laws) == 0 {
		return p, true
	}
	omega := complex(2*math.Pi*p.Frequency, 0) * complex(math.Sqrt(1-p.Damping*p.Damping), p.Damping)
	x := make([]complex128, len(c.back))
	for i, row := range c.back {
		for v, y := range row {
			x[i] += complex(y, 0) * p.Shape[v]
		}
	}
	const (
		alike  = 0.9      // least square of the cosine between shapes of one step
		finest = 1.0 / 64 // a step as short as this is taken as it is
	)
	for share, step := 0.0, 1.0; share < 1; {
		step = min(step, 1-share)
		w, y, ok := c.correct(omega, x, share+step, momenta)
		if ok && Likeness(x, y) >= alike || ok && step <= finest {
			omega, x, share = w, y, share+step
			step *= 2
			continue
		}
		if step /= 2; step < finest/2 {
			return p, false
		}
	}
	if !(real(omega) > math.Abs(imag(omega))) {
		return p, false
	}
	return Pole{Frequency: cmplx.Abs(omega) / (2 * math.Pi), Damping: imag(omega) / cmplx.Abs(omega), Shape: c.expand(x)}, true
}

// SettleAll settles each of some poles and leaves out those that reach no motion with a frequency.
func (c *Core) SettleAll(poles []Pole, momenta func(omega float64) []float64) []Pole {
	var out []Pole
	for _, p := range poles {
		if q, ok := c.Settle(p, momenta); ok {
			out = append(out, q)
		}
	}
	return out
}

// Likeness is the square of the cosine between shapes of unit length.
func Likeness(a, b []complex128) float64 {
	var sum complex128
	for i := range a {
		sum += cmplx.Conj(a[i]) * b[i]
	}
	return real(sum)*real(sum) + imag(sum)*imag(sum)
}

// correct finds a pole and its shape from near ones, with a share of what the laws change.
func (c *Core) correct(omega complex128, x []complex128, share float64, momenta func(float64) []float64) (complex128, []complex128, bool) {
	m := len(c.square)
	a := make([]complex128, m*m)
	against := append([]complex128(nil), x...)
	y := append([]complex128(nil), x...)
	for range 30 {
		slope := make([]complex128, m) // derivative of the dynamic stiffness by ω, times y
		spin := c.spin(momenta(real(omega)))
		const h = 1e-4
		more := c.spin(momenta(real(omega) * (1 + h)))
		for i := range m {
			for j := range m {
				g := complex(spin[i*m+j], 0)
				a[i*m+j] = c.soft[i*m+j] + 1i*omega*g
				slope[i] += (1i*g + 1i*omega*complex((more[i*m+j]-spin[i*m+j])/(h*real(omega)), 0)) * y[j]
			}
			a[i*m+i] += complex(c.square[i], 0) - omega*omega
			slope[i] -= 2 * omega * y[i]
		}
		f := cmplx.Abs(omega) / (2 * math.Pi)
		for _, l := range c.laws {
			here := complex(share, 0) * (l.law.At(f) - l.law.At(c.lawsAt))
			rate := complex(share, 0) * (l.law.At(f*(1+h)) - l.law.At(f)) / complex(h*2*math.Pi*f, 0)
			for i := range m {
				for j, k := range l.stiffness[i*m : i*m+m] {
					a[i*m+j] += here * complex(k, 0)
					slope[i] += rate * complex(k, 0) * y[j]
				}
			}
		}
		if !factorSolve(a, m, slope) || !finite(slope) {
			return omega, y, true // at the pole to the last digit
		}
		var along complex128
		norm := 0.0
		for i, z := range slope {
			along += cmplx.Conj(against[i]) * z
			norm = math.Hypot(norm, cmplx.Abs(z))
		}
		var before complex128
		for i := range y {
			before += cmplx.Conj(against[i]) * y[i]
		}
		move := before / along
		for i, z := range slope {
			y[i] = z / complex(norm, 0)
		}
		omega -= move
		if cmplx.IsNaN(omega) || !(real(omega) > 0) {
			return omega, nil, false
		}
		if cmplx.Abs(move) < 1e-11*cmplx.Abs(omega) {
			return omega, y, true
		}
	}
	return omega, nil, false
}
