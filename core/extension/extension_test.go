package extension

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// near reaches a tool in this process the way one in another is reached.
func near(tool stage.Tool) Caller { return tool.Call }

func triangles(t *testing.T, count int) *element.Batch {
	t.Helper()
	ply := laminate.Ply{Material: laminate.Material{E1: 60e9, E2: 9e9, G12: 4e9, Nu12: 0.3, G13: 4e9, G23: 3e9, Density: 1500}, Thickness: 2e-3, Angle: 0.3}
	plies := []laminate.Ply{ply, {Material: ply.Material, Thickness: 1e-3, Angle: 1.2}}
	s, err := laminate.Stack(plies)
	if err != nil {
		t.Fatal(err)
	}
	in := &element.Batch{Sections: []laminate.Section{s}, Layups: [][]laminate.Ply{plies}, Section: make([]int32, count), Threads: 2}
	for e := range count {
		x := 1e-3 * float64(e)
		corners := [3][2]float64{{x, 0}, {x + 4e-3, 1e-3}, {x + 1e-3, 3e-3}}
		for _, c := range corners {
			in.Nodes = append(in.Nodes, c[0], c[1], 0)
		}
		for i := range 3 {
			a, b := corners[i], corners[(i+1)%3]
			in.Nodes = append(in.Nodes, (a[0]+b[0])/2, (a[1]+b[1])/2, 0)
		}
	}
	return in
}

// What crosses the boundary comes back bit for bit.
func TestElementCrossesWhole(t *testing.T) {
	ctx, here := context.Background(), FromType(shell.QuadraticTriangle())
	there := RemoteElement(here.Describe(), near(ElementTool(here)), t.TempDir())
	bound, err := Bind(ctx, there, nil)
	if err != nil {
		t.Fatal(err)
	}
	if want := shell.QuadraticTriangle().Describe(); !reflect.DeepEqual(bound.Describe(), want) {
		t.Errorf("it says %+v, want %+v", bound.Describe(), want)
	}
	const count = 7
	in, d := triangles(t, count), bound.Describe()
	want, got := element.NewMatrices(count, d.Unknowns()), element.NewMatrices(count, d.Unknowns())
	if err := here.Matrices(ctx, nil, in, want); err != nil {
		t.Fatal(err)
	}
	if err := bound.Matrices(ctx, in, got); err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(got, want) {
		t.Error("the matrices differ")
	}
	motions := make([]float64, 2*count*d.Unknowns())
	for i := range motions {
		motions[i] = math.Sin(float64(i))
	}
	a, b := make([]float64, 2*count*element.Kinds), make([]float64, 2*count*element.Kinds)
	if err := here.Energies(ctx, nil, in, motions, a); err != nil {
		t.Fatal(err)
	}
	if err := bound.Energies(ctx, in, motions, b); err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(a, b) || a[0] == 0 {
		t.Error("the energies differ")
	}
	// A bad element is found by its index, also in a later part of the batch.
	copy(in.Nodes[18*5:], make([]float64, 18))
	var shape *element.ShapeError
	if err := bound.Matrices(ctx, in, got); !errors.As(err, &shape) || shape.Element != 5 {
		t.Errorf("a flat element gives %v", err)
	}
}

func TestLayupsCross(t *testing.T) {
	in := triangles(t, 3)
	in.Sections = append(in.Sections, in.Sections[0])
	in.Layups = append(in.Layups, in.Layups[0][:1])
	in.Section[2] = 1
	out, err := decodeBatch(encodeBatch(batchKind, in), 6, 2)
	if err != nil || !reflect.DeepEqual(in, out) {
		t.Errorf("%v\nin  %+v\nout %+v", err, in, out)
	}
}

