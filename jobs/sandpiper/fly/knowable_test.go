package main

import (
	"math"
	"math/cmplx"
	"testing"
)

// The residues of all poles add up to the density, less the noise of the sensor: two pairs of poles and a real one under white forces at one rotor.
func TestResiduesMakeTheDensity(t *testing.T) {
	var terms []term
	for _, p := range []struct {
		lambda      complex128
		rate, force complex128
	}{{-30 + 700i, 1, 2i}, {-20 + 1500i, 0.4 + 0.1i, -1 + 3i}, {-110, 0.7, 5}} {
		own := term{lambda: p.lambda, rate: []complex128{p.rate, 0.3 * p.rate, -0.2 * p.rate}, force: make([]complex128, 6)}
		own.force[0], own.force[4] = p.force, 20*p.force
		terms = append(terms, own)
		if imag(p.lambda) != 0 {
			other := term{lambda: cmplx.Conj(p.lambda)}
			for _, v := range own.rate {
				other.rate = append(other.rate, cmplx.Conj(v))
			}
			for _, v := range own.force {
				other.force = append(other.force, cmplx.Conj(v))
			}
			terms = append(terms, other)
		}
	}
	p := newProcess(terms, []rotorState{{}})
	for i := range p.terms {
		clear(p.terms[i].force[6:]) // the double pole of the loop has residues of its own
	}
	for _, f := range []float64{20, 110, 240, 700} {
		var sum [9]complex128
		for _, own := range p.terms {
			r := p.residue(own)
			for a := range 3 {
				for b := range 3 {
					sum[3*a+b] += r.Shape[a] * r.Gain[b] / (complex(0, 2*math.Pi*f) - r.Lambda)
				}
			}
		}
		got := p.density(f)
		for a := range 3 {
			for b := range 3 {
				want := sum[3*a+b] + cmplx.Conj(sum[3*b+a])
				v := got[3*a+b]
				if a == b {
					ratio := math.Tan(math.Pi*f/stepRate) / math.Tan(math.Pi*lowPass/stepRate)
					v -= complex((noise*noise/2+leastBit*leastBit/(12*recordRate))*(1+math.Pow(ratio, 4)), 0)
				}
				if scale := math.Sqrt(real(got[4*a] * got[4*b])); cmplx.Abs(v-want) > 1e-9*scale {
					t.Errorf("%g Hz, %d %d: density %g, residues %g", f, a, b, v, want)
				}
			}
		}
	}
}

// A mode that stands out alone is shown well; one a thousand times weaker is not, and is one more unknown.
func TestBestErrors(t *testing.T) {
	pair := func(frequency, damping, strength float64) []term {
		w := 2 * math.Pi * frequency
		own := term{lambda: complex(-damping*w, w), rate: []complex128{complex(strength, 0), complex(0.1*strength, 0), complex(0.2*strength, 0)}, force: make([]complex128, 6)}
		own.force[0] = 30
		other := own
		other.lambda = cmplx.Conj(own.lambda)
		return []term{own, other}
	}
	p := newProcess(append(pair(200, 0.02, 1), pair(300, 0.05, 0.001)...), []rotorState{{}})
	best, err := p.best(2)
	if err != nil {
		t.Fatal(err)
	}
	strong, weak := best[p.terms[0].lambda], best[p.terms[2].lambda]
	// Without noise the bound of a mode is √(ζ/(2π·f·T)) of its frequency, and of damping by 1/ζ more: what identify.Bound is tested by.
	if least := 200 * math.Sqrt(0.02/(2*math.Pi*200*steady)); strong.Frequency < least || strong.Frequency > 3*least || strong.Damping > 0.3*0.02 {
		t.Errorf("the strong mode %+v, not far above %.3g Hz", strong, least)
	}
	if !(weak.Damping > 10*noticed*0.05) {
		t.Errorf("the weak mode %+v", weak)
	}
}
