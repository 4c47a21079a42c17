package main

import (
	"math"
	"math/rand/v2"
)

// Flight profile, s: ground with motors off, spin-up, take-off, hover that
// wanders with throttle, landing.
const (
	spinUp   = 3.0
	takeOff  = 6.0
	hovering = 9.0
	landing  = 70.0
	end      = 74.0
)

// Source strengths at hover; broadband and periodic forces scale with the
// square of speed.
const (
	forceDensity  = 3e-6 // N²/Hz one-sided, each direction, each rotor, white to the simulation's Nyquist frequency
	momentDensity = 2e-9 // (N·m)²/Hz
	bladeThrust   = 0.05 // N peak at blade passing
	bladeSide     = 0.02 // N peak
	torqueRipple  = 4e-3 // N·m peak at order rippleOrder
	rippleOrder   = 6    // 1600 Hz at hover: folds to 400 Hz at 2 kHz
	loopForce     = 0.35 // N rms of thrust wandering per axis pattern below loopBand
	loopTorque    = 4e-3 // N·m rms
	loopBand      = 35.0 // Hz
)

// sources makes the forces on the rotors, one step at a time.
type sources struct {
	dt      float64
	rng     *rand.Rand
	rotors  []rotorState
	wander  [5]filter // common throttle, then one per rotor
	loop    [3]filter // roll, pitch, yaw thrust patterns
	time    float64
	force   []float64 // 6 per rotor
	density float64
}

// rotorState is one rotor in flight.
type rotorState struct {
	x, y      float64 // hub, m
	spin      float64
	blades    float64
	hover     float64 // rad/s
	unbalance float64 // kg·m
	angle     float64 // rad, of the heavy spot
	phase     [3]float64
	speed     float64 // rad/s
}

// filter is two first-order low-passes in a row, fed with white noise and
// scaled to unit variance.
type filter struct{ a, gain, s1, s2 float64 }

func newFilter(cutoff, dt float64) filter {
	a := math.Exp(-2 * math.Pi * cutoff * dt)
	// Variance of two equal first-order filters in a row on unit white noise:
	// (1−a)⁴ (1+a²)/(1−a²)³.
	v := math.Pow(1-a, 4) * (1 + a*a) / math.Pow(1-a*a, 3)
	return filter{a: a, gain: 1 / math.Sqrt(v)}
}

func (f *filter) step(x float64) float64 {
	f.s1 = f.a*f.s1 + (1-f.a)*x
	f.s2 = f.a*f.s2 + (1-f.a)*f.s1
	return f.gain * f.s2
}

func newSources(rotors []rotorState, dt float64, seed uint64) *sources {
	s := &sources{dt: dt, rng: rand.New(rand.NewPCG(seed, 0x5a4d)), rotors: rotors, force: make([]float64, 6*len(rotors)), density: math.Sqrt(1 / (2 * dt))}
	for i := range s.wander {
		s.wander[i] = newFilter(0.25, dt)
	}
	for i := range s.loop {
		s.loop[i] = newFilter(loopBand, dt)
	}
	for i := range s.rotors {
		for k := range s.rotors[i].phase {
			s.rotors[i].phase[k] = 2 * math.Pi * s.rng.Float64()
		}
		s.rotors[i].angle = 2 * math.Pi * s.rng.Float64()
	}
	return s
}

// throttle is the mean command at a time, as a fraction of hover speed.
func throttle(t float64) float64 {
	ramp := func(from, to float64) float64 {
		x := math.Max(0, math.Min(1, (t-from)/(to-from)))
		return x * x * (3 - 2*x)
	}
	switch {
	case t < spinUp:
		return 0
	case t < takeOff:
		return 0.35 * ramp(spinUp, spinUp+1)
	case t < hovering:
		return 0.35 + 0.75*ramp(takeOff, takeOff+1.2) - 0.10*ramp(takeOff+1.6, hovering)
	case t < landing:
		return 1
	}
	return 1 - ramp(landing, landing+2.5)
}

// step moves time on and gives the force on each rotor (six components) and
// the common throttle.
func (s *sources) step() (force []float64, command float64) {
	command = throttle(s.time)
	airborne := s.time >= takeOff && s.time < landing
	common := s.wander[0].step(s.rng.NormFloat64())
	var loop [3]float64
	for i := range s.loop {
		loop[i] = s.loop[i].step(s.rng.NormFloat64())
	}
	for i := range s.rotors {
		r := &s.rotors[i]
		own := s.wander[1+i].step(s.rng.NormFloat64())
		r.speed = r.hover * command
		if airborne {
			r.speed *= 1 + 0.015*common + 0.005*own
		}
		r.angle += r.spin * r.speed * s.dt
		ratio := r.speed / r.hover
		level := ratio * ratio
		f := s.force[6*i : 6*i+6]
		for c := range f {
			noise := s.rng.NormFloat64() * s.density * level
			if c < 3 {
				f[c] = noise * math.Sqrt(forceDensity)
			} else {
				f[c] = noise * math.Sqrt(momentDensity)
			}
		}
		// Unbalance: U Ω² turning with the shaft.
		u := r.unbalance * r.speed * r.speed
		sin, cos := math.Sincos(r.angle)
		f[0] += u * cos
		f[1] += u * sin
		turns := math.Abs(r.angle)
		f[2] += level * bladeThrust * math.Sin(r.blades*turns+r.phase[0])
		f[0] += level * bladeSide * math.Sin(r.blades*turns+r.phase[1])
		f[5] += level * torqueRipple * math.Sin(rippleOrder*turns+r.phase[2])
		if airborne {
			// The loop answers gusts: thrust patterns that roll and pitch, torque that yaws.
			for axis, v := range loop {
				thrust, torque := r.loop(axis)
				f[2] += thrust * v
				f[5] += torque * v
			}
		}
	}
	s.time += s.dt
	return s.force, command
}

// loop gives the thrust and the torque of a rotor with which the loop answers a gust of unit variance about an axis.
func (r rotorState) loop(axis int) (thrust, torque float64) {
	switch axis {
	case 0:
		return loopForce * math.Copysign(0.5, r.y), 0
	case 1:
		return -loopForce * math.Copysign(0.5, r.x), 0
	}
	return 0, loopTorque
}
