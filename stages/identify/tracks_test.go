package identify

import (
	"math"
	"strings"
	"testing"

	"hushframe/core/signal/order"
	"hushframe/stages/kinds"
)

// Two rotors within half a hertz for a tenth of the time are told, others not.
func TestTogether(t *testing.T) {
	a, b, c := make([]float64, 100), make([]float64, 100), make([]float64, 100)
	for i := range a {
		a[i], b[i], c[i] = 100, 104, 100.4
		if i < 10 {
			b[i] = 100.3
		}
		if i > 0 {
			c[i] = 90
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
