package report

import (
	"math"
	"strings"
	"testing"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// flown is the sample with a map over rotor speed, modes found in flight and a chain of filters.
func flown(t *testing.T) *content {
	c := sampleContent(t)
	for k := range 3 {
		row := kinds.SpectraMapRow{Axis: 0, Against: kinds.MapRotorSpeed, Unit: "rad/s", Centre: 1000 + 100*float64(k), Low: 950 + 100*float64(k), High: 1050 + 100*float64(k), Segments: 4, Step: 2}
		for bin := range 500 {
			row.Density = append(row.Density, 1e-9*(1+float64(bin)))
		}
		row.Density[301+k] = 1e-3 // a narrow line that must not be lost where bins are drawn together
		c.spectra.Maps = append(c.spectra.Maps, row)
	}
	n := 600
	density := make([]float64, n)
	for k := range density {
		density[k] = 1e-6 * (1 + float64(k))
	}
	c.identified = &kinds.Identified{From: 80, To: 500, Start: 8, End: 60, Rate: 2000, Order: 40, Step: 1, Segments: 9,
		Channels: []kinds.IdentifiedChannel{{Axis: "roll", Quantity: "angular rate", Column: "gx"}},
		Modes:    []kinds.IdentifiedMode{{Kind: kinds.ModeStructure, Frequency: 141.2, FrequencyError: 0.1, Damping: 0.011, Direction: []float64{1}, Models: 0.8}},
		Diagram:  []kinds.IdentifiedPole{{Order: 10, Frequency: 141, Damping: 0.01, Stable: true}, {Order: 12, Frequency: 300, Mode: -1}},
		Singular: [][]float64{density}, Densities: []kinds.IdentifiedDensity{{Axis: "roll", Before: density, After: density}},
		Tracks:    []kinds.RotorTrack{{Rotor: "fr", Source: kinds.TrackRecorded, Time: []float64{8, 9, 10}, Speed: []float64{1600, 0, 1620}}},
		Crossings: []kinds.OrderCrossing{{Mode: 0, Rotor: "fr", Order: 1, Speed: 887, Share: 0.25}}}
	c.filtered = &kinds.Filtered{Rate: 2000, Bandwidth: 40, From: 80, To: 500, Delay: 8e-4, Lag: 0.2, Chosen: true, Met: true, Target: degree,
		Filters: []kinds.FilteredFilter{{Name: "low-pass 120 Hz", Frequency: 120, Delay: 8e-4, Buys: []float64{3}}},
		Curves:  []kinds.FilteredCurve{{Frequency: 100, Power: 1}, {Frequency: 200, Power: 0.1}},
		Axes:    []kinds.FilteredAxis{{Axis: "roll", Observed: []float64{square, 2 * square}, ObservedAfter: []float64{square, 0.2 * square}, ObservedRMS: degree, ObservedLeft: degree / 2}},
		Notes:   []string{"a note of the filter"}}
	return c
}

func (c *content) chart(t *testing.T, id string) *draw.Chart {
	t.Helper()
	for _, ch := range c.charts {
		if ch.ID == id {
			return ch
		}
	}
	t.Fatalf("no chart %s", id)
	return nil
}

func TestChartsOfAFlight(t *testing.T) {
	c := flown(t)
	page, d := render(t, c)
	for _, want := range []string{`id="identified"`, `id="maps"`, `id="filters"`, "was chosen to leave at most 1 deg/s on every axis, and does", "late by 0.80 ms", "a note of the filter",
		`data-chart="map-roll-rotor-speed"`, `data-chart="plane-1"`, `data-chart="orders-removed-roll"`, "Which rotors make each peak", "What makes each peak"} {
		if !strings.Contains(page, want) {
			t.Errorf("%q is missing", want)
		}
	}
	if csv := string(d.Files["page-tables/orders-crossing-modes.csv"]); !strings.Contains(csv, "\n141.2,fr,1,8470.22607,25,\n") {
		t.Errorf("crossings read %s", csv)
	}
	// The map keeps its narrow line in the cell where it lies, at its value within a step of the scale.
	g := c.chart(t, "map-roll-rotor-speed").Grid
	columns := len(g.X) - 1
	if columns != 3 || math.Abs(g.X[0]-950/rpm) > 1e-9 || math.Abs(g.High-1e-3/square) > 1e-9*g.High {
		t.Fatalf("map of %d columns from %g rpm, up to %g", columns, g.X[0], g.High)
	}
	for k := range columns {
		line := 2 * float64(301+k)
		for row := range len(g.Y) - 1 {
			loud := g.Value(g.Cells[row*columns+k]) > 0.9*g.High
			if holds := line >= g.Y[row] && line < g.Y[row+1]; loud != holds {
				t.Errorf("column %d, %g to %g Hz: loud %v", k, g.Y[row], g.Y[row+1], loud)
			}
		}
	}
	if s := c.chart(t, "stabilisation"); len(s.Points) != 2 || s.Points[0].Class != "firm" || s.Points[1].Class != "loose" || s.Points[1].Y != 12 || len(s.Marks) != 1 {
		t.Errorf("stabilisation %+v", s.Points)
	}
	if s := c.chart(t, "singular-values").Curves[0]; math.Abs(s.Y[9]-1e-5/square) > 1e-9/square || s.X[9] != 9 {
		t.Errorf("singular value %g at %g", s.Y[9], s.X[9])
	}
	if s := c.chart(t, "rotor-speeds").Curves[0]; math.Abs(s.Y[0]-1600/rpm) > 1e-9 || !math.IsNaN(s.Y[1]) {
		t.Errorf("speeds %v", s.Y)
	}
	if s := c.chart(t, "filtered-roll"); len(s.Curves) != 2 || math.Abs(s.Curves[1].Y[1]-0.2) > 1e-12 {
		t.Errorf("behind the filter %+v", s.Curves)
	}
	if s := c.chart(t, "filter-gain").Curves[0]; math.Abs(s.Y[1]+10) > 1e-9 {
		t.Errorf("gain of %g dB, want −10", s.Y[1])
	}
	// The loop of a peak goes through the value of the transfer function there.
	p := c.response.Peaks[0]
	for _, x := range c.response.Transfer {
		if x.Rotor == p.Rotor && x.Component == p.Component && x.Axis == p.Axis {
			q, found := c.chart(t, "plane-1").Points[0], false
			for k := range x.Real {
				found = found || x.Real[k]/degree == q.X && x.Imaginary[k]/degree == q.Y && math.Abs(c.response.Frequency[k]-p.Frequency) < 1
			}
			if !found {
				t.Errorf("the loop of %s at %.1f Hz is marked at %g%+gi", p.Axis, p.Frequency, q.X, q.Y)
			}
		}
	}
}

// What is said at the top is what the tables hold.
func TestFindings(t *testing.T) {
	c := sampleContent(t)
	said := map[string]string{}
	for _, f := range findings(c) {
		said[f.Word] = f.Meaning
	}
	for word, want := range map[string]string{
		"What rings":           "7 modes between 80 and 500 Hz, from 141.3 to 466.0 Hz",
		"Where rotors meet it": "within 15 % of hover speed order 1 meets mode 5",
	} {
		if said[word] != want {
			t.Errorf("%s: %q, want %q", word, said[word], want)
		}
	}
	if !strings.Contains(said["What the gyro feels"], "pitch most at 232.1 Hz (mode 4)") || !strings.Contains(said["Where a change acts"], "mode 4 works in twist of clamp") ||
		!strings.Contains(said["What the flight said"], "9 predicted peaks found again") {
		t.Errorf("findings %v", said)
	}
	if f := findings(&content{}); len(f) > 0 {
		t.Errorf("of nothing it is said %v", f)
	}
}
