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
// the frequency of that motion, |λ|/2π. The angular momenta of the rotors are those given, and the ratios, kg·m², times the angular
// frequency of the motion; either may be nil. It gives false where no motion is reached that has a frequency.
// A core without laws gives the pole back.
//
// The equation is not linear in λ; it is solved by inverse iteration with Newton's correction of λ (A. Ruhe,
// Algorithms for the nonlinear eigenvalue problem, 1973). The laws move from the frequency
// of the core to their own in steps that keep the shape recognisable, so that neighbours are not mistaken.
func (c *Core) Settle(p Pole, momenta, ratio []float64) (Pole, bool) {
	if len(c.laws) == 0 {
		return p, true
	}
	t := c.turning(momenta, ratio)
	const finest = 1.0 / 64 // a step as short as this is taken as it is
	omega, x := c.begin(p)
	for share, step := 0.0, 1.0; share < 1; {
		step = min(step, 1-share)
		w, y, ok := c.correct(omega, x, share+step, t)
		if ok && Likeness(x, y) >= sameMotion || ok && step <= finest {
			omega, x, share = w, y, share+step
			step *= 2
			continue
		}
		if step /= 2; step < finest/2 {
			return p, false
		}
	}
	return c.settled(omega, x)
}

// Continue gives the settled motion that a settled one becomes when little else changes, such as the speed of
// the rotors; false where it is not alike, and for a core without laws, whose poles are at hand.
func (c *Core) Continue(p Pole, momenta, ratio []float64) (Pole, bool) {
	if len(c.laws) == 0 {
		return p, false
	}
	omega, x := c.begin(p)
	w, y, ok := c.correct(omega, x, 1, c.turning(momenta, ratio))
	if !ok || Likeness(x, y) < sameMotion {
		return p, false
	}
	return c.settled(w, y)
}

// sameMotion is the least square of the cosine between the shapes of one motion before and after a step.
const sameMotion = 0.9

// begin gives ω and the coordinates of a pole.
func (c *Core) begin(p Pole) (complex128, []complex128) {
	x := make([]complex128, len(c.back))
	for i, row := range c.back {
		for v, y := range row {
			if y != 0 {
				x[i] += complex(y, 0) * p.Shape[v]
			}
		}
	}
	return complex(2*math.Pi*p.Frequency, 0) * complex(math.Sqrt(1-p.Damping*p.Damping), p.Damping), x
}

func (c *Core) settled(omega complex128, x []complex128) (Pole, bool) {
	p := Pole{Frequency: cmplx.Abs(omega) / (2 * math.Pi), Damping: imag(omega) / cmplx.Abs(omega)}
	if !(real(omega) > math.Abs(imag(omega))) {
		return p, false
	}
	p.Shape = c.expand(x)
	return p, true
}

// turning is the coefficient of velocity, m×m: steady, and by the angular frequency (nil for none).
type turning struct{ steady, rising []float64 }

func (c *Core) turning(momenta, ratio []float64) turning {
	none := make([]float64, len(c.momentum))
	if momenta == nil {
		momenta = none
	}
	t := turning{steady: c.spin(momenta)}
	if ratio != nil {
		t.rising = c.spin(ratio)
		for i, x := range c.rate {
			t.rising[i] -= x
		}
	}
	return t
}

// SettleAll settles each of some poles and leaves out those that reach no motion with a frequency.
func (c *Core) SettleAll(poles []Pole, momenta, ratio []float64) []Pole {
	var out []Pole
	for _, p := range poles {
		if q, ok := c.Settle(p, momenta, ratio); ok {
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
func (c *Core) correct(omega complex128, x []complex128, share float64, t turning) (complex128, []complex128, bool) {
	const (
		h    = 1e-4 // relative step of the slope of a law
		near = 1e-8 // a correction below this leaves an error of about its square
	)
	m := len(c.square)
	a, slope := make([]complex128, m*m), make([]complex128, m) // dynamic stiffness; its derivative by ω, times y
	y := append([]complex128(nil), x...)
	for range 30 {
		w := real(omega)
		for i := range m {
			row, sum := a[i*m:i*m+m], complex128(0)
			for j, g := range t.steady[i*m : i*m+m] {
				row[j] = c.soft[i*m+j] + 1i*omega*complex(g, 0)
				sum += complex(0, g) * y[j]
			}
			if t.rising != nil {
				for j, g := range t.rising[i*m : i*m+m] {
					row[j] += 1i * omega * complex(w*g, 0)
					sum += 1i * (complex(w, 0) + omega) * complex(g, 0) * y[j]
				}
			}
			row[i] += complex(c.square[i], 0) - omega*omega
			slope[i] = sum - 2*omega*y[i]
		}
		f := cmplx.Abs(omega) / (2 * math.Pi)
		for _, l := range c.laws {
			at := l.law.At(f)
			here := complex(share, 0) * (at - l.law.At(c.lawsAt))
			rate := complex(share/(h*2*math.Pi*f), 0) * (l.law.At(f*(1+h)) - at)
			for i := range m {
				row, sum := a[i*m:i*m+m], complex128(0)
				for j, k := range l.stiffness[i*m : i*m+m] {
					row[j] += here * complex(k, 0)
					sum += complex(k, 0) * y[j]
				}
				slope[i] += rate * sum
			}
		}
		if !factorSolve(a, m, slope) || !finite(slope) {
			return omega, y, true // at the pole to the last digit
		}
		var before, along complex128
		norm := 0.0
		for i, z := range slope {
			before += cmplx.Conj(x[i]) * y[i]
			along += cmplx.Conj(x[i]) * z
			norm += real(z)*real(z) + imag(z)*imag(z)
		}
		move := before / along
		for i, z := range slope {
			y[i] = z / complex(math.Sqrt(norm), 0)
		}
		omega -= move
		switch {
		case cmplx.IsNaN(omega) || !(real(omega) > 0):
			return omega, nil, false
		case cmplx.Abs(move) < near*cmplx.Abs(omega):
			return omega, y, true
		}
	}
	return omega, nil, false
}
