package forced

import (
	"fmt"
)

// Broadband is an assumed source: at each rotor hub three force and three
// moment components, each of constant density. Components at one rotor are not
// related to each other; the same component at two rotors is, by Together.
type Broadband struct {
	Force  float64 // N²/Hz per force component, one-sided
	Moment float64 // (N·m)²/Hz per moment component, one-sided
	// Together lists bands in which the rotors are correlated; elsewhere they are not. The first band that
	// holds a frequency counts.
	Together []Correlation
}

// Correlation says how far the rotors push together within From ≤ f < To in Hz:
// Coefficient is the real coherence γ between the same component, in airframe axes, at any two
// rotors, so that their cross density is γ times the density. 1 is in step; negative is against
// each other, down to −1/(rotors − 1), below which no such source exists.
type Correlation struct {
	From, To, Coefficient float64
}

func (b Broadband) density(in Input) float64 {
	if in.Moment() {
		return b.Moment
	}
	return b.Force
}

// coefficient is γ at a frequency.
func (b Broadband) coefficient(frequency float64) float64 {
	for _, c := range b.Together {
		if frequency >= c.From && frequency < c.To {
			return c.Coefficient
		}
	}
	return 0
}

// drive is a set of inputs that act in step, of a density; drives do not know of each other.
type drive struct {
	weight float64
	inputs []int
}

// drives splits a source into parts that do not know of each other: each input
// alone with 1 − γ of its density, and the same component at all rotors
// together with γ.
func (b Broadband) drives(inputs []Input, frequency float64) []drive {
	gamma := b.coefficient(frequency)
	var out []drive
	for j, in := range inputs {
		if w := (1 - gamma) * b.density(in); w != 0 {
			out = append(out, drive{w, []int{j}})
		}
	}
	if gamma == 0 {
		return out
	}
	for c := range 6 {
		d := drive{weight: gamma * b.density(Input{Component: c})}
		for j, in := range inputs {
			if in.Component == c {
				d.inputs = append(d.inputs, j)
			}
		}
		if d.weight != 0 {
			out = append(out, d)
		}
	}
	return out
}

// sum adds what the inputs of a drive make.
func (d drive) sum(rates []complex128) complex128 {
	var h complex128
	for _, j := range d.inputs {
		h += rates[j]
	}
	return h
}

// Spectrum is the gyro rate that a Broadband source makes.
type Spectrum struct {
	Frequency []float64    // Hz
	Density   [3][]float64 // per axis, (rad/s)²/Hz, all rotors added as power
	Rotors    []string
	// ByRotor[axis][rotor][k] is what each rotor makes alone; where rotors are
	// correlated the sum is not Density.
	ByRotor [3][][]float64
}

// Broadband gives the spectrum under a source, |H|² times the density summed
// over components and rotors, with what they have in common.
func (t *Transfer) Broadband(b Broadband) *Spectrum {
	sp := &Spectrum{Frequency: t.Frequency}
	row := make([]int, len(t.Inputs))
	for j, in := range t.Inputs {
		if len(sp.Rotors) == 0 || sp.Rotors[len(sp.Rotors)-1] != in.Rotor {
			sp.Rotors = append(sp.Rotors, in.Rotor)
		}
		row[j] = len(sp.Rotors) - 1
	}
	for axis := range 3 {
		sp.Density[axis] = make([]float64, len(t.Frequency))
		sp.ByRotor[axis] = make([][]float64, len(sp.Rotors))
		for r := range sp.Rotors {
			sp.ByRotor[axis][r] = make([]float64, len(t.Frequency))
		}
		for j, in := range t.Inputs {
			s := b.density(in)
			by := sp.ByRotor[axis][row[j]]
			for k, h := range t.Rate[axis][j] {
				p := s * power(h)
				by[k] += p
				sp.Density[axis][k] += p
			}
		}
		t.common(b, axis, sp.Density[axis])
	}
	return sp
}

// common adds the cross terms γ S (|Σ H|² − Σ |H|²) of correlated rotors.
func (t *Transfer) common(b Broadband, axis int, density []float64) {
	if len(b.Together) == 0 {
		return
	}
	for k, f := range t.Frequency {
		gamma := b.coefficient(f)
		if gamma == 0 {
			continue
		}
		for c := range 6 {
			var all complex128
			own := 0.0
			for j, in := range t.Inputs {
				if in.Component == c {
					all += t.Rate[axis][j][k]
					own += power(t.Rate[axis][j][k])
				}
			}
			density[k] += gamma * b.density(Input{Component: c}) * (power(all) - own)
		}
	}
}

// MeanSquare integrates a density over frequency by trapezia, (rad/s)².
func MeanSquare(frequency, density []float64) float64 {
	if len(frequency) != len(density) {
		panic(fmt.Sprintf("forced: %d frequencies for %d densities", len(frequency), len(density)))
	}
	sum := 0.0
	for k := 1; k < len(frequency); k++ {
		sum += (frequency[k] - frequency[k-1]) * (density[k] + density[k-1]) / 2
	}
	return sum
}

func power(z complex128) float64 { return sq(real(z)) + sq(imag(z)) }