// Each lie of an element type gives a fault that names it.
func TestElementLies(t *testing.T) {
	ctx := context.Background()
	write := func(kind artifact.Kind, change func(a *artifact.Artifact)) Caller {
		return func(_ context.Context, r stage.ExtensionRequest) error {
			a := artifact.New(kind)
			change(a)
			return artifact.WriteUnsealed(r.Out, a)
		}
	}
	matrices := func(stiffness, mass [][]float64) Caller {
		return write(matricesKind, func(a *artifact.Artifact) { a.Table("matrices").Set("stiffness", stiffness).Set("mass", mass) })
	}
	full := func(v float64) []float64 {
		r := make([]float64, element.Packed(36))
		for i := range r {
			r[i] = v
		}
		return r
	}
	in := triangles(t, 1)
	for name, c := range map[string]struct {
		call Caller
		want string
	}{
		"nothing":    {func(context.Context, stage.ExtensionRequest) error { return nil }, "its answer cannot be read: there is no artifact.json"},
		"other kind": {write(energiesKind, func(*artifact.Artifact) {}), `its answer is of kind "element-energies", not "element-matrices"`},
		"none":       {matrices(nil, nil), "1 elements were asked for, it gave 0"},
		"short":      {matrices([][]float64{{1}}, [][]float64{full(1)}), "row 0 of stiffness has 1 values, 666 are due"},
		"not finite": {matrices([][]float64{full(1)}, [][]float64{full(math.NaN())}), "the mass of element 0 is not finite"},
		"oversized": {func(_ context.Context, r stage.ExtensionRequest) error {
			return os.Truncate(touch(t, filepath.Join(r.Out, "matrices.arrow")), 3<<30)
		}, "it wrote 3072 MiB, where 1 MiB are the most"},
		"ill-typed": {func(_ context.Context, r stage.ExtensionRequest) error {
			if err := os.WriteFile(filepath.Join(r.Out, "matrices.arrow"), []byte("stiff"), 0o644); err != nil {
				return err
			}
			return os.WriteFile(filepath.Join(r.Out, artifact.ManifestName), []byte(`{"kind":"element-matrices","version":1,"tables":{"matrices":{}}}`), 0o644)
		}, "the file is no Arrow file or was cut short"},
	} {
		e := RemoteElement(stage.Extension{Kind: ElementKind, Name: "brick"}, c.call, t.TempDir())
		err := e.Matrices(ctx, nil, in, element.NewMatrices(1, 36))
		if fault.KindOf(err) != fault.Protocol || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), "element brick") {
			t.Errorf("%s: %v, want %s", name, err, c.want)
		}
	}
	for want, points := range map[string][]element.Point{
		"point 0 stands on node 9 of 6":           {{Node: 9}},
		"point 0 lies at height 1.5":              {{Node: 0, Height: 1.5}},
		"point 1 is there twice":                  {{Node: 0, Height: 1}, {Node: 0, Height: 1}},
		"node 0 carries 1 points; two at least":   {{Node: 0, Height: 1}},
		"has 201 points":                          make([]element.Point, 201),
		"it stands on 4 nodes; an element stands": nil,
	} {
		nodes := 6
		if points == nil {
			nodes = 4
		}
		e := RemoteElement(stage.Extension{Kind: ElementKind, Name: "brick"}, func(_ context.Context, r stage.ExtensionRequest) error {
			return artifact.WriteUnsealed(r.Out, encodeShape(element.Description{Nodes: nodes, Points: points}))
		}, t.TempDir())
		if _, err := e.Shape(ctx, nil); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("shape: %v, want %s", err, want)
		}
	}
}

