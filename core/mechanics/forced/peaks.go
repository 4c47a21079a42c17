package forced

import (
	"math"
	"math/cmplx"
	"sort"
)

// Peak is a local maximum of the combined spectrum of one axis.
type Peak struct {
	Axis      int
	Frequency float64 // Hz
	Density   float64 // (rad/s)²/Hz
	// Prominence is the ratio of Density to the higher of the two lowest
	// densities between this peak and a higher one (or the end) on each side.
	Prominence float64
	// Shares, one per vector in use, say how much each vector adds to the gyro
	// rate: its phasor projected on the total, weighted over the inputs by
	// power. They add up to 1; a vector that works against the others has a
	// negative share.
	Shares []float64
	// Input is the strongest input and InputShare what it makes alone, over Density.
	Input      int
	InputShare float64
	// RotorShares is what each rotor makes alone, over Density, in the order of their inputs.
	RotorShares []float64
}

// Peaks finds the peaks of each axis with at least the given prominence (1.26
// is 1 dB), by axis and then frequency, each refined between its grid
// neighbours to a part in 1e7 of frequency. Maxima at the ends of the grid are
// not peaks.
func (s *System) Peaks(sp *Spectrum, b Broadband, prominence float64) ([]Peak, error) {
	d := s.driver(false)
	var out []Peak
	for axis := range 3 {
		y := sp.Density[axis]
		for k := 1; k+1 < len(y); k++ {
			if !(y[k] > y[k-1] && y[k] >= y[k+1]) {
				continue
			}
			p := Peak{Axis: axis, Prominence: y[k] / saddle(y, k)}
			if !(p.Prominence >= prominence) {
				continue
			}
			var err error
			p.Frequency, p.Density, err = d.climb(axis, b, sp.Frequency[k-1], sp.Frequency[k], sp.Frequency[k+1], y[k])
			if err != nil {
				return nil, err
			}
			if err := d.explain(&p, b); err != nil {
				return nil, err
			}
			out = append(out, p)
		}
	}
	return out, nil
}

// saddle is the height to which one must come down from maximum k before
// going up to something higher, or to an end.
func saddle(y []float64, k int) float64 {
	base := 0.0
	for _, step := range []int{-1, 1} {
		low := y[k]
		for j := k + step; j >= 0 && j < len(y) && y[j] <= y[k]; j += step {
			low = min(low, y[j])
		}
		base = max(base, low)
	}
	return base
}

// climb refines a maximum between lo and hi by golden sections.
func (d *driver) climb(axis int, b Broadband, lo, at, hi, best float64) (float64, float64, error) {
	const golden = 0.3819660112501051 // (3 − √5)/2
	for hi-lo > 1e-7*at {
		f := at + golden*(hi-at)
		if at-lo > hi-at {
			f = at - golden*(at-lo)
		}
		y, err := d.density(axis, b, f)
		if err != nil {
			return 0, 0, err
		}
		switch {
		case y > best && f > at:
			lo, at, best = at, f, y
		case y > best:
			hi, at, best = at, f, y
		case f > at:
			hi = f
		default:
			lo = f
		}
	}
	return at, best, nil
}

func (d *driver) density(axis int, b Broadband, frequency float64) (float64, error) {
	if err := d.gyroRates(frequency); err != nil {
		return 0, err
	}
	sum := 0.0
	for _, part := range b.drives(d.s.inputs, frequency) {
		sum += part.weight * power(part.sum(d.rates[axis]))
	}
	return sum, nil
}

// explain fills in shares and the strongest input.
func (d *driver) explain(p *Peak, b Broadband) error {
	s := d.s
	if err := d.gyroRates(p.Frequency); err != nil {
		return err
	}
	p.Shares = make([]float64, len(s.vectors))
	omega := angular(p.Frequency)
	strongest := -1.0
	total := 0.0
	for j, in := range s.inputs {
		own := b.density(in) * power(d.rates[p.Axis][j])
		if own > strongest {
			strongest, p.Input = own, j
		}
		if j == 0 || in.Rotor != s.inputs[j-1].Rotor {
			p.RotorShares = append(p.RotorShares, 0)
		}
		p.RotorShares[len(p.RotorShares)-1] += own
	}
	for _, part := range b.drives(s.inputs, p.Frequency) {
		h := part.sum(d.rates[p.Axis])
		total += part.weight * power(h)
		force := make([]complex128, len(s.vectors))
		for _, j := range part.inputs {
			for v, x := range s.load[j] {
				force[v] += complex(x, 0)
			}
		}
		q, err := s.Solve(p.Frequency, force)
		if err != nil {
			return err
		}
		for v, x := range q {
			phasor := complex(0, omega*s.gyro[p.Axis][v]) * x
			p.Shares[v] += part.weight * real(phasor*cmplx.Conj(h))
		}
	}
	if total == 0 {
		return nil
	}
	for v := range p.Shares {
		p.Shares[v] /= total
	}
	p.InputShare = strongest / total
	for r := range p.RotorShares {
		p.RotorShares[r] /= total
	}
	return nil
}

// Makers lists positions into Shares of vectors whose share is at least the
// given one in size, the largest first.
func (p *Peak) Makers(least float64) []int {
	var out []int
	for i, x := range p.Shares {
		if math.Abs(x) >= least {
			out = append(out, i)
		}
	}
	sort.SliceStable(out, func(a, b int) bool { return math.Abs(p.Shares[out[a]]) > math.Abs(p.Shares[out[b]]) })
	return out
}
