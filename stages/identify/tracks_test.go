package identify

import (
	"math"
	"strings"
	"testing"

	"hushframe/core/signal/order"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// What stays of an order: a tenth where the speed is recorded, all where it is not sure, exp((n·e)²)-1 over what is taken out where the angle is
// off by e, but no less than a tenth.
func TestRemaining(t *testing.T) {
	found := &gather.Recording{Found: true, Sharp: []gather.Sharpness{{PhaseError: 0.1, Sure: true}, {PhaseError: 0.9}}}
	for _, c := range []struct {
		r     *gather.Recording
		rotor int
		n     float64
		want  float64
	}{{&gather.Recording{}, 0, 6, 0.1}, {&gather.Recording{Found: true}, 0, 1, 1}, {found, 0, 1, 0.1}, {found, 0, 6, math.Exp(0.36) - 1}, {found, 1, 1, 1}} {
		if got := remaining(c.r, sureRotors(c.r, 2), c.rotor, c.n); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("order %g of rotor %d of %+v: %g stays, want %g", c.n, c.rotor, c.r.Sharp, got, c.want)
		}
	}
}

// Two rotors within half a hertz for a tenth of the time are told, others not.
func TestTogether(t *testing.T) {
	a, b, c := make([]float64, 100), make([]float64, 100), make([]float64, 100)
	for i := range a {
		a[i], b[i], c[i] = 100, 104, 90
		if i < 10 {
			b[i], c[i] = 100.3, 100.85
		}
	}
	got := together([]order.Rotor{{Name: "a", Speed: a}, {Name: "b", Speed: b}, {Name: "c", Speed: c}}, 2)
	if len(got) != 1 || !strings.Contains(got[0], "a and b run within 0.5 Hz of each other for 10 %") {
		t.Errorf("%q", got)
	}
}

// A rotor that runs at 100 and at 120 revolutions per second meets the mode at 200 Hz with its second order half of the time, and one at 800 Hz
// of a recording at 1000 Hz, which it shows at 200 Hz, with its eighth, folded.
func TestCrossings(t *testing.T) {
	x := &kinds.Identified{Rate: 1000, Modes: []kinds.IdentifiedMode{
		{Kind: kinds.ModeStructure, Frequency: 201, Damping: 0.01}, {Kind: kinds.ModeLine, Frequency: 200, Damping: 0.01},
		{Kind: kinds.ModeStructure, Frequency: 300, Damping: 0.01}}}
	var speed []float64
	for i := range 100 {
		speed = append(speed, []float64{100, 120, 0, math.NaN()}[i%4])
	}
	x.Crossings = crossings(x, []order.Rotor{{Name: "a", Speed: speed}}, []float64{2, 8})
	if len(x.Crossings) != 2 {
		t.Fatalf("%+v", x.Crossings)
	}
	direct, folded := x.Crossings[0], x.Crossings[1]
	if direct.Mode != 0 || direct.Order != 2 || direct.Folded || direct.Share != 0.5 || math.Abs(direct.Speed-2*math.Pi*100.5) > 1e-9 {
		t.Errorf("%+v", direct)
	}
	// 8 · 100 = 800 Hz appears at 200 Hz, one that would meet 201 Hz exactly runs at 799/8.
	if folded.Mode != 0 || folded.Order != 8 || !folded.Folded || folded.Share != 0.5 || math.Abs(folded.Speed-2*math.Pi*799.0/8) > 1e-9 {
		t.Errorf("%+v", folded)
	}
	if n := crossed(x); n != 1 {
		t.Errorf("%g modes are crossed", n)
	}
	if rows := crossingTable(x).Rows; len(rows) != 2 || rows[1][1] != "8, folded" || rows[0][2] != "6030" {
		t.Errorf("%v", rows)
	}
}
