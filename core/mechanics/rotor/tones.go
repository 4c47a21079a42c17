package rotor

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
)

// Excitation says how strongly rotors shake the frame at their orders. All
// amplitudes grow with the square of speed, as thrust and torque do.
type Excitation struct {
	// Unbalance in kg·m; NaN for what the balance grade of each rotor permits.
	Unbalance float64
	// Thrust of one rotor at hover, N. BladeThrust and BladeSide are the amplitudes at blade
	// passing of the force along the shaft and of one square to it, as shares of Thrust.
	Thrust, BladeThrust, BladeSide float64
	// Ripple is the amplitude of the moment about the shaft at hover, N·m, at RippleOrder.
	Ripple, RippleOrder float64
}

// Tone is a load at the hub of one rotor at one order of its speed.
type Tone struct {
	Name  string
	Order float64
	// Hover is the amplitude at hover speed, N or N·m.
	Hover  float64
	Moment bool
	// Loads are the components of the load per unit amplitude, force and moment in airframe
	// axes. Several are of unknown direction or phase and add as power.
	Loads [][6]complex128

	hoverSpeed float64
}

// Amplitude at a speed in rad/s, N or N·m.
func (t Tone) Amplitude(speed float64) float64 {
	return t.Hover * speed * speed / (t.hoverSpeed * t.hoverSpeed)
}

// ToneNames are the names of tones, in the order of Tones; blade passing is that of the thrust.
var ToneNames = [4]string{"unbalance", "blade passing", "blade side force", "torque ripple"}

// Tones lists the loads of a rotor that have an amplitude: unbalance, a force turning with the rotor; thrust
// and side force at blade passing; torque ripple. The side force keeps an unknown direction in the plane of the
// rotor, where the blades pass the arm. A rotor without hover speed has none. It panics on a
// negative or infinite amplitude.
func (e Excitation) Tones(r airframe.Rotor) []Tone {
	for _, x := range []float64{e.BladeThrust, e.BladeSide, e.Ripple, e.RippleOrder} {
		if !(x >= 0) || math.IsInf(x, 0) {
			panic(fmt.Sprintf("rotor: excitation %+v", e))
		}
	}
	if !(r.HoverSpeed > 0) {
		return nil
	}
	unbalance := e.Unbalance
	if math.IsNaN(unbalance) {
		unbalance = 0
		if r.MaxSpeed > 0 {
			unbalance = Unbalance(r.SpinningMass, r.Grade, r.MaxSpeed)
		}
	}
	e1, e2 := Square(r.Axis)
	turning := Whirl(r.Axis, r.Spin)
	blades := float64(r.Blades)
	all := []Tone{
		{Name: ToneNames[0], Order: 1, Hover: Force(unbalance, r.HoverSpeed), Loads: [][6]complex128{{turning[0], turning[1], turning[2]}}},
		{Name: ToneNames[1], Order: blades, Hover: e.BladeThrust * e.Thrust, Loads: [][6]complex128{force(r.Axis, 1)}},
		// One direction in the plane, any with equal chance: two square ones of half the power.
		{Name: ToneNames[2], Order: blades, Hover: e.BladeSide * e.Thrust, Loads: [][6]complex128{force(e1, math.Sqrt2/2), force(e2, math.Sqrt2/2)}},
		{Name: ToneNames[3], Order: e.RippleOrder, Hover: e.Ripple, Moment: true, Loads: [][6]complex128{moment(r.Axis)}},
	}
	var out []Tone
	for _, t := range all {
		if t.Hover > 0 && t.Order > 0 {
			t.hoverSpeed = r.HoverSpeed
			out = append(out, t)
		}
	}
	return out
}

func force(v airframe.Vec, scale float64) (f [6]complex128) {
	for c, x := range v {
		f[c] = complex(scale*x, 0)
	}
	return f
}

func moment(v airframe.Vec) (f [6]complex128) {
	for c, x := range v {
		f[3+c] = complex(x, 0)
	}
	return f
}
