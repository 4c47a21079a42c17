package mesh_test

import (
	"context"
	"errors"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/outline"
)

// level is the frame of a plate in the airframe's x-y plane.
var level = airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}

func at(x, y float64) outline.Point { return outline.Point{X: x, Y: y} }

// small is a frame of two plates, one of them flipped over and turned, with a bolt and a standoff.
func small() *airframe.Geometry {
	const hole, clamp = 1.6e-3, 3e-3
	ring := func(x, y float64) outline.Loop { return outline.Loop{outline.Circle(at(x, y), hole, false)} }
	s, c := math.Sincos(0.3)
	disc := func(name string, plate int, x, y float64) airframe.Patch {
		return airframe.Patch{Name: name, Owner: "bolt", Plate: plate, Shape: airframe.Disc, Centre: at(x, y), Radius: clamp}
	}
	return &airframe.Geometry{
		Plates: []airframe.Plate{
			{Name: "base", Thickness: 2e-3, Frame: level,
				Region: outline.NewRegion(outline.Rectangle(at(0, 0), 60e-3, 40e-3, 0), ring(-20e-3, 0), ring(20e-3, 0))},
			{Name: "lid", Thickness: 3e-3, Frame: airframe.Frame{
				Origin: airframe.Vec{0.01, 0.02, 0.03}, X: airframe.Vec{c, s, 0}, Y: airframe.Vec{s, -c, 0}, Z: airframe.Vec{0, 0, -1}},
				Region: outline.NewRegion(outline.Rectangle(at(0, 0), 50e-3, 10e-3, 0), ring(-20e-3, 0))},
		},
		Patches: []airframe.Patch{
			disc("base-left", 0, -20e-3, 0), disc("lid-left", 1, -20e-3, 0), disc("base-right", 0, 20e-3, 0),
			{Name: "pad", Owner: "battery", Plate: 1, Shape: airframe.Rectangle, Centre: at(22e-3, 0), Width: 10e-3, Height: 6e-3, Turn: 0.1},
		},
		Bolts:     []airframe.Bolt{{Name: "b", Group: "g", Patches: []int{0, 1}, Point: airframe.Vec{1, 2, 3}, Axis: airframe.Vec{0, 0, 1}}},
		Standoffs: []airframe.Standoff{{Name: "post", Patches: [2]int{2, 3}, Ends: [2]airframe.Vec{{0.02, 0, 1e-3}, {0.02, 0, 0.0215}}, Outer: 5e-3, Inner: 2.6e-3}},
	}
}

