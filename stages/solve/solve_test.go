package solve_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/solve"
)

// quiet takes progress and log lines.
type quiet struct{ t testing.TB }

func (quiet) Progress(string, float64) {}
func (q quiet) Log(_ stage.Level, text string, fields ...any) {
	q.t.Log(append([]any{text}, fields...)...)
}

// keeper keeps folders by key and counts how often it had to make one.
type keeper struct {
	folder string
	kept   map[string]string
	made   int
}

func (k *keeper) Keep(_ context.Context, key string, make func(string) error) (string, bool, error) {
	if f, ok := k.kept[key]; ok {
		return f, true, nil
	}
	f, err := os.MkdirTemp(k.folder, "kept")
	if err != nil {
		return "", false, err
	}
	k.made++
	if err := make(f); err != nil {
		return "", false, err
	}
	k.kept[key] = f
	return f, false, nil
}
func (*keeper) Element(context.Context, string, stage.ExtensionRequest) error { return nil }
func (*keeper) Reader(context.Context, string, stage.ExtensionRequest) error  { return nil }
func (*keeper) Extensions(context.Context) ([]stage.Extension, error)         { return nil, nil }

// bench runs the stage on artifacts of its own.
type bench struct {
	t      *testing.T
	folder string
	keep   *keeper
	truths map[string]bool
	texts  map[string]string
	memory int64
	stage  solve.Stage
	export string // folder of the matrices of the last run
}

func (b *bench) matrices() string {
	b.t.Helper()
	folder, err := os.MkdirTemp(b.folder, "matrices")
	if err != nil {
		b.t.Fatal(err)
	}
	b.export = folder
	return folder
}

func newBench(t *testing.T) *bench {
	folder := t.TempDir()
	return &bench{t: t, folder: folder, keep: &keeper{folder: folder, kept: map[string]string{}}}
}

func (b *bench) write(a *artifact.Artifact) stage.Input {
	b.t.Helper()
	folder, err := os.MkdirTemp(b.folder, "in")
	if err != nil {
		b.t.Fatal(err)
	}
	if _, err := artifact.Write(folder, a); err != nil {
		b.t.Fatal(err)
	}
	return stage.Input{Folder: folder, Kind: a.Kind.Name, Hash: a.Hash()}
}

// run returns the outcome and the folder of the modes.
func (b *bench) run(m *mesh.Mesh, p *airframe.Properties, threads int, set map[string]float64) (*stage.Outcome, string, error) {
	b.t.Helper()
	out, err := os.MkdirTemp(b.folder, "out")
	if err != nil {
		b.t.Fatal(err)
	}
	arguments := stage.Arguments{}
	for _, a := range (solve.Stage{}).Describe().Arguments {
		if a.Default != nil {
			arguments[a.Name] = a.Default
		}
	}
	for name, v := range set {
		arguments[name] = stage.Quantity{SI: v, Dimension: "frequency"}
	}
	for name, v := range b.truths {
		arguments[name] = v
	}
	for name, v := range b.texts {
		arguments[name] = v
	}
	outcome, err := b.stage.Run(context.Background(), &stage.Call{
		Arguments: arguments,
		Inputs:    map[string][]stage.Input{"mesh": {b.write(kinds.EncodeMesh(m))}, "properties": {b.write(kinds.EncodeProperties(p))}},
		Outputs:   map[string]string{"modes": out, "matrices": b.matrices()}, Threads: threads, Memory: b.memory, Report: quiet{b.t}, Services: b.keep,
	})
	return outcome, out, err
}

