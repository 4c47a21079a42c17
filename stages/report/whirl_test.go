package report

import (
	"math"
	"testing"

	"hushframe/stages/kinds"
)

func TestTablesOfSpinningRotors(t *testing.T) {
	r := &kinds.Response{To: 500, Spinning: true, Speeds: []float64{0, 1000, 2000},
		Rotors: []kinds.ResponseRotor{{Rotor: "a", Hover: 1000, Speed: 1000, Polar: 6e-6, Tilt: 4e-6, Equal: 239}, {Rotor: "b", Hover: 1000, Speed: 1000, Polar: 6e-6, Tilt: math.NaN(), Equal: math.NaN()}},
		Whirl: []kinds.ResponseWhirl{
			{Mode: 1, Frequency: []float64{150, 148, 140}, Damping: []float64{0.01, 0.02, 0.03}, Direction: []float64{0, -0.4, -0.8}},
			{Mode: 2, Frequency: []float64{700, 700, 700}, Damping: []float64{0.01, 0.02, 0.03}, Direction: []float64{0, 0, 0}},
		},
		Critical: []kinds.ResponseCritical{{Order: 1, Rotors: []string{"a", "b"}, Speed: 930, Mode: 1}, {Order: 3, Rotors: []string{"a"}, Speed: 312, Mode: 1}, {Order: 1, Speed: 5, Mode: 2}},
	}
	for _, x := range []*table{spinTable(r), whirlTable(r)} {
		for _, row := range x.Rows {
			if len(row) != len(x.Columns) {
				t.Errorf("%s: %d cells under %d columns", x.Title, len(row), len(x.Columns))
			}
		}
	}
	rows := whirlTable(r).Rows
	if len(rows) != 1 {
		t.Fatalf("%d modes, want the one within the sweep", len(rows))
	}
	for i, want := range []string{"1", "150.0", "148.0", "140.0", "2.00", "−0.40", "1: 8881, 3 of a: 2979"} {
		if got := rows[0][i].Text; got != want {
			t.Errorf("column %d reads %q, want %q", i, got, want)
		}
	}
	if got := spinTable(r).Rows[1][3].Text; got != "–" {
		t.Errorf("unknown tilt inertia reads %q", got)
	}
}
