package contrast

import (
	"context"
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/kinds/kindstest"
)

func plank(h float64, columns int) Side {
	s := Side{Mesh: kindstest.PlankMesh(h, columns)}
	s.Modes = kindstest.PlankModes(s.Mesh, h)
	s.Response = kindstest.PlankResponse(s.Modes)
	return s
}

func run(t *testing.T, sides [2][]*artifact.Artifact, more map[string]any) (*kinds.Difference, *stage.Outcome, error) {
	t.Helper()
	arguments := stage.Arguments{"least": 0.5}
	for k, v := range more {
		arguments[k] = v
	}
	call := &stage.Call{Arguments: arguments, Inputs: map[string][]stage.Input{}, Outputs: map[string]string{"difference": t.TempDir()}, Report: silent{}}
	for k, name := range []string{"reference", "changed"} {
		for _, a := range sides[k] {
			folder := t.TempDir()
			if _, err := artifact.Write(folder, a); err != nil {
				t.Fatal(err)
			}
			call.Inputs[name] = append(call.Inputs[name], stage.Input{Folder: folder, Kind: a.Kind.Name, From: "stage.x." + a.Kind.Name})
		}
	}
	o, err := Stage{}.Run(context.Background(), call)
	if err != nil {
		return nil, nil, err
	}
	a, err := artifact.Open(call.Outputs["difference"], kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	d, err := kinds.DecodeDifference(a)
	if err != nil {
		t.Fatal(err)
	}
	return d, o, nil
}

type silent struct{}

func (silent) Progress(string, float64)        {}
func (silent) Log(stage.Level, string, ...any) {}
func (s Side) artifacts() (out []*artifact.Artifact) {
	if s.Mesh != nil {
		out = append(out, kinds.EncodeMesh(s.Mesh))
	}
	if s.Modes != nil {
		out = append(out, kinds.EncodeModes(s.Modes))
	}
	if s.Response != nil {
		out = append(out, kinds.EncodeResponse(s.Response))
	}
	if s.Properties != nil {
		out = append(out, kinds.EncodeProperties(s.Properties))
	}
	return out
}

// A plank a tenth thicker: three modes a tenth higher and a fourth too, the level by the formula of its response.
func TestStage(t *testing.T) {
	a, b := plank(2e-3, 10), plank(2.2e-3, 13)
	d, o, err := run(t, [2][]*artifact.Artifact{a.artifacts(), b.artifacts()}, nil)
	if err != nil {
		t.Fatal(err)
	}
	for name, want := range map[string]float64{"tracked": 4, "lost": 0, "new": 0, "largest_shift": 0.1} {
		if got := o.Figures[name].(float64); math.Abs(got-want) > 1e-9 {
			t.Errorf("%s is %g, want %g", name, got, want)
		}
	}
	if q := o.Figures["mass_change"].(stage.Quantity); math.Abs(q.SI-1500*0.1*0.02*0.2e-3) > 1e-12 || q.Dimension != "mass" {
		t.Errorf("mass %+v", q)
	}
	if m := d.Masses; len(m) != 1 || m[0].Name != "deck" || math.Abs(m[0].Mass[0]-6e-3) > 1e-12 || math.Abs(m[0].Mass[1]-6.6e-3) > 1e-12 {
		t.Errorf("masses %+v", m)
	}
	if least := o.Figures["least_assurance"].(float64); least < 0.999 || least > 1 {
		t.Errorf("assurance %g", least)
	}
	// The level by hand: both densities summed as rectangles on the grid of the sweep, half-weight ends.
	level := func(s Side) float64 {
		sum := 0.0
		for k, y := range s.Response.Density[1] {
			w := 0.5
			if k == 0 || k == len(s.Response.Density[1])-1 {
				w = 0.25
			}
			sum += w * y
		}
		return math.Sqrt(sum)
	}
	want := 20 * math.Log10(level(b)/level(a))
	if got := o.Figures["change_pitch"].(float64); math.Abs(got-want) > 1e-9 {
		t.Errorf("pitch changes by %g dB, want %g", got, want)
	}
	if got, same := o.Figures["change_roll"].(float64), o.Figures["change_pitch"].(float64); math.Abs(got-same) > 1e-9 { // by the same factor everywhere
		t.Errorf("roll %g, pitch %g", got, same)
	}
	if len(d.Peaks) != 4 || len(d.Bands) != 3*10 || d.SharedBefore != 1 {
		t.Errorf("%d peaks, %d bands, %g shared", len(d.Peaks), len(d.Bands), d.SharedBefore)
	}
	var said strings.Builder
	for _, s := range o.Summary {
		said.WriteString(s.Title + "\n")
	}
	if said.String() != "Modes before and after\nChange of the response\nPeaks before and after\nMass before and after\n" {
		t.Errorf("%s", said.String())
	}
	narrow, _, err := run(t, [2][]*artifact.Artifact{a.artifacts(), b.artifacts()}, map[string]any{"band": []any{stage.Quantity{SI: 100, Dimension: "frequency"}, stage.Quantity{SI: 250, Dimension: "frequency"}}})
	if err != nil || narrow.From != 100 || narrow.To != 250 || len(narrow.Peaks) != 2 {
		t.Errorf("%v, %+v", err, narrow)
	}
}

// What is only on one side is named, and masses alone can be compared.
func TestWhatIsMissing(t *testing.T) {
	a, b := plank(2e-3, 10), plank(2e-3, 10)
	a.Response, b.Response = nil, nil
	b.Mesh.Parts[0].Name, b.Modes.Masses[0].Name = "board", "board"
	d, err := Between(a, b, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(d.Modes) != 0 || len(d.Alone) != 8 || len(d.Unshared) != 2 || d.Unshared[1] != (kinds.Unshared{Side: kinds.After, Name: "board"}) {
		t.Errorf("%+v", d)
	}
	weights := func(battery float64) Side {
		return Side{Properties: &airframe.Properties{Plates: []airframe.PlateProperties{{Plate: "deck", Mass: 0.02}}, Bodies: []airframe.Body{{Name: "battery", Kind: "lump", Mass: battery}}}}
	}
	d, o, err := run(t, [2][]*artifact.Artifact{weights(0.1).artifacts(), weights(0.12).artifacts()}, nil)
	if err != nil || math.Abs(d.MassAfter-d.MassBefore-0.02) > 1e-12 || len(d.Masses) != 2 || !math.IsNaN(o.Figures["change_roll"].(float64)) {
		t.Errorf("%v, %+v", err, d)
	}
}

func TestRefusals(t *testing.T) {
	a, other := plank(2e-3, 10), plank(2e-3, 12)
	apart := plank(2e-3, 10)
	apart.Response.From, apart.Response.To = 600, 700
	for name, c := range map[string]struct {
		after []*artifact.Artifact
		more  map[string]any
		words string
	}{
		"twice":    {append(a.artifacts(), kinds.EncodeMesh(a.Mesh)), nil, "two artifacts of kind mesh"},
		"no mesh":  {[]*artifact.Artifact{kinds.EncodeModes(a.Modes)}, nil, "modes without their mesh"},
		"mismatch": {[]*artifact.Artifact{kinds.EncodeMesh(other.Mesh), kinds.EncodeModes(a.Modes)}, nil, "solved on another mesh"},
		"apart":    {apart.artifacts(), nil, "no frequency in common"},
		"band":     {a.artifacts(), map[string]any{"band": []any{stage.Quantity{SI: 100, Dimension: "frequency"}}}, "not a lower and a higher frequency"},
	} {
		_, _, err := run(t, [2][]*artifact.Artifact{a.artifacts(), c.after}, c.more)
		if fault.KindOf(err) != fault.Input || !strings.Contains(err.Error(), c.words) {
			t.Errorf("%s: %v", name, err)
		}
	}
}