func modesIn(t *testing.T, folder string) *kinds.Modes {
	t.Helper()
	a, err := artifact.Open(folder, kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	m, err := kinds.DecodeModes(a)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func figure(t *testing.T, o *stage.Outcome, name string) float64 {
	t.Helper()
	switch v := o.Figures[name].(type) {
	case stage.Quantity:
		return v.SI
	case float64:
		return v
	}
	t.Fatalf("figure %s is %v", name, o.Figures[name])
	return 0
}

// sameFiles compares two folders byte for byte.
func sameFiles(t *testing.T, a, b string) bool {
	t.Helper()
	entries, err := os.ReadDir(a)
	if err != nil || len(entries) == 0 {
		t.Fatalf("%s: %v, %d files", a, err, len(entries))
	}
	for _, e := range entries {
		x, errX := os.ReadFile(filepath.Join(a, e.Name()))
		y, errY := os.ReadFile(filepath.Join(b, e.Name()))
		if errX != nil || errY != nil {
			t.Fatal(errX, errY)
		}
		if string(x) != string(y) {
			return false
		}
	}
	return true
}

// The whole stage on a small quadrotor: what it reports hangs together, equal input gives equal bytes
// whatever the threads, and only what stiffness and mass depend on solves again.
func TestSolve(t *testing.T) {
	b := newBench(t)
	m, p := known.Airframe(0.015)
	set := map[string]float64{"up_to": 600, "swept_to": 400}
	o, folder, err := b.run(m, p, 2, set)
	if err != nil {
		t.Fatal(err)
	}
	modes := modesIn(t, folder)

	// Every declared figure is reported, and nothing else.
	described := map[string]bool{}
	for _, f := range (solve.Stage{}).Describe().Figures {
		described[f.Name] = true
		if _, ok := o.Figures[f.Name]; !ok {
			t.Errorf("figure %s is declared and not reported", f.Name)
		}
	}
	for name := range o.Figures {
		if !described[name] {
			t.Errorf("figure %s is not declared", name)
		}
	}
	sum := 0.0
	for _, row := range modes.Masses {
		sum += row.Mass
	}
	if math.Abs(sum-modes.Mass) > 1e-9 || figure(t, o, "mass") != modes.Mass {
		t.Errorf("masses add up to %g of %g kg", sum, modes.Mass)
	}
	if !(modes.RigidRatio < 1e-3) || !modes.Proved {
		t.Errorf("rigid ratio %g, proved %v", modes.RigidRatio, modes.Proved)
	}
	if n := figure(t, o, "modes_wanted"); n != figure(t, o, "modes_below") || n < 8 {
		t.Errorf("%g modes wanted to 600 Hz, %g found", n, figure(t, o, "modes_below"))
	}
	for axis, name := range kinds.AxisNames {
		top := 0.0
		for _, x := range modes.Survey.Modes {
			top = max(top, x.Strength[axis])
		}
		if figure(t, o, "strength_"+name) != top || !(top > 0) {
			t.Errorf("strength on %s is %g, the strongest mode has %g", name, figure(t, o, "strength_"+name), top)
		}
		if g, ok := modes.Survey.SmallestGap(axis); ok != !math.IsInf(figure(t, o, "smallest_gap_"+name), 1) || ok && g.Width != figure(t, o, "smallest_gap_"+name) {
			t.Errorf("smallest gap on %s is %g, not %v", name, figure(t, o, "smallest_gap_"+name), g)
		}
	}
	if len(o.Summary) < 2 || len(o.Summary[0].Rows) != len(modes.Survey.Modes) {
		t.Errorf("the summary has %d tables", len(o.Summary))
	}
	if len(o.Warnings) != 0 {
		t.Errorf("warnings: %+v", o.Warnings)
	}

	// Again, from what was kept: the same bytes. From nothing with other threads: the same bytes.
	_, again, err := b.run(m, p, 2, set)
	if err != nil || b.keep.made != 1 {
		t.Fatalf("%v; solved %d times", err, b.keep.made)
	}
	fresh := newBench(t)
	_, other, err := fresh.run(m, p, 1, set)
	if err != nil {
		t.Fatal(err)
	}
	if !sameFiles(t, folder, again) || !sameFiles(t, folder, other) {
		t.Error("equal input gives other bytes")
	}

	// Loss factors, unbalance, speeds, blades, the swept range: all answered without solving.
	q := *p
	q.Materials = append([]airframe.Material(nil), p.Materials...)
	q.Materials[0].LossFactor *= 2
	q.Rotors = append([]airframe.Rotor(nil), p.Rotors...)
	for i := range q.Rotors {
		q.Rotors[i].HoverSpeed, q.Rotors[i].Grade, q.Rotors[i].Blades = 1400, 0.002, 2
	}
	q.Floor = 0.002
	q.Bodies = append([]airframe.Body(nil), p.Bodies...)
	for i := range q.Bodies {
		if m := q.Bodies[i].Mount; m != nil { // another law and loss, the same for all components as before
			lossy := *m
			lossy.Loss = [6]float64{0.3, 0.3, 0.3, 0.3, 0.3, 0.3}
			lossy.Law = airframe.Law{Kind: airframe.Fractional, Reference: 100, Order: 0.4}
			lossy.Preload, lossy.Origin = 3, "elsewhere"
			q.Bodies[i].Mount = &lossy
		}
	}
	_, folder2, err := b.run(m, &q, 2, map[string]float64{"up_to": 600, "swept_to": 380})
	if err != nil || b.keep.made != 1 {
		t.Fatalf("%v; solved %d times", err, b.keep.made)
	}
	damped := modesIn(t, folder2)
	lossier, weaker := false, false
	for i, x := range modes.Survey.Modes {
		y := damped.Survey.Modes[i]
		if y.Frequency != x.Frequency || y.Loss < x.Loss {
			t.Errorf("mode %d: %g Hz with loss %g, was %g Hz with %g", i+1, y.Frequency, y.Loss, x.Frequency, x.Loss)
		}
		lossier = lossier || y.Loss > 1.5*x.Loss
		weaker = weaker || y.Strength[1] < 0.7*x.Strength[1]
	}
	if !lossier || !weaker || damped.Survey.Modes[0].Meetings[2].Order != 2 {
		t.Error("a changed loss factor or blade number has no effect")
	}
	// Stiffness solves again.
	q.Materials[0].E1 *= 1.1
	if _, _, err := b.run(m, &q, 2, set); err != nil || b.keep.made != 2 {
		t.Errorf("%v; solved %d times", err, b.keep.made)
	}
}

func TestWarnings(t *testing.T) {
	b := newBench(t)
	m, p := known.Airframe(0.03)
	p.DeclaredMass = 0.5
	p.Floor = 0
	for i := range p.Materials {
		p.Materials[i].LossFactor = 0
	}
	for i := range p.Joints {
		p.Joints[i].LossFactor = 0
	}
	for i := range p.Bodies {
		if p.Bodies[i].Mount != nil {
			p.Bodies[i].Mount.Loss = [6]float64{}
		}
	}
	o, _, err := b.run(m, p, 2, map[string]float64{"up_to": 400, "swept_to": 400})
	if err != nil {
		t.Fatal(err)
	}
	seen := map[string]bool{}
	for _, w := range o.Warnings {
		if seen[w.ID] {
			t.Errorf("warning %s twice", w.ID)
		}
		seen[w.ID] = true
		if w.Remedy == "" || w.Text == "" {
			t.Errorf("warning %s without text or remedy", w.ID)
		}
	}
	for _, id := range []string{"solve.short-of-sweep", "solve.mass", "solve.undamped"} {
		if !seen[id] {
			t.Errorf("no warning %s among %v", id, seen)
		}
	}
}

func TestFaults(t *testing.T) {
	for want, spoil := range map[string]func(*mesh.Mesh, *airframe.Properties, map[string]float64){
		`material "glass"`:          func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) { p.Materials[1].G12 = 0 },
		"not connected to the rest": func(m *mesh.Mesh, _ *airframe.Properties, _ map[string]float64) { m.Links = m.Links[:4] },
		"stack": func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) {
			p.Bodies[5].Mount.Points = p.Bodies[5].Mount.Points[:1]
		},
		"where the sweep has ended":         func(_ *mesh.Mesh, _ *airframe.Properties, set map[string]float64) { set["gaps_from"] = 500 },
		`body "battery": its mass is -85 g`: func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) { p.Bodies[4].Mass *= -1 },
		`body "stack": its mass is 0 g`:     func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) { p.Bodies[5].Mass = 0 },
		`joint "tail joint": stiffness of component rz is 0`: func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) {
			p.Joints[0].Stiffness[5] = 0
		},
		`"tail" moves all but freely, resisted by "tail joint" alone`: func(m *mesh.Mesh, p *airframe.Properties, _ map[string]float64) {
			m.Links, p.Bolts = m.Links[:len(m.Links)-1], p.Bolts[:1]
			p.Joints[0].Stiffness[5] = 1e-6
		},
		`"battery" moves all but freely, resisted by "strap" alone`: func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) {
			p.Bodies[4].Mount.Points = weak(p.Bodies[4].Mount.Points)
		},
		"rotor rl: its body \"x\"": func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) { p.Rotors[1].Body = "x" },
		"gyro: its body \"x\"":     func(_ *mesh.Mesh, p *airframe.Properties, _ map[string]float64) { p.Gyro.Body = "x" },
		"there is no element type": func(m *mesh.Mesh, _ *airframe.Properties, _ map[string]float64) { m.Parts[1].Element = "square" },
	} {
		b := newBench(t)
		m, p := known.Airframe(0.03)
		set := map[string]float64{"up_to": 300, "swept_to": 200}
		spoil(m, p, set)
		_, out, err := b.run(m, p, 2, set)
		var f *fault.Error
		if !errors.As(err, &f) || !strings.Contains(f.Error(), want) || f.Kind == fault.Internal {
			t.Errorf("got %v, want a fault about %s", err, want)
		}
		if entries, _ := os.ReadDir(out); len(entries) != 0 {
			t.Errorf("%s: a result was written all the same", want)
		}
	}
}

