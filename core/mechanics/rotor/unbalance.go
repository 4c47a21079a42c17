package rotor

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
)

// Unbalance gives U in kg·m of a rotor of a mass (kg) that just keeps a balance
// quality grade e·Ω (m/s; G6.3 is 6.3e-3) at its highest service speed (rad/s,
// positive). The eccentricity follows at that speed and then stays (ISO
// 21940-11).
func Unbalance(mass, grade, highest float64) float64 {
	if !(highest > 0) {
		panic(fmt.Sprintf("rotor: highest speed of %g rad/s", highest))
	}
	return mass * grade / highest
}

// Force gives the amplitude U·Ω² in N of the rotating force at a speed.
func Force(unbalance, speed float64) float64 { return unbalance * speed * speed }

// Frequency gives the frequency in Hz at which an order of a speed in rad/s acts.
func Frequency(order, speed float64) float64 { return order * speed / (2 * math.Pi) }

// Whirl gives the phasor of a unit force that turns with the rotor about a unit
// axis: e₁ − i·s·e₂ with e₁ × e₂ along the axis, so that its two components are
// a quarter turn apart and its real part turns counterclockwise about the axis
// for s = +1. The choice of e₁ sets only the common phase.
func Whirl(axis airframe.Vec, spin int) [3]complex128 {
	if spin != 1 && spin != -1 {
		panic(fmt.Sprintf("rotor: spin is %d, not 1 or -1", spin))
	}
	e1, e2 := Square(axis)
	var f [3]complex128
	for c := range f {
		f[c] = complex(e1[c], -float64(spin)*e2[c])
	}
	return f
}

// Square gives two unit vectors square to a unit axis and to each other, with
// e₁ × e₂ along the axis.
func Square(axis airframe.Vec) (e1, e2 airframe.Vec) {
	// e₁ from the airframe axis that is farthest from the shaft.
	far := 0
	for c := range axis {
		if math.Abs(axis[c]) < math.Abs(axis[far]) {
			far = c
		}
	}
	var start airframe.Vec
	start[far] = 1
	e2 = unit(cross(axis, start))
	return cross(e2, axis), e2
}

func dot(a, b airframe.Vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func cross(a, b airframe.Vec) airframe.Vec {
	return airframe.Vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

func unit(a airframe.Vec) airframe.Vec {
	n := math.Sqrt(a[0]*a[0] + a[1]*a[1] + a[2]*a[2])
	return airframe.Vec{a[0] / n, a[1] / n, a[2] / n}
}
