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
	r.MapSpeeds, r.ModesTo = []float64{1000, 2000}, 750
	r.Orders = []kinds.ResponseOrder{{Source: "unbalance", Order: 1, Rate: [3][]float64{{degree, 2 * degree}, {3 * degree, degree}, {0, 0}}}}
	r.Separations = []kinds.ResponseSeparation{{Lower: 1, Upper: 2, At: 148, Gap: 20, Bandwidths: 2, LowerAlone: [3]float64{1, 5, 0}, UpperAlone: [3]float64{9, 3, 0}, Amplification: [3]float64{1, 2, 1}}}
	if row := mapTable(r).Rows[0]; row[2].Text != "2.00" || row[3].Text != "19099" || row[5].Text != "9549" {
		t.Errorf("loudest lines read %+v", row)
	}
	if row := separationTable(r).Rows[0]; row[4].Text != "pitch" || row[7].Text != "+3.0" {
		t.Errorf("separation reads %+v", row)
	}
	if c := whirlChart(r); len(c.Curves) != 3 || c.Curves[0].Class != "order" || c.Curves[1].Name != "1" || len(c.Points) != 1 {
		t.Errorf("chart %+v", c)
	}
	for _, x := range []*table{spinTable(r), whirlTable(r), mapTable(r), separationTable(r)} {
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