// weak leaves a mount that resists, but by next to nothing.
func weak(points []airframe.MountPoint) []airframe.MountPoint {
	out := append([]airframe.MountPoint(nil), points...)
	for i := range out {
		for c := range out[i].Stiffness {
			out[i].Stiffness[c] *= 1e-9
		}
	}
	return out
}

// On request every frequency gets an error, from a solution that is kept by itself.
func TestErrorEstimate(t *testing.T) {
	b := newBench(t)
	m, p := known.Airframe(0.03)
	set := map[string]float64{"up_to": 400, "swept_to": 260}
	o, folder, err := b.run(m, p, 2, set)
	if err != nil {
		t.Fatal(err)
	}
	if !math.IsInf(figure(t, o, "largest_error"), 1) || len(modesIn(t, folder).Survey.MeshErrors) != 0 {
		t.Errorf("errors without asking: %g", figure(t, o, "largest_error"))
	}
	b.truths = map[string]bool{"estimate_error": true}
	o, folder, err = b.run(m, p, 2, set)
	if err != nil || b.keep.made != 2 {
		t.Fatalf("%v; solved %d times", err, b.keep.made)
	}
	s := modesIn(t, folder).Survey
	if len(s.MeshErrors) != len(s.Modes) {
		t.Errorf("%d of %d modes have an error", len(s.MeshErrors), len(s.Modes))
	}
	worst := 0.0
	for _, e := range s.MeshErrors {
		f := s.Modes[e.Mode-1].Frequency
		if !(e.Error > 0) || !(e.Other < f) {
			t.Errorf("mode %d at %g Hz has %+v: a finer mesh is softer", e.Mode, f, e)
		}
		if f <= 400 {
			worst = max(worst, e.Error/f)
		}
	}
	if got := figure(t, o, "largest_error"); got != worst || !(got < 0.05) {
		t.Errorf("largest error %g, want %g", got, worst)
	}
	table := o.Summary[0]
	if last := table.Columns[len(table.Columns)-1].Name; last != "mesh error, %" || len(table.Rows[0]) != len(table.Columns) {
		t.Errorf("the mode table ends with %q", last)
	}
}

