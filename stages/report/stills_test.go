package report

import (
	"context"
	"math"
	"strings"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/contrast"
	"hushframe/stages/kinds"
	"hushframe/stages/kinds/kindstest"
)

// planks is the difference of two planks, the second half as thick again.
func planks(t *testing.T) *kinds.Difference {
	t.Helper()
	var sides [2]contrast.Side
	for k, h := range []float64{2e-3, 3e-3} {
		sides[k].Mesh = kindstest.PlankMesh(h, 10)
		sides[k].Modes = kindstest.PlankModes(sides[k].Mesh, h)
		sides[k].Response = kindstest.PlankResponse(sides[k].Modes)
	}
	d, err := contrast.Between(sides[0], sides[1], contrast.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func TestDifferenceOnThePage(t *testing.T) {
	d := planks(t)
	page, doc := render(t, &content{difference: d})
	for _, want := range []string{`id="difference"`, "Modes that both have", "&#43;50.0", "its like may lie above what was solved", "bending of deck", "total", "&#43;3.00", "roll: −3.1 dB in all"} {
		if !strings.Contains(page, want) {
			t.Errorf("%q is missing", want)
		}
	}
	tables := map[string]int{}
	for _, x := range doc.Tables {
		tables[strings.TrimSuffix(strings.TrimPrefix(x.File, "page-tables/"), ".csv")] = x.Rows
	}
	for name, rows := range map[string]int{"change-of-level": 30, "modes-followed": 3, "modes-lost-and-new": 1, "peaks-before-and-after": 4, "mass-before-and-after": 2} {
		if tables[name] != rows {
			t.Errorf("%s has %d rows, want %d", name, tables[name], rows)
		}
	}
	d.Modes[0].Part, d.Masses[0].Name = "<script>alert(1)</script>", "<img src=x>"
	page, _ = render(t, &content{difference: d})
	if strings.Contains(page, "<script>alert") || strings.Contains(page, "<img") {
		t.Error("a name is not escaped")
	}
}

// Every chart of the page is written in every format asked for, with those that only stand on paper; nothing else changes.
func TestStills(t *testing.T) {
	c := sampleContent(t)
	c.difference = planks(t)
	_, d := render(t, c)
	if len(c.charts) < 5 {
		t.Fatalf("the page has %d charts", len(c.charts))
	}
	got := map[string]bool{}
	for _, s := range stills(c) {
		if got[s.name] {
			t.Errorf("%s is drawn twice", s.name)
		}
		got[s.name] = true
	}
	for _, ch := range c.charts {
		if !got[ch.ID] {
			t.Errorf("%s of the page is not drawn", ch.ID)
		}
	}
	for _, name := range []string{"response-roll", "response-pitch", "energy", "change-roll", "change-pitch"} {
		if !got[name] {
			t.Errorf("%s is not drawn", name)
		}
	}
	if got["change-yaw"] {
		t.Error("a chart of nothing is drawn")
	}
	files := len(d.Files)
	if err := addStills(d, c, []string{"svg", "png"}); err != nil {
		t.Fatal(err)
	}
	if len(d.Files) != files+2*len(got) || len(d.Files["page-charts/energy.png"]) < 1000 || !strings.Contains(string(d.Files["page-charts/response-roll.svg"]), "95 % confidence") ||
		!strings.Contains(string(d.Files["page-charts/response-roll.svg"]), "Gyro rate on roll") {
		t.Errorf("%d files became %d with %d charts", files, len(d.Files), len(got))
	}
	if err := addStills(d, c, []string{"svg"}); err == nil {
		t.Error("pictures of one name were written over each other")
	}
}

// A line ends where the modes carry it no further, and one that no one would see is left out.
func TestLinesChart(t *testing.T) {
	r := &kinds.Response{ModesTo: 750, MapSpeeds: []float64{1000, 2000, 4000}, Rotors: []kinds.ResponseRotor{{Rotor: "fr", Hover: 1500, Speed: 1500}}, Orders: []kinds.ResponseOrder{
		{Source: "unbalance", Order: 1, Rate: [3][]float64{{0.1, 0.2, 0.3}, {1, 2, 3}, {0, 0, 0}}},
		{Source: "blade passing", Order: 3, Rate: [3][]float64{{1e-9, 1e-9, 1e-9}, {4, 5, 6}, {0, 0, 0}}},
		{Source: "blade passing", Order: 1.5, Rate: [3][]float64{{1e-9, 1e-9, 1e-9}, {4, 5, 6}, {0, 0, 0}}},
	}}
	if got := linesChart(r, 0).Curves; len(got) != 1 || len(got[0].X) != 2 || math.Abs(got[0].X[1]-2000*30/math.Pi) > 1e-9 || math.Abs(got[0].Y[1]-0.2*180/math.Pi) > 1e-12 {
		t.Errorf("%+v", got) // order 1 at 4000 rad/s is 637 Hz, above 500
	}
	if got := linesChart(r, 1).Curves; len(got) != 2 { // order 3 reaches 477 Hz at the lowest speed alone
		t.Errorf("%+v", got)
	}
}

func TestChartsArgument(t *testing.T) {
	page := func(charts ...any) (*kinds.Document, error) {
		folder := t.TempDir()
		if _, err := artifact.Write(folder, kinds.EncodeDifference(planks(t))); err != nil {
			t.Fatal(err)
		}
		call := &stage.Call{Arguments: stage.Arguments{"to": "out/page.html", "charts": charts}, Outputs: map[string]string{"document": t.TempDir()}, Report: quiet{},
			Inputs: map[string][]stage.Input{"include": {{Folder: folder, Kind: "difference", From: "stage.x.difference"}}}}
		if charts == nil {
			delete(call.Arguments, "charts")
		}
		if _, err := (Stage{}).Run(context.Background(), call); err != nil {
			return nil, err
		}
		a, err := artifact.Open(call.Outputs["document"], kinds.Registry())
		if err != nil {
			t.Fatal(err)
		}
		return kinds.DecodeDocument(a)
	}
	for name, charts := range map[string][]any{"unknown": {"gif"}, "twice": {"svg", "svg"}} {
		if _, err := page(charts...); fault.KindOf(err) != fault.Input || fault.From(err).Argument != "charts" {
			t.Errorf("%s: %v", name, err)
		}
	}
	without, err := page()
	if err != nil {
		t.Fatal(err)
	}
	with, err := page("svg")
	if err != nil || len(with.Files) != len(without.Files)+2 || with.Files["page-charts/change-roll.svg"] == nil {
		t.Errorf("%d files became %d, %v", len(without.Files), len(with.Files), err)
	}
}

type quiet struct{}

func (quiet) Progress(string, float64)        {}
func (quiet) Log(stage.Level, string, ...any) {}