func touch(t *testing.T, path string) string {
	t.Helper()
	if err := os.WriteFile(path, nil, 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

// counting delivers rows of which each column holds its number, in batches of a given size.
type counting struct{ rows, size int }

func (counting) Describe() stage.Extension {
	return stage.Extension{Kind: ReaderKind, Name: "counting"}
}

func (counting) Inspect(context.Context, io.Reader, stage.Arguments) (recording.Header, error) {
	return recording.Header{Rate: 100, Timed: true, Notes: []string{"counted"},
		Columns: []recording.Column{{Name: "gx", Unit: "deg/s"}, {Name: "note", Text: true}}}, nil
}

func (c counting) Read(_ context.Context, _ io.Reader, _ stage.Arguments, q recording.Request, sink func(recording.Batch) error) error {
	if c.rows == 0 {
		return &recording.Error{Byte: 12, Text: "there is no row", Remedy: "fly longer"}
	}
	values, times := make([]float64, c.size), make([]float64, c.size)
	for at := 0; at < c.rows; at += c.size {
		n := min(c.size, c.rows-at)
		b := recording.Batch{First: int64(at + 1), Time: times[:n], Origin: 5}
		for i := range n {
			values[i], times[i] = float64(at+i), float64(at+i)/100
		}
		values[0] = math.NaN()
		for range q.Columns {
			b.Values = append(b.Values, values[:n])
		}
		if at+n == c.rows {
			b.Notes = []string{"the last row is cut"}
			b.Findings = []recording.Finding{{What: "stuck", Where: "gx", Extent: "rows 3 to 7", Consequence: "nothing is heard there"}}
		}
		if err := sink(b); err != nil {
			return err
		}
	}
	return nil
}

func TestReaderCrossesWhole(t *testing.T) {
	ctx := context.Background()
	path := touch(t, filepath.Join(t.TempDir(), "r"))
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	hear := func(r Reader) (out []string, err error) {
		h, err := r.Inspect(ctx, file, nil)
		if err != nil {
			return nil, err
		}
		out = append(out, fmt.Sprintf("%+v", h))
		err = r.Read(ctx, file, nil, recording.Request{Columns: []string{"gx", "note"}}, func(b recording.Batch) error {
			out = append(out, fmt.Sprintf("%+v", b))
			return nil
		})
		return out, err
	}
	here := counting{10, 4}
	there := RemoteReader(here.Describe(), near(ReaderTool(here)), t.TempDir())
	want, _ := hear(here)
	got, err := hear(there)
	if err != nil || !reflect.DeepEqual(got, want) || len(want) != 4 {
		t.Errorf("%v\ngot  %q\nwant %q", err, got, want)
	}
	// An error of the caller comes back as it is, one of the recording with its place.
	stop := errors.New("enough")
	if err := there.Read(ctx, file, nil, recording.Request{Columns: []string{"gx"}}, func(recording.Batch) error { return stop }); err != stop {
		t.Errorf("the caller's error came back as %v", err)
	}
	_, err = hear(RemoteReader(here.Describe(), near(ReaderTool(counting{})), t.TempDir()))
	if f := fault.From(err); f.Kind != fault.Input || f.Place != "byte 12" || f.Remedy != "fly longer" {
		t.Errorf("the error of the recording came back as %+v", f)
	}
}

func TestReaderLies(t *testing.T) {
	file, err := os.Open(touch(t, filepath.Join(t.TempDir(), "r")))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	for want, g := range map[string]gathered{
		"there is no row and no error":                   {},
		"batch 0 has 2 rows from row 5; row 1 is due":    {first: []int64{5}, rows: []int64{2}, origin: []float64{0}, time: [][]float64{{0, 1}}},
		"batch 0 has 1 times for 2 rows":                 {first: []int64{1}, rows: []int64{2}, origin: []float64{0}, time: [][]float64{{0}}},
		`batch 0 has no values of column "gx"`:           {first: []int64{1}, rows: []int64{2}, origin: []float64{0}, time: [][]float64{{0, 1}}},
		`batch 0 has 1 values of column "gx" for 2 rows`: {first: []int64{1}, rows: []int64{2}, origin: []float64{0}, time: [][]float64{{0, 1}}, batch: []int64{0}, column: []int64{0}, values: [][]float64{{1}}},
		"1 rows of values belong to no batch":            {batch: []int64{0}, column: []int64{0}, values: [][]float64{{1}}},
		"batch 0 has -1 rows from row 1; row 1 is due":   {first: []int64{1}, rows: []int64{-1}, origin: []float64{0}, time: [][]float64{{}}},
		`the column name "" is empty or there twice`:     {},
		"the rate is -1 Hz":                              {},
	} {
		header := recording.Header{Columns: []recording.Column{{Name: "gx"}}}
		switch {
		case strings.Contains(want, "column name"):
			header.Columns[0].Name = ""
		case strings.Contains(want, "rate"):
			header.Rate = -1
		}
		r := RemoteReader(stage.Extension{Kind: ReaderKind, Name: "tape"}, func(_ context.Context, q stage.ExtensionRequest) error {
			if q.Method == "inspect" {
				return artifact.WriteUnsealed(q.Out, encodeHeader(header))
			}
			return artifact.WriteUnsealed(q.Out, g.encode())
		}, t.TempDir())
		_, err := r.Inspect(context.Background(), file, nil)
		if err == nil {
			err = r.Read(context.Background(), file, nil, recording.Request{Columns: []string{"gx"}, Time: "t"}, func(recording.Batch) error { return nil })
		}
		if fault.KindOf(err) != fault.Protocol || !strings.Contains(err.Error(), want) || !strings.Contains(err.Error(), "reader tape") {
			t.Errorf("%v, want %s", err, want)
		}
	}
}
