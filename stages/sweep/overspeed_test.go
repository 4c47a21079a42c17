package sweep

import (
	"context"
	"math"
	"testing"

	"hushframe/core/mechanics/forced"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

func newton(x float64) stage.Quantity { return stage.Quantity{SI: x, Dimension: "moment"} }

// At the speed of the lines the map has what the lines have together.
func TestMapHoldsTheLines(t *testing.T) {
	m, p := tilting()
	p.Rotors[0].HoverSpeed, p.Rotors[1].HoverSpeed = 1700, 1700
	r, _ := run(t, m, p, stage.Arguments{"side_share": 0.02, "torque_ripple": newton(1e-3), "ripple_order": 2.5,
		"unbalance": stage.Quantity{SI: 5e-7, Dimension: "unbalance"}})
	if len(r.MapSpeeds) != mapSpeeds || len(r.Orders) != 4 {
		t.Fatalf("%d speeds, %d orders", len(r.MapSpeeds), len(r.Orders))
	}
	k := mapSpeeds/2 - 1
	if r.MapSpeeds[k] != 1700 {
		t.Fatalf("speed %g", r.MapSpeeds[k])
	}
	found := 0
	for _, row := range r.Orders {
		for _, line := range r.Lines {
			if line.Source != row.Source || line.Rotor != "all" {
				continue
			}
			found++
			for axis, x := range line.Rate {
				if got := row.Rate[axis][k]; math.Abs(got-x) > 1e-9*x {
					t.Errorf("%s on axis %d: %g in the map, %g as a line", row.Source, axis, got, x)
				}
			}
		}
	}
	if found != 4 {
		t.Errorf("%d of 4 sources have a line together", found)
	}
	if f := r.Lines[0].Force; math.Abs(f-5e-7*1700*1700) > 1e-9 {
		t.Errorf("force of the given unbalance %g", f)
	}
}

// What lines add to the density over a flight integrates to their mean square:
// with a response that hardly changes over the spread, half the square of the amplitude.
func TestFlightKeepsTheMeanSquare(t *testing.T) {
	m, p := frame()
	r, _ := run(t, m, p, stage.Arguments{"from": hertz(200), "to": hertz(360), "speed_spread": 0.002, "blade_share": 0.0, "gyro_noise": stage.Quantity{Dimension: "angular rate density"}, "rotor_speed": "none", "resolution": hertz(0.05)})
	var all kinds.ResponseLine
	for _, x := range r.Lines {
		if x.Rotor == "all" {
			all = x
		}
	}
	for axis, a := range all.Rate {
		more := make([]float64, len(r.Frequency))
		for k := range more {
			more[k] = r.Flown[axis][k] - r.Density[axis][k]
		}
		if got, want := forced.MeanSquare(r.Frequency, more), a*a/2; math.Abs(got-want) > 0.01*want+1e-18 { // roll and pitch get nothing but rounding
			t.Errorf("axis %d: the flight has a mean square of %g in lines, want %g", axis, got, want)
		}
	}
	// Half of the flight elsewhere leaves half of it here.
	half, _ := run(t, m, p, stage.Arguments{"from": hertz(200), "to": hertz(360), "speed_spread": 0.002, "blade_share": 0.0, "gyro_noise": stage.Quantity{Dimension: "angular rate density"}, "rotor_speed": "none", "resolution": hertz(0.05),
		"speeds_flown": []any{
			map[string]any{"speed": stage.Quantity{SI: 1700, Dimension: "rotational speed"}, "share": 2.0},
			map[string]any{"speed": stage.Quantity{SI: 600, Dimension: "rotational speed"}, "share": 2.0}}})
	for k := range r.Frequency {
		if a, b := r.Flown[0][k]-r.Density[0][k], half.Flown[0][k]-half.Density[0][k]; math.Abs(a-2*b) > 1e-9*r.Flown[0][k] {
			t.Fatalf("at %g Hz lines add %g, and %g over half of the flight", r.Frequency[k], a, b)
		}
	}
}

// Rotors in step along z turn the frame in pitch only: a and b lie left and
// right of the centre, both in front of it.
func TestRotorsInStep(t *testing.T) {
	m, p := frame()
	band := func(coefficient, from, to float64) stage.Arguments {
		return stage.Arguments{"moment_density": stage.Quantity{SI: 0, Dimension: "moment density"},
			"correlation": []any{map[string]any{"from": hertz(from), "to": hertz(to), "coefficient": coefficient}}}
	}
	step, _ := run(t, m, p, band(1, 0, 600))
	free, _ := run(t, m, p, band(0, 0, 600))
	k := 0
	for step.Frequency[k] < 150 {
		k++
	}
	if a, b := step.Density[0][k], free.Density[0][k]; !(a < 0.05*b) {
		t.Errorf("at its mode roll has %g in step and %g unrelated", a, b)
	}
	for step.Frequency[k] < 230 {
		k++
	}
	if a, b := step.Density[1][k], free.Density[1][k]; !(a > 1.9*b) {
		t.Errorf("at its mode pitch has %g in step and %g unrelated", a, b)
	}
	for name, change := range map[string]stage.Arguments{"band": band(0.5, 200, 100)} {
		_, err := Stage{}.Run(context.Background(), call(t, m, p, change))
		if f := fault.From(err); err == nil || f.Argument != "correlation" || f.Remedy == "" {
			t.Errorf("%s: %#v", name, err)
		}
	}
	// Two rotors may push exactly against each other, three by a half.
	against, _ := run(t, m, p, band(-1, 0, 600))
	if a, b := against.Density[1][k], free.Density[1][k]; !(a < 0.1*b) {
		t.Errorf("at its mode pitch has %g with rotors against each other and %g unrelated", a, b)
	}
	p.Rotors = append(p.Rotors, p.Rotors[0])
	if err := correlated(settings{source: forced.Broadband{Together: []forced.Correlation{{To: 100, Coefficient: -0.5}}}}, 3); err != nil {
		t.Errorf("three rotors against each other by a half: %v", err)
	}
	_, err := Stage{}.Run(context.Background(), call(t, m, p, band(-0.6, 0, 100)))
	if f := fault.From(err); err == nil || f.Argument != "correlation" || f.Remedy == "" {
		t.Errorf("three rotors against each other: %#v", err)
	}
}

func BenchmarkMap(b *testing.B) {
	m, p := tilting()
	for b.Loop() {
		run(b, m, p, stage.Arguments{"side_share": 0.02})
	}
}
