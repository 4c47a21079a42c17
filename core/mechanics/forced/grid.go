package forced

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"sort"

	"hushframe/core/mechanics/modal"
)

// Resonance is where a response needs close sampling.
type Resonance struct {
	Frequency  float64 // Hz
	LossFactor float64
}

// Resonances lists where the response may peak: the poles of the system, with
// its damping and its rotors as they spin, up to a fifth above the highest elastic mode. Stiffness
// that depends on frequency is taken near each. With a
// Rate, or where the poles do not settle, it lists the elastic modes with their own
// loss factors. The result does not depend on threads.
func (s *System) Resonances(threads int) []Resonance {
	var out []Resonance
	highest := 0.0
	for i, eta := range s.Damping() {
		v := s.vectors[i]
		if s.basis.Kinds[v] == modal.Elastic {
			out = append(out, Resonance{s.basis.Frequency[v], eta})
			highest = max(highest, s.basis.Frequency[v])
		}
	}
	if s.rate != nil {
		return out
	}
	// Laws are taken at some frequencies, each for the poles nearest to it.
	at := []float64{highest}
	if s.Varies() {
		at = at[:0]
		for f := out[0].Frequency; f < 1.2*highest; f *= lawStep {
			at = append(at, f)
		}
	}
	near := make([][]complex128, len(at))
	err := s.each(context.Background(), len(at), threads, func() func(k int) error {
		return func(k int) error {
			above, below := 0.0, 1.2*highest
			if k > 0 {
				above = math.Sqrt(at[k-1] * at[k])
			}
			if k+1 < len(at) {
				below = math.Sqrt(at[k+1] * at[k])
			}
			core, err := s.Frozen(at[k]).Core()
			if err != nil {
				return err
			}
			near[k], err = core.natural(s.momentum, above, below)
			return err
		}
	})
	if err != nil {
		return out
	}
	var poles []Resonance
	for _, w := range slices.Concat(near...) {
		poles = append(poles, Resonance{cmplx.Abs(w) / (2 * math.Pi), 2 * imag(w) / cmplx.Abs(w)})
	}
	return poles
}

// lawStep is the ratio of the frequencies at which laws are taken to find poles.
const lawStep = 1.4

// arc is the angle between neighbouring samples on the circle that a single
// resonance draws in the complex plane: 7.5° puts 12 samples within the
// half-power points.
const arc = math.Pi / 24

// Grid gives ascending frequencies from from to to, both included: evenly
// spaced by at most step, and around each resonance spaced evenly in phase,
// f = f_n (1 + ½ η tan θ) for θ in ±82.5°. Points closer than a thousandth of
// the half-power width to one another are merged. It panics unless 0 < from <
// to and step > 0.
func Grid(from, to, step float64, resonances []Resonance) []float64 {
	if !(from > 0 && to > from && step > 0) {
		panic(fmt.Sprintf("forced: grid from %g to %g by %g", from, to, step))
	}
	n := int(math.Ceil((to - from) / step * (1 - 1e-12)))
	grid := make([]float64, 0, n+1+len(resonances)*24)
	for i := range n {
		grid = append(grid, from+(to-from)*float64(i)/float64(n))
	}
	grid = append(grid, to)
	least := step
	for _, r := range resonances {
		least = min(least, r.half())
	}
	grid = append(grid, Around(from, to, resonances)...)
	sort.Float64s(grid)
	kept := grid[:1]
	for _, f := range grid[1:] {
		if f-kept[len(kept)-1] > least/1000 {
			kept = append(kept, f)
		}
	}
	kept[len(kept)-1] = to
	return kept
}

// half is half the half-power width, Hz.
func (r Resonance) half() float64 {
	if half := r.Frequency * r.LossFactor / 2; half > 0 {
		return half
	}
	return r.Frequency * 1e-5 // undamped: close enough to be seen
}

// Around gives the frequencies that Grid adds around resonances, ascending, between from and to.
func Around(from, to float64, resonances []Resonance) []float64 {
	var out []float64
	for _, r := range resonances {
		for k := -11; k <= 11; k++ {
			if f := r.Frequency + r.half()*math.Tan(float64(k)*arc); f > from && f < to {
				out = append(out, f)
			}
		}
	}
	sort.Float64s(out)
	return out
}
