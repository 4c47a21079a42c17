package meshgen_test

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/importgeom"
	"hushframe/stages/kinds"
	"hushframe/stages/meshgen"
)

// silent drops what a stage reports.
type silent struct{}

func (silent) Progress(string, float64)        {}
func (silent) Log(stage.Level, string, ...any) {}

func folder(t *testing.T) string {
	t.Helper()
	return t.TempDir()
}

// imported runs the import stage on a frame and returns the folder of its geometry.
func imported(t *testing.T, frame string) string {
	t.Helper()
	out := map[string]string{"geometry": folder(t), "properties": folder(t)}
	_, err := importgeom.Stage{}.Run(context.Background(), &stage.Call{
		Arguments: stage.Arguments{"airframe": "airframe.hcl"}, Outputs: out, Files: stage.NewFiles(frame), Report: silent{},
	})
	if err != nil {
		t.Fatal(err)
	}
	return out["geometry"]
}

// defaults are the arguments of a job that gives only the geometry.
func defaults() stage.Arguments {
	a := stage.Arguments{}
	for _, d := range (meshgen.Stage{}).Describe().Arguments {
		if d.Default != nil {
			a[d.Name] = d.Default
		}
	}
	return a
}

func run(t *testing.T, geometry string, a stage.Arguments) (string, *stage.Outcome, error) {
	t.Helper()
	out := folder(t)
	o, err := meshgen.Stage{}.Run(context.Background(), &stage.Call{Services: alone{},
		Arguments: a, Inputs: map[string][]stage.Input{"geometry": {{Folder: geometry, Kind: "geometry"}}},
		Outputs: map[string]string{"mesh": out}, Report: silent{}, Threads: 2,
	})
	return out, o, err
}

// The demo frame by default: good triangles, and few enough unknowns. That the modes of this mesh are within 0.4 % of
// those of one with three times as many was measured once, up to 750 Hz.
func TestMeshOfSandpiper(t *testing.T) {
	geometry := imported(t, "../../jobs/sandpiper")
	out, o, err := run(t, geometry, defaults())
	if err != nil {
		t.Fatal(err)
	}
	a, err := artifact.Open(out, kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	m, err := kinds.DecodeMesh(a)
	if err != nil {
		t.Fatal(err)
	}
	if got := o.Figures["triangles"].(float64); int(got) != len(m.Triangles) || len(m.Triangles) < 3000 {
		t.Errorf("figure says %g triangles, there are %d", got, len(m.Triangles))
	}
	// Nodes of patches follow their bodies but for one drilling rotation.
	tied := map[int32]bool{}
	for _, p := range m.Patches {
		for _, n := range p.Nodes {
			tied[n] = true
		}
	}
	if unknowns := 6*(len(m.Nodes)-len(tied)) + len(tied); unknowns > 60000 {
		t.Errorf("%d unknowns by default", unknowns)
	}
	if got := o.Figures["smallest_angle"].(stage.Quantity).SI; got < 0.15 {
		t.Errorf("smallest angle %g rad", got)
	}
	declared := map[string]bool{}
	for _, f := range (meshgen.Stage{}).Describe().Figures {
		declared[f.Name] = true
		if _, ok := o.Figures[f.Name]; !ok {
			t.Errorf("figure %s is missing", f.Name)
		}
	}
	for name := range o.Figures {
		if !declared[name] {
			t.Errorf("figure %s is not declared", name)
		}
	}
	if rows := o.Summary[0].Rows; len(rows) != 9 || rows[0][0] != "bottom" || rows[7][0] != "6 standoffs" {
		t.Errorf("summary rows %v", rows)
	}
	again, _, err := run(t, geometry, defaults())
	if err != nil {
		t.Fatal(err)
	}
	if x, y := contents(t, out), contents(t, again); !reflect.DeepEqual(x, y) {
		t.Error("a second run writes other bytes")
	}
}

// alone reaches no extension.
type alone struct{ stage.Services }

func (alone) Extensions(context.Context) ([]stage.Extension, error) { return nil, nil }

func contents(t *testing.T, folder string) map[string]string {
	t.Helper()
	files := map[string]string{}
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		data, err := os.ReadFile(filepath.Join(folder, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		files[e.Name()] = string(data)
	}
	return files
}

func TestFaultsNameWhatIsToBlame(t *testing.T) {
	geometry := func(spoil func(*airframe.Geometry)) string {
		ring := outline.Loop{outline.Circle(outline.Point{}, 2e-3, false)}
		g := &airframe.Geometry{
			Plates: []airframe.Plate{{Name: "top", Thickness: 2e-3, Region: outline.NewRegion(outline.Rectangle(outline.Point{}, 40e-3, 20e-3, 0), ring),
				Frame: airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}}},
			Patches: []airframe.Patch{{Name: "clamp-1", Owner: "bolt", Shape: airframe.Disc, Radius: 3e-3}},
		}
		spoil(g)
		out := folder(t)
		if _, err := artifact.Write(out, kinds.EncodeGeometry(g)); err != nil {
			t.Fatal(err)
		}
		return out
	}
	same := func(*airframe.Geometry) {}
	mm := func(x float64) stage.Quantity { return stage.Quantity{SI: x * 1e-3, Dimension: "length"} }
	for _, c := range []struct {
		name           string
		spoil          func(*airframe.Geometry)
		argument       string
		value          any
		wantArgument   string
		wantItem, text string
	}{
		{"element of no plate", same, "elements", map[string]any{"tpo": "linear-triangle"}, "elements", "tpo", "no such plate"},
		{"no such element type", same, "elements", map[string]any{"top": "quadratic-trangle"}, "elements", "top", "there is no element type"},
		{"size of no plate", same, "sizes", map[string]any{"tpo": mm(1)}, "sizes", "tpo", "no such plate"},
		{"negative size", same, "sizes", map[string]any{"top": mm(-1)}, "sizes", "top", "must be positive"},
		{"far too small", same, "size", mm(0.003), "size", "top", "would need about"},
		{"clamp smaller than its hole", func(g *airframe.Geometry) { g.Patches[0].Radius = 1.9e-3 }, "", nil, "", "top", "no material"},
		{"outline crosses", func(g *airframe.Geometry) {
			g.Plates[0].Region.Holes[0] = outline.Loop{outline.Circle(outline.Point{Y: 9e-3}, 2e-3, false)}
		}, "", nil, "", "top", "meet at"},
	} {
		a := defaults()
		if c.argument != "" {
			a[c.argument] = c.value
		}
		_, _, err := run(t, geometry(c.spoil), a)
		var f *fault.Error
		if !errors.As(err, &f) || f.Kind != fault.Input && f.Kind != fault.Missing || f.Argument != c.wantArgument || f.Item != c.wantItem || !strings.Contains(f.Text, c.text) || f.Remedy == "" {
			t.Errorf("%s: %+v", c.name, err)
		}
	}
}
