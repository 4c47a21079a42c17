package rotor

import (
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
)

// Rows G-FORCE: unbalance force, frequency of rotation and of blade passing over speed, as the tones have them.
func TestTonesFollowSpeed(t *testing.T) {
	row := known.One(t, "G_unbalance.json", "G-FORCE-8e-09")
	var s struct {
		U      float64 `json:"unbalance_kg_m"`
		Blades int
	}
	row.Decode(t, &s)
	const rpm = 2 * math.Pi / 60
	r := airframe.Rotor{Axis: airframe.Vec{0, 0, 1}, Spin: 1, Blades: s.Blades, HoverSpeed: 16000 * rpm}
	tones := Excitation{Unbalance: s.U, Thrust: 1.5, BladeThrust: 0.01, BladeSide: 0.02, Ripple: 1e-4, RippleOrder: 14}.Tones(r)
	if len(tones) != 4 {
		t.Fatalf("%d tones", len(tones))
	}
	var got []float64
	for _, l := range row.Labels {
		kind, speed := label(t, l)
		got = append(got, map[string]float64{
			"force": tones[0].Amplitude(speed), "rotation": Frequency(tones[0].Order, speed), "blade passing": Frequency(tones[1].Order, speed),
		}[kind])
	}
	row.Check(t, 1, got...)
	// At twice the speed all are four times as strong.
	for _, x := range tones {
		if math.Abs(x.Amplitude(2*r.HoverSpeed)-4*x.Hover) > 1e-12*x.Hover {
			t.Errorf("%s: %g at twice the hover speed, %g at hover", x.Name, x.Amplitude(2*r.HoverSpeed), x.Hover)
		}
	}
	if x := tones[3]; !x.Moment || x.Order != 14 || x.Loads[0] != [6]complex128{5: 1} {
		t.Errorf("torque ripple %+v", x)
	}
}

// The power of the side force is that of its amplitude in one direction,
// whichever the direction, and none is along the shaft.
func TestSideForceHasNoDirection(t *testing.T) {
	r := airframe.Rotor{Axis: airframe.Vec{0.48, 0.6, 0.64}, Spin: -1, Blades: 2, HoverSpeed: 1}
	side := Excitation{Thrust: 3, BladeSide: 0.5}.Tones(r)[0]
	for _, axis := range []airframe.Vec{{0.8, 0, -0.6}, {0, 1, 0}, r.Axis} {
		along := dot(axis, r.Axis)
		got := 0.0
		for _, load := range side.Loads {
			var sum complex128
			for c, x := range axis {
				sum += load[c] * complex(x, 0)
			}
			got += cmplx.Abs(sum) * cmplx.Abs(sum)
		}
		if want := (1 - along*along) / 2; math.Abs(got-want) > 1e-12 {
			t.Errorf("mean square along %v is %g, want %g", axis, got, want)
		}
	}
	if side.Hover != 1.5 || side.Order != 2 {
		t.Errorf("%+v", side)
	}
}

func TestGradeIsTheDefaultUnbalance(t *testing.T) {
	r := airframe.Rotor{Axis: airframe.Vec{0, 0, 1}, Spin: 1, Blades: 3, HoverSpeed: 1700, MaxSpeed: 3400, SpinningMass: 0.02, Grade: 6.3e-3}
	tones := Excitation{Unbalance: math.NaN()}.Tones(r)
	if len(tones) != 1 || math.Abs(tones[0].Hover-0.02*6.3e-3/3400*1700*1700) > 1e-15 {
		t.Errorf("%+v", tones)
	}
	r.HoverSpeed = 0
	if tones := (Excitation{Unbalance: 1}).Tones(r); tones != nil {
		t.Errorf("a rotor that does not turn has %+v", tones)
	}
}
