package forced

import (
	"fmt"
)

// Broadband is an assumed source: at each rotor hub three force and three
// moment components, each of constant density, none related to another.
type Broadband struct {
	Force  float64 // N²/Hz per force component, one-sided
	Moment float64 // (N·m)²/Hz per moment component, one-sided
}

func (b Broadband) density(in Input) float64 {
	if in.Moment() {
		return b.Moment
	}
	return b.Force
}

// Spectrum is the gyro rate that a Broadband source makes.
type Spectrum struct {
	Frequency []float64    // Hz
	Density   [3][]float64 // per axis, (rad/s)²/Hz, all rotors added as power
	Rotors    []string
	ByRotor   [3][][]float64 // [axis][rotor][k]
}

// Broadband gives the spectrum under a source, |H|² times the density summed
// over components and rotors.
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
	}
	return sp
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
