package forced

import (
	"math"
)

// Separation says how far two natural motions stand apart and what comes of it.
type Separation struct {
	// Gap in Hz, and as a multiple of the mean of their half-power bandwidths 2ζf.
	Gap, Bandwidths float64
	// Alone is the highest density that each makes alone on an axis, (rad/s)²/Hz.
	Alone [2][3]float64
	// Amplification is the highest density of both together over the higher of
	// those alone, per axis: 1 for motions far apart, up to 4 for two equal ones in step, less
	// than 1 where they cancel. NaN on an axis that neither moves.
	Amplification [3]float64
}

// Separate compares two poles under a source, with nothing else moving.
func (s *System) Separate(a, b Pole, source Broadband) Separation {
	out := Separation{Gap: math.Abs(b.Frequency - a.Frequency)}
	wide := [2]float64{2 * a.Damping * a.Frequency, 2 * b.Damping * b.Frequency}
	out.Bandwidths = out.Gap / ((wide[0] + wide[1]) / 2)
	// Sampled evenly in phase about each, as Grid does, and between them.
	var grid []float64
	for k, p := range []Pole{a, b} {
		for step := -23; step <= 23; step++ {
			if f := p.Frequency + wide[k]/2*math.Tan(float64(step)*arc/2); f > p.Frequency/2 && f < 2*p.Frequency {
				grid = append(grid, f)
			}
		}
	}
	for k := 1; k < 20; k++ {
		grid = append(grid, a.Frequency+(b.Frequency-a.Frequency)*float64(k)/20)
	}
	first, second, both := make([]complex128, len(s.inputs)), make([]complex128, len(s.inputs)), make([]complex128, len(s.inputs))
	for axis := range 3 {
		one, two := s.residue(a, axis), s.residue(b, axis)
		together := 0.0
		for _, f := range grid {
			one.rates(2*math.Pi*f, first)
			two.rates(2*math.Pi*f, second)
			for j := range both {
				both[j] = first[j] + second[j]
			}
			parts := source.drives(s.inputs, f)
			out.Alone[0][axis] = max(out.Alone[0][axis], heard(parts, first))
			out.Alone[1][axis] = max(out.Alone[1][axis], heard(parts, second))
			together = max(together, heard(parts, both))
		}
		out.Amplification[axis] = together / max(out.Alone[0][axis], out.Alone[1][axis])
	}
	return out
}

func heard(parts []drive, rates []complex128) float64 {
	sum := 0.0
	for _, p := range parts {
		sum += p.weight * power(p.sum(rates))
	}
	return sum
}
