package main

import (
	"math"
	"math/cmplx"

	"hushframe/core/signal/identify"
)

// process is what the recorder sees as a stationary process: white forces on the rotors, the loop behind its low-passes, the plant, and the noise of
// the sensor. Steady lines tell nothing of modes and are left out. Rates are in deg/s.
type process struct {
	terms []term // with three more inputs, of the loop
	sites int
}

func newProcess(terms []term, rotors []rotorState) process {
	p := process{sites: len(rotors)}
	for _, t := range terms {
		own := term{lambda: t.lambda, force: append([]complex128{}, t.force...)}
		for _, v := range t.rate {
			own.rate = append(own.rate, v*180/math.Pi)
		}
		for axis := range 3 {
			var sum complex128
			for i, r := range rotors {
				thrust, torque := r.loop(axis)
				sum += complex(thrust, 0)*t.force[6*i+2] + complex(torque, 0)*t.force[6*i+5]
			}
			own.force = append(own.force, sum)
		}
		p.terms = append(p.terms, own)
	}
	return p
}

// source is the two-sided density of an input at s, per Hz.
func (p process) source(input int, s complex128) complex128 {
	switch {
	case input >= 6*p.sites:
		// Unit variance behind 1/(1+s/c)², of which the square has the integral c/4 over frequency.
		c := 2 * math.Pi * loopBand
		q := 1 / (1 - s*s/complex(c*c, 0))
		return q * q * complex(4/c, 0)
	case input%6 < 3:
		return forceDensity / 2
	}
	return momentDensity / 2
}

// at is the transfer function from the inputs to the rates at s, 3 × inputs.
func (p process) at(s complex128) [3][]complex128 {
	var h [3][]complex128
	for d := range h {
		h[d] = make([]complex128, len(p.terms[0].force))
		for _, t := range p.terms {
			by := t.rate[d] / (s - t.lambda)
			for i, f := range t.force {
				h[d][i] += by * f
			}
		}
	}
	return h
}

// density is the two-sided spectrum of the rates at f Hz, 3 × 3, with the noise of the sensor as it stands before the low-pass.
func (p process) density(f float64) []complex128 {
	s := complex(0, 2*math.Pi*f)
	h := p.at(s)
	out := make([]complex128, 9)
	for a := range 3 {
		for b := range 3 {
			for i, v := range h[a] {
				out[3*a+b] += v * p.source(i, s) * cmplx.Conj(h[b][i])
			}
		}
		white := noise*noise/2 + leastBit*leastBit/(12*recordRate)
		// The bilinear transform warps the frequency.
		r := math.Tan(math.Pi*f/stepRate) / math.Tan(math.Pi*lowPass/stepRate)
		out[3*a+a] += complex(white*(1+r*r*r*r), 0)
	}
	return out
}

// residue is a term as a part of the spectrum.
func (p process) residue(t term) identify.Residue {
	h := p.at(-t.lambda)
	r := identify.Residue{Lambda: t.lambda, Shape: t.rate, Gain: make([]complex128, 3)}
	for d := range h {
		for i, v := range h[d] {
			r.Gain[d] += v * p.source(i, t.lambda) * t.force[i]
		}
	}
	return r
}

const (
	// steady is how long, in s, the best errors are told for: the hover without its ends.
	steady = 58.0
	// noticed is the relative error of damping below which a recording shows a mode at all, were it the only thing unknown.
	noticed = 0.3
	// boundFrom, boundTo and boundStep say which frequencies are taken as recorded, Hz.
	boundFrom, boundTo, boundStep = 40.0, 900.0, 0.25
)

// best gives the least errors with which the poles of elastic terms can be known from a steady recording when all modes that it shows are unknown
// together; a mode that it does not show is one more unknown. Terms beyond the frequencies taken are left out.
func (p process) best(threads int) (map[complex128]identify.Best, error) {
	bound := func(poles []term) ([]identify.Best, error) {
		var residues []identify.Residue
		for _, t := range poles {
			residues = append(residues, p.residue(t))
		}
		return identify.Bound(p.density, residues, boundFrom, boundTo, boundStep, steady, threads)
	}
	var shown, hidden []term
	for _, t := range p.terms {
		if f := cmplx.Abs(t.lambda) / (2 * math.Pi); !t.elastic() || f > boundTo {
			continue
		}
		alone, err := bound([]term{t})
		if err != nil {
			return nil, err
		}
		if alone[0].Damping <= noticed*-real(t.lambda)/cmplx.Abs(t.lambda) {
			shown = append(shown, t)
		} else {
			hidden = append(hidden, t)
		}
	}
	out := map[complex128]identify.Best{}
	together, err := bound(shown)
	if err != nil {
		return nil, err
	}
	for i, b := range together {
		out[shown[i].lambda] = b
	}
	for _, t := range hidden {
		with, err := bound(append(shown[:len(shown):len(shown)], t))
		if err != nil {
			return nil, err
		}
		out[t.lambda] = with[len(shown)]
	}
	return out, nil
}
