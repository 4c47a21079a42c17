package importgeom

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

var frame = filepath.Join("..", "..", "testdata", "geometry", "frame")

// hashes gives the content hashes of both artifacts.
func hashes(t *testing.T, call *stage.Call) (geometry, properties string) {
	t.Helper()
	g, err := artifact.ReadManifest(call.Outputs["geometry"])
	if err != nil {
		t.Fatal(err)
	}
	p, err := artifact.ReadManifest(call.Outputs["properties"])
	if err != nil {
		t.Fatal(err)
	}
	return g.Hash, p.Hash
}

func imported(t *testing.T, folder string, with map[string]any) (*stage.Outcome, *stage.Call) {
	t.Helper()
	out, call, err := run(t, folder, "airframe.hcl", with)
	if err != nil {
		t.Fatal(err)
	}
	return out, call
}

func TestOutcome(t *testing.T) {
	out, call := imported(t, frame, nil)
	d := Stage{}.Describe()
	for _, f := range d.Figures {
		v, ok := out.Figures[f.Name]
		if !ok {
			t.Errorf("figure %s is declared and not reported", f.Name)
			continue
		}
		q, amount := v.(stage.Quantity)
		if amount != (f.Type.Kind == stage.Amount) || amount && q.Dimension != f.Type.Dimension {
			t.Errorf("figure %s is %v, declared %+v", f.Name, v, f.Type)
		}
	}
	if len(out.Figures) != len(d.Figures) {
		t.Errorf("%d figures are reported, %d declared", len(out.Figures), len(d.Figures))
	}
	// 183.18 g by hand, see the masses in the tests of assemble; the structure is all but rotors, battery and gyro.
	total, structure := out.Figures["total_mass"].(stage.Quantity).SI, out.Figures["structure_mass"].(stage.Quantity).SI
	if math.Abs(total-183.18e-3) > 5e-6 || math.Abs(total-structure-140e-3) > 1e-12 {
		t.Errorf("total %g kg, structure %g kg", total, structure)
	}
	for name, want := range map[string]float64{"plates": 4, "standoffs": 4, "bolts": 4, "bodies": 4, "rotors": 2, "parts": 12} {
		if out.Figures[name] != want {
			t.Errorf("%s is %v, want %g", name, out.Figures[name], want)
		}
	}
	registry := kinds.Registry()
	a, err := artifact.Open(call.Outputs["geometry"], registry)
	if err != nil {
		t.Fatal(err)
	}
	g, err := kinds.DecodeGeometry(a)
	if err != nil {
		t.Fatal(err)
	}
	if a, err = artifact.Open(call.Outputs["properties"], registry); err != nil {
		t.Fatal(err)
	}
	p, err := kinds.DecodeProperties(a)
	if err != nil {
		t.Fatal(err)
	}
	if len(g.Plates) != 4 || len(g.Bolts) != 4 || len(p.Rotors) != 2 || p.Gyro.Body != "stack" || p.DeclaredMass != 0.19 {
		t.Errorf("read back %d plates, %d bolts, %d rotors, gyro %q", len(g.Plates), len(g.Bolts), len(p.Rotors), p.Gyro.Body)
	}
	var used []string
	for _, u := range call.Files.Used() {
		used = append(used, u.Path)
	}
	if got := strings.Join(used, " "); got != "airframe.hcl cut/arm.dxf cut/base.dxf cut/top.dxf" {
		t.Errorf("files used: %s", got)
	}
	if len(out.Warnings) != 2 || out.Warnings[0].ID != "import.faces-bare" || out.Warnings[1].ID != "import.mass-differs" {
		t.Errorf("warnings %+v", out.Warnings)
	}
}

// What a change touches: a loss factor only the properties, a vertex and a thickness the geometry too; the same input
// gives the same bytes.
func TestWhatChanges(t *testing.T) {
	_, call := imported(t, frame, nil)
	g, p := hashes(t, call)
	_, call = imported(t, frame, nil)
	if g2, p2 := hashes(t, call); g2 != g || p2 != p {
		t.Error("the same input gave other artifacts")
	}
	_, call = imported(t, frame, map[string]any{"loss_factor": 0.02})
	if g2, p2 := hashes(t, call); g2 != g || p2 == p {
		t.Errorf("a loss factor: geometry changed %v, properties changed %v", g2 != g, p2 != p)
	}
	_, call = imported(t, frame, map[string]any{"arm_thickness": stage.Quantity{SI: 4.5e-3, Dimension: "length"}})
	if g2, p2 := hashes(t, call); g2 == g || p2 == p {
		t.Error("a thickness changed nothing")
	}
	moved := t.TempDir()
	if err := os.CopyFS(moved, os.DirFS(frame)); err != nil {
		t.Fatal(err)
	}
	cut := filepath.Join(moved, "cut", "top.dxf")
	text, err := os.ReadFile(cut)
	if err != nil {
		t.Fatal(err)
	}
	text = []byte(strings.ReplaceAll(string(text), " 10\n40\n 20\n20\n", " 10\n40.1\n 20\n20\n"))
	text = []byte(strings.ReplaceAll(string(text), " 11\n40\n 21\n20\n", " 11\n40.1\n 21\n20\n"))
	if err := os.WriteFile(cut, text, 0o644); err != nil {
		t.Fatal(err)
	}
	_, call = imported(t, moved, nil)
	if g2, _ := hashes(t, call); g2 == g {
		t.Error("a moved vertex changed nothing")
	}
}

func TestMissingAirframeAndCancel(t *testing.T) {
	_, _, err := run(t, frame, "airfram.hcl", nil)
	if f := fault.From(err); err == nil || f.Kind != fault.Missing || f.Argument != "airframe" || f.Item != "airfram.hcl" {
		t.Errorf("%+v", err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	call := &stage.Call{Arguments: stage.Arguments{"airframe": "airframe.hcl"}, Outputs: map[string]string{"geometry": t.TempDir(), "properties": t.TempDir()},
		Files: stage.NewFiles(frame), Report: quiet{}}
	if _, err := (Stage{}).Run(ctx, call); fault.KindOf(err) != fault.Cancelled {
		t.Errorf("stopped on request: %v", err)
	}
}
