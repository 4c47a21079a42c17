package order

import (
	"math"
	"testing"

	"hushframe/core/signal/internal/noise"
)

func TestFold(t *testing.T) {
	// By hand for 2000 Hz: 800 stays, 1200 mirrors about 1000 to 800, 2300 is 300 above the rate, 3900 is 100 below twice it.
	for f, want := range map[float64]float64{0: 0, 800: 800, 1000: 1000, 1200: 800, 2000: 0, 2300: 300, 3900: 100} {
		if got := Fold(f, 2000); math.Abs(got-want) > 1e-9 {
			t.Errorf("%g Hz appears at %g, want %g", f, got, want)
		}
	}
	// The samples of a folded line are those of its mirror image.
	for i := range 50 {
		a, b := math.Cos(2*math.Pi*1230*float64(i)/2000), math.Cos(2*math.Pi*Fold(1230, 2000)*float64(i)/2000)
		if math.Abs(a-b) > 1e-9 {
			t.Fatalf("sample %d: %g and %g", i, a, b)
		}
	}
}

// Uniform wander of ±10 Hz about 260 Hz: the bands of order n hold n·250 to n·270, the third (780) and the fourth (1040,
// half of it folded).
func TestBandsOfWander(t *testing.T) {
	source := noise.Source(9)
	speed := make([]float64, 20000)
	for i := range speed {
		speed[i] = 260 + 20*source.Uniform()
	}
	got := Bands([]Rotor{{Name: "fr", Speed: speed, Blades: 3}}, Settings{Rate: 2000, Step: 1, Margin: 1, Coverage: 1})
	want := []Band{
		{Rotor: "fr", Order: 1, Low: 248.5, High: 271.5},
		{Rotor: "fr", Order: 2, Low: 498.5, High: 541.5},
		{Rotor: "fr", Order: 3, BladePassing: true, Low: 748.5, High: 811.5},
	}
	if len(got) != len(want) {
		t.Fatalf("%+v", got)
	}
	for i, w := range want {
		g := got[i]
		if g.Rotor != w.Rotor || g.Order != w.Order || g.BladePassing != w.BladePassing || g.Folded ||
			math.Abs(g.Low-w.Low) > 1e-9 || math.Abs(g.High-w.High) > 1e-9 || g.Share != 1 {
			t.Errorf("got %+v, want %+v", g, w)
		}
	}
	folded := Bands([]Rotor{{Speed: speed}}, Settings{Rate: 2000, Step: 1, Orders: []float64{4, 5}, Coverage: 1})
	// Order 4 spans 1000 to 1080 and lies at 920 to 1000; order 5 spans 1250 to 1350 and lies at 650 to 750.
	if len(folded) != 2 || !folded[0].Folded || !folded[1].Folded ||
		math.Abs(folded[0].Low-919.5) > 1.01 || folded[0].High != 1000 ||
		math.Abs(folded[1].Low-649.5) > 1.01 || math.Abs(folded[1].High-750.5) > 1.01 {
		t.Errorf("%+v", folded)
	}
}

// Two speeds held in turn: two bands, and the mean between them is free. A moment at a third speed is left out.
func TestBandsOfTwoSpeeds(t *testing.T) {
	speed := make([]float64, 1000)
	for i := range speed {
		switch {
		case i < 600:
			speed[i] = 100
		case i < 990:
			speed[i] = 140
		default:
			speed[i] = 200
		}
	}
	got := Bands([]Rotor{{Speed: speed}}, Settings{Rate: 1000, Step: 2, Orders: []float64{1}})
	if len(got) != 2 || !got[0].Contains(100) || !got[1].Contains(140) || got[0].Share != 0.6 || got[1].Share != 0.39 {
		t.Fatalf("%+v", got)
	}
	if at := Holding(got, 120); at != nil {
		t.Errorf("120 Hz lies in %v", at)
	}
	if at := Holding(got, 140.5); len(at) != 1 || at[0] != 1 {
		t.Errorf("140.5 Hz lies in %v", at)
	}
}

func TestRotorAtRest(t *testing.T) {
	if got := Bands([]Rotor{{Speed: []float64{0, 0, math.NaN(), -1}, Blades: 2}}, Settings{Rate: 1, Step: 1}); got != nil {
		t.Errorf("%+v", got)
	}
}
