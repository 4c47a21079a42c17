package match

import (
	"math"
	"testing"
)

// Direction decides where frequency cannot: two modes a per cent apart, on different axes, are paired across.
func TestModesByDirection(t *testing.T) {
	predicted := []Mode{
		{Frequency: 200, Damping: 0.01, Direction: []float64{1, 0, 0}, Strength: 1},
		{Frequency: 202, Damping: 0.01, Direction: []float64{0, 1, 0}, Strength: 1},
	}
	observed := []Mode{
		{Frequency: 200.5, Damping: 0.01, Direction: []float64{0.1, -1, 0}},
		{Frequency: 201.5, Damping: 0.01, Direction: []float64{-2, 0, 0.1}},
	}
	r := Modes(predicted, observed, ModeOptions{})
	if len(r.Pairs) != 2 || r.Pairs[0].Observed != 1 || r.Pairs[1].Observed != 0 {
		t.Fatalf("%+v", r.Pairs)
	}
	if r.Pairs[0].Confidence < 0.9 {
		t.Errorf("confidence %.2f", r.Pairs[0].Confidence)
	}
}

// Cost by hand: d = ln 1.1 over 0.05, an angle of 60° less 0.1 rad, damping of twice with no error, strength a tenth.
func TestModeCost(t *testing.T) {
	o := ModeOptions{Options: Options{}.filled(), DampingSpread: math.Ln2, Faint: 0.1}
	p := Mode{Frequency: 110, Damping: 0.02, Direction: []float64{1, 0}, Strength: 2}
	q := Mode{Frequency: 100, Damping: 0.01, Direction: []float64{-0.5, -math.Sqrt(3) / 2}, DirectionError: 0.1}
	want := math.Pow(math.Log(1.1)/0.05, 2) + 8*(1-math.Cos(math.Pi/3-0.1)) + 1 + 2*math.Ln2
	if got := o.modeCost(p, q, 20); math.Abs(got-want) > 1e-12 {
		t.Errorf("cost %g, want %g", got, want)
	}
}

// A mode that is hardly felt does not take an observation from one that is, though it lies nearer.
func TestModesByStrength(t *testing.T) {
	predicted := []Mode{
		{Frequency: 150, Direction: []float64{1, 0, 0}, Strength: 0.01},
		{Frequency: 154, Direction: []float64{1, 0, 0}, Strength: 1},
	}
	r := Modes(predicted, []Mode{{Frequency: 150, Direction: []float64{1, 0, 0}}}, ModeOptions{})
	if len(r.Pairs) != 1 || r.Pairs[0].Predicted != 1 || len(r.Predicted) != 1 {
		t.Fatalf("%+v", r)
	}
}

func TestAssurance(t *testing.T) {
	a := []float64{1, 4, 9, 0}
	if got := Assurance(a, []float64{2, 8, 18, 5}, nil); math.Abs(got-1) > 1e-12 {
		t.Errorf("the same shape has %g", got)
	}
	// Amplitudes 1, 2 against 2, 1: (2+2)²/(5·5).
	if got := Assurance([]float64{1, 4, 7}, []float64{4, 1, 7}, []bool{true, true, false}); math.Abs(got-16.0/25) > 1e-12 {
		t.Errorf("got %g", got)
	}
	if got := Assurance(a, a, make([]bool, 4)); !math.IsNaN(got) {
		t.Errorf("nothing has %g", got)
	}
}