func build(t *testing.T, g *airframe.Geometry, o mesh.Options) *mesh.Mesh {
	t.Helper()
	m, err := mesh.Build(context.Background(), g, o)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

var plain = mesh.Options{Size: 4e-3, Element: "quadratic-triangle"}

func TestBuildPutsPlatesInSpace(t *testing.T) {
	g := small()
	m := build(t, g, plain)
	if len(m.Parts) != 3 || m.Parts[0].Name != "base" || m.Parts[1].Name != "lid" || !m.Parts[2].Standoff || m.Parts[2].Outer != 5e-3 {
		t.Fatalf("parts %+v", m.Parts)
	}
	if !slices.IsSorted(m.TrianglePart) {
		t.Error("triangles are not sorted by part")
	}
	area := make([]float64, 2)
	for k, n := range m.Triangles {
		f := &g.Plates[m.TrianglePart[k]].Frame
		var d [3]airframe.Vec
		for i := range 3 {
			for c := range 3 {
				d[i][c] = m.Nodes[n[i]][c] - f.Origin[c]
			}
			if off := dot(d[i], f.Z); math.Abs(off) > 1e-15 {
				t.Fatalf("a node is %g m off the mid-surface", off)
			}
		}
		var u, v airframe.Vec
		for c := range 3 {
			u[c], v[c] = d[1][c]-d[0][c], d[2][c]-d[0][c]
		}
		// Counterclockwise seen from the plate's own +z, also when that points down.
		twice := f.Z[2] * (u[0]*v[1] - u[1]*v[0])
		if twice <= 0 {
			t.Fatalf("triangle %d is turned over", k)
		}
		area[m.TrianglePart[k]] += twice / 2
	}
	for i, want := range []float64{g.Plates[0].Region.Area(), g.Plates[1].Region.Area()} {
		if math.Abs(area[i]/want-1) > 5e-3 { // chords across the holes
			t.Errorf("plate %d has %g m² of triangles, want %g", i, area[i], want)
		}
	}
	length := make([]float64, 2)
	for k, e := range m.Edges {
		a, b := m.Nodes[e[0]], m.Nodes[e[2]]
		length[m.EdgePart[k]] += math.Hypot(math.Hypot(a[0]-b[0], a[1]-b[1]), a[2]-b[2])
	}
	for i, p := range g.Plates {
		want := 0.0
		for _, l := range p.Region.Loops() {
			want += l.Length()
		}
		if math.Abs(length[i]/want-1) > 5e-3 {
			t.Errorf("the edges of plate %d are %g m long, want %g", i, length[i], want)
		}
	}
}

func dot(a, b airframe.Vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func TestBuildFindsPatchesAndLinks(t *testing.T) {
	g := small()
	m := build(t, g, plain)
	for k := range g.Patches {
		p, q := &g.Patches[k], &m.Patches[k]
		f := &g.Plates[p.Plate].Frame
		if q.Name != p.Name || q.Owner != p.Owner || int(q.Part) != p.Plate || !slices.IsSorted(q.Nodes) {
			t.Fatalf("patch %d is %+v", k, q)
		}
		in := map[int32]bool{}
		for _, n := range q.Nodes {
			in[n] = true
		}
		rim := 0
		for n, v := range m.Nodes {
			var d airframe.Vec
			for c := range 3 {
				d[c] = v[c] - f.Origin[c]
			}
			x, y := dot(d, f.X)-p.Centre.X, dot(d, f.Y)-p.Centre.Y
			// How far inside the outline, in the units of the shape.
			r := p.Radius - math.Hypot(x, y)
			if p.Shape == airframe.Rectangle {
				s, c := math.Sincos(p.Turn)
				r = math.Min(p.Width/2-math.Abs(c*x+s*y), p.Height/2-math.Abs(c*y-s*x))
			}
			onPlate := math.Abs(dot(d, f.Z)) < 1e-12 && partOf(m, int32(n)) == q.Part
			if onPlate && math.Abs(r) < 1e-9 {
				rim++
			}
			if onPlate && math.Abs(r) > 1e-9 && in[int32(n)] != (r > 0) {
				t.Fatalf("patch %s: node %d, %g m inside, belongs to it: %v", p.Name, n, r, in[int32(n)])
			}
			if !onPlate && in[int32(n)] {
				t.Fatalf("patch %s has node %d of another part", p.Name, n)
			}
		}
		if rim < 12 {
			t.Errorf("patch %s: only %d nodes on its outline", p.Name, rim)
		}
	}
	want := []mesh.Link{
		{Name: "post", Kind: "standoff", Patches: []int32{2, 3}, Nodes: []int32{m.Beams[0][0], m.Beams[len(m.Beams)-1][1]}, Point: airframe.Vec{0.02, 0, 0.01125}, Axis: airframe.Vec{0, 0, 1}},
		{Name: "b", Group: "g", Kind: "bolt", Patches: []int32{0, 1}, Point: airframe.Vec{1, 2, 3}, Axis: airframe.Vec{0, 0, 1}},
	}
	if !reflect.DeepEqual(m.Links, want) {
		t.Errorf("links %+v, want %+v", m.Links, want)
	}
	if f := m.Parts[2].Frame; f.Z != (airframe.Vec{0, 0, 1}) || f.X != (airframe.Vec{1, 0, 0}) || f.Y != (airframe.Vec{0, 1, 0}) {
		t.Errorf("frame of the standoff %+v", f)
	}
	for k := 1; k < len(m.Beams); k++ {
		if m.Beams[k][0] != m.Beams[k-1][1] || m.BeamPart[k] != 2 {
			t.Errorf("beam %d does not follow the one below", k)
		}
	}
	if a, b := m.Nodes[m.Beams[0][0]], m.Nodes[m.Beams[len(m.Beams)-1][1]]; a != g.Standoffs[0].Ends[0] || b != g.Standoffs[0].Ends[1] {
		t.Errorf("the standoff runs from %v to %v", a, b)
	}
}

// partOf finds the part of a node by its triangles and beams.
func partOf(m *mesh.Mesh, n int32) int32 {
	for k, t := range m.Triangles {
		if slices.Contains(t[:], n) {
			return m.TrianglePart[k]
		}
	}
	for k, b := range m.Beams {
		if b[0] == n || b[1] == n {
			return m.BeamPart[k]
		}
	}
	return -1
}

func TestThreadsChangeNothing(t *testing.T) {
	one, many := plain, plain
	many.Threads = 4
	last := 0
	many.Progress = func(done, total int) {
		if done != last+1 || total != 2 {
			t.Errorf("progress %d of %d after %d", done, total, last)
		}
		last = done
	}
	if !reflect.DeepEqual(build(t, small(), one), build(t, small(), many)) {
		t.Error("four threads give another mesh than one")
	}
	if last != 2 {
		t.Errorf("progress ended at %d", last)
	}
}

func TestSizesAndElementsOfSinglePlates(t *testing.T) {
	o := plain
	o.Sizes = map[string]float64{"lid": 1.5e-3}
	o.Elements = map[string]string{"base": "linear-triangle"}
	a, b := build(t, small(), plain), build(t, small(), o)
	if b.Parts[0].Element != "linear-triangle" || b.Parts[1].Element != "quadratic-triangle" {
		t.Errorf("elements %s and %s", b.Parts[0].Element, b.Parts[1].Element)
	}
	for part := range int32(2) {
		if p, q := a.Quality(part, 0).Triangles, b.Quality(part, 0).Triangles; q < 3*p/2 {
			t.Errorf("part %d: %d triangles, then %d", part, p, q)
		}
	}
}

func TestQuality(t *testing.T) {
	v := func(x, y float64) airframe.Vec { return airframe.Vec{x, 0, y} }
	m := &mesh.Mesh{
		Nodes:        []airframe.Vec{v(0, 0), v(2, 0), v(0, 2), v(10, 1)},
		Parts:        make([]mesh.Part, 2),
		Triangles:    [][6]int32{{0, 1, 2}, {1, 3, 2}, {2, 0, 1}, {0, 1, 3}},
		TrianglePart: []int32{0, 0, 0, 1},
	}
	q := m.Quality(0, 20*math.Pi/180)
	want := math.Atan2(1, 8) + math.Atan2(1, 10) // at (10, 1), between (2, 0) and (0, 2)
	if q.Triangles != 3 || q.Narrow != 1 || math.Abs(q.SmallestAngle-want) > 1e-12 || q.ShortestSide != 2 {
		t.Errorf("quality %+v, smallest angle should be %g", q, want)
	}
}

func TestBuildSaysWhatIsWrong(t *testing.T) {
	for _, c := range []struct {
		name  string
		spoil func(g *airframe.Geometry, o *mesh.Options)
		want  mesh.Problem
	}{
		{"size", func(_ *airframe.Geometry, o *mesh.Options) { o.Size = 0 }, mesh.Problem{Size: true, Text: "must be positive"}},
		{"size of plate", func(_ *airframe.Geometry, o *mesh.Options) { o.Sizes = map[string]float64{"lid": -1} }, mesh.Problem{Part: "lid", Size: true, Text: "must be positive"}},
		{"no such plate", func(_ *airframe.Geometry, o *mesh.Options) { o.Elements = map[string]string{"roof": "x"} }, mesh.Problem{Part: "roof", Unknown: true, Text: "no such plate"}},
		{"patch beside", func(g *airframe.Geometry, _ *mesh.Options) { g.Patches[3].Centre.X = 1 }, mesh.Problem{Part: "lid", Patch: "pad", Text: "no material"}},
		{"clamp in its hole", func(g *airframe.Geometry, _ *mesh.Options) { g.Patches[0].Radius = 1.6e-3 }, mesh.Problem{Part: "base", Patch: "base-left", Text: "no material"}},
		{"crossing outline", func(g *airframe.Geometry, _ *mesh.Options) {
			g.Plates[1].Region.Outer = outline.Polygon(at(0, 0), at(1, 1), at(1, 0), at(0, 1))
		}, mesh.Problem{Part: "lid", Text: "crosses or touches itself"}},
	} {
		g, o := small(), plain
		c.spoil(g, &o)
		_, err := mesh.Build(context.Background(), g, o)
		var p *mesh.Problem
		if !errors.As(err, &p) || p.Part != c.want.Part || p.Patch != c.want.Patch || p.Size != c.want.Size || p.Unknown != c.want.Unknown ||
			!strings.Contains(p.Error(), c.want.Text) {
			t.Errorf("%s: %v", c.name, err)
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := mesh.Build(ctx, small(), plain); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
}

func BenchmarkBuild(b *testing.B) {
	g := small()
	for b.Loop() {
		if _, err := mesh.Build(context.Background(), g, plain); err != nil {
			b.Fatal(err)
		}
	}
}

// Elements larger than the frame leave patches and outlines as they are.
func TestHugeElementsKeepTheGeometry(t *testing.T) {
	fine, huge := build(t, small(), plain), build(t, small(), mesh.Options{Size: 1, Element: "quadratic-triangle"})
	for k := range fine.Patches {
		if a, b := extent(fine, k), extent(huge, k); math.Abs(a/b-1) > 1e-3 {
			t.Errorf("patch %s reaches %g m from its middle, %g m with huge elements", fine.Patches[k].Name, a, b)
		}
	}
}

// extent is the distance of the farthest node of a patch from its centre.
func extent(m *mesh.Mesh, patch int) float64 {
	far := 0.0
	for _, n := range m.Patches[patch].Nodes {
		var d airframe.Vec
		for c := range d {
			d[c] = m.Nodes[n][c] - m.Patches[patch].Centre[c]
		}
		far = max(far, math.Sqrt(dot(d, d)))
	}
	return far
}