// A run that is granted little memory says what the mesh would need, before it tries.
func TestMemoryIsAskedFor(t *testing.T) {
	b := newBench(t)
	b.memory = 1 << 20
	m, p := known.Airframe(0.03)
	_, _, err := b.run(m, p, 1, nil)
	var f *fault.Error
	if !errors.As(err, &f) || f.Kind != fault.Limit || f.Argument != "mesh" || !strings.Contains(f.Text, "0.0 GB are granted") || b.keep.made != 0 && len(b.keep.kept) != 0 {
		t.Errorf("got %v", err)
	}
}

// A limit in another unit, or a frame as soft as foil, asks for thousands of modes: that is said, not tried.
func TestAbsurdlyManyModesAreRefused(t *testing.T) {
	b := newBench(t)
	m, p := known.Airframe(0.03)
	_, _, err := b.run(m, p, 1, map[string]float64{"up_to": 750e3, "swept_to": 200})
	var f *fault.Error
	if !errors.As(err, &f) || f.Kind != fault.Limit || f.Argument != "up_to" || !strings.Contains(f.Text, "at most 1000 are looked for") || f.Remedy == "" {
		t.Errorf("got %v", err)
	}
}

// The matrices as text: what is read back is symmetric, K does not resist a displacement of everything and M
// weighs the frame by it.
func TestMatrices(t *testing.T) {
	b := newBench(t)
	m, p := known.Airframe(0.03)
	b.texts = map[string]string{"matrices": "out/stiffness.mtx"}
	o, _, err := b.run(m, p, 2, map[string]float64{"up_to": 300, "swept_to": 200})
	if err != nil {
		t.Fatal(err)
	}
	a, err := artifact.Open(b.export, kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	n := int(a.Int("unknowns"))
	names := a.Table("unknowns").Texts("unknown")
	x := make([]float64, n)
	for i, what := range names {
		if strings.HasSuffix(what, "displacement along z") {
			x[i] = 1
		}
	}
	square := func(file string) (energy, size float64) {
		lines := strings.Split(strings.TrimSpace(string(a.Files[file])), "\n")
		if lines[0] != "%%MatrixMarket matrix coordinate real symmetric" {
			t.Fatalf("%s begins with %q", file, lines[0])
		}
		for len(lines) > 0 && lines[0][0] == '%' {
			lines = lines[1:]
		}
		var rows, columns, entries int
		if _, err := fmt.Sscan(lines[0], &rows, &columns, &entries); err != nil || rows != n || columns != n || entries != len(lines)-1 {
			t.Fatalf("%s: %q for %d unknowns, %d lines", file, lines[0], n, len(lines))
		}
		for _, line := range lines[1:] {
			var i, j int
			var v float64
			if _, err := fmt.Sscan(line, &i, &j, &v); err != nil || i < j {
				t.Fatalf("%s: %q", file, line)
			}
			twice := 2.0
			if i == j {
				twice = 1
			}
			energy += twice * v * x[i-1] * x[j-1]
			size += math.Abs(v * x[i-1] * x[j-1])
		}
		return energy, size
	}
	if e, size := square("stiffness.mtx"); !(math.Abs(e) < 1e-9*size) {
		t.Errorf("a displacement along z costs %g of %g", e, size)
	}
	if e, _ := square("mass.mtx"); math.Abs(e-figure(t, o, "mass")) > 1e-9 {
		t.Errorf("the mass matrix weighs %g kg, the model %g", e, figure(t, o, "mass"))
	}
}
