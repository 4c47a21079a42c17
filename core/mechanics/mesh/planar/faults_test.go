package planar

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"hushframe/core/mechanics/outline"
)

func TestBadRegionsAreRefused(t *testing.T) {
	square := outline.Rectangle(pt(0, 0), 2, 2, 0)
	hole := func(x, y, r float64) outline.Loop { return disc(x, y, r).Reverse() }
	nan := math.NaN()
	for _, c := range []struct {
		name   string
		region outline.Region
		want   string
	}{
		{"empty", outline.Region{}, "the outer loop is empty"},
		{"point", outline.Region{Outer: outline.Polygon(pt(0, 0), pt(0, 0), pt(0, 0))}, "the outer loop is empty"},
		{"line", outline.Region{Outer: outline.Polygon(pt(0, 0), pt(1, 0))}, "encloses no area"},
		{"bow tie", outline.Region{Outer: outline.Polygon(pt(0, 0), pt(1, 1), pt(1, 0), pt(0, 1))}, "crosses or touches itself at (0.5, 0.5)"},
		{"open", outline.Region{Outer: outline.Loop{outline.Line(pt(0, 0), pt(1, 0)), outline.Line(pt(1, 0), pt(0, 1))}}, "is open by 1 m"},
		{"clockwise", outline.Region{Outer: square.Reverse()}, "the outer loop runs the wrong way round"},
		{"hole turned", outline.Region{Outer: square, Holes: []outline.Loop{disc(0, 0, 0.5)}}, "hole 1 runs the wrong way round"},
		{"hole outside", outline.Region{Outer: square, Holes: []outline.Loop{hole(5, 0, 0.5)}}, "hole 1 at (5.5, 0) m lies outside"},
		{"hole across", outline.Region{Outer: square, Holes: []outline.Loop{hole(1, 0, 0.5)}}, "the outer loop and hole 1 meet at"},
		{"hole touches", outline.Region{Outer: square, Holes: []outline.Loop{hole(0.5, 0, 0.5)}}, "the outer loop and hole 1 meet at (1, "},
		{"hole in hole", outline.Region{Outer: square, Holes: []outline.Loop{hole(0, 0, 0.2), hole(0, 0, 0.5)}}, "hole 1 at (0.2, 0) m lies inside hole 2"},
		{"holes cross", outline.Region{Outer: square, Holes: []outline.Loop{hole(0, 0, 0.3), hole(0.2, 0, 0.3)}}, "hole 1 and hole 2 meet at"},
		{"not a number", outline.Region{Outer: outline.Polygon(pt(0, 0), pt(1, 0), pt(1, nan), pt(0, 1))}, "empty"},
	} {
		_, err := Triangulate(c.region, Options{Size: uniform(0.3)})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: error %v, want one with %q", c.name, err, c.want)
		}
	}
	for _, h := range []float64{0, -1, nan, math.Inf(1)} {
		if _, err := Triangulate(outline.NewRegion(square), Options{Size: uniform(h)}); err == nil || !strings.Contains(err.Error(), "must be positive") {
			t.Errorf("size %g: error %v", h, err)
		}
	}
	if _, err := Triangulate(outline.NewRegion(square), Options{Size: uniform(0.3), EdgeSize: func(outline.Point, float64) float64 { return 0 }}); err == nil {
		t.Error("an edge size of zero is accepted")
	}
}

func TestMaxVerticesStops(t *testing.T) {
	m, err := Triangulate(outline.NewRegion(outline.Rectangle(pt(0, 0), 1, 1, 0)), Options{Size: uniform(1e-3), MaxVertices: 5000})
	if err != nil || m.Complete || m.Corners > 6000 {
		t.Errorf("error %v, complete %v, %d corners", err, m.Complete, m.Corners)
	}
}

// The bound on the Jacobian is below every sample and equals the least corner value when that is least.
func TestLeastJacobianAgainstSampling(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 8))
	tight := 0
	for range 2000 {
		c := [6]outline.Point{pt(0, 0), pt(1, 0.1), pt(0.3, 0.9)}
		for i := range 3 {
			c[3+i] = c[i].Lerp(c[next(i)], 0.5).Add(pt(0.3*(rng.Float64()-0.5), 0.3*(rng.Float64()-0.5)))
		}
		whole := c[1].Sub(c[0]).Cross(c[2].Sub(c[0]))
		sampled := math.Inf(1)
		const n = 24
		for i := range n + 1 {
			for j := range n + 1 - i {
				r, s := float64(i)/n, float64(j)/n
				l := 1 - r - s
				// Derivatives of the six shape functions.
				dr := [6]float64{1 - 4*l, 4*r - 1, 0, 4 * (l - r), 4 * s, -4 * s}
				ds := [6]float64{1 - 4*l, 0, 4*s - 1, -4 * r, 4 * r, 4 * (l - s)}
				var u, v outline.Point
				for k, p := range c {
					u, v = u.Add(p.Scale(dr[k])), v.Add(p.Scale(ds[k]))
				}
				sampled = math.Min(sampled, u.Cross(v)/whole)
			}
		}
		bound := leastJacobian(c)
		if bound > sampled+1e-12 {
			t.Fatalf("bound %g above the sample %g", bound, sampled)
		}
		if bound > sampled-1e-12 {
			tight++
		}
	}
	if tight < 200 {
		t.Errorf("the bound is attained only %d times", tight)
	}
	straight := [6]outline.Point{pt(0, 0), pt(2, 0), pt(0, 1), pt(1, 0), pt(1, 0.5), pt(0, 0.5)}
	if got := leastJacobian(straight); math.Abs(got-1) > 1e-15 {
		t.Errorf("straight triangle: %g, want 1", got)
	}
}

func TestWidthAcross(t *testing.T) {
	region := outline.NewRegion(outline.Rectangle(pt(0, 0), 100e-3, 12e-3, 0), disc(0, 0, 2e-3))
	w := newWidths(region)
	for _, c := range []struct {
		p, n outline.Point
		want float64
	}{
		{pt(20e-3, -6e-3), pt(0, 1), 12e-3},
		{pt(0, -6e-3), pt(0, 1), 4e-3},
		{pt(2e-3, 0), pt(1, 0), 48e-3},
		{pt(50e-3, 6e-3), pt(-math.Sqrt2/2, -math.Sqrt2/2), 12e-3 * math.Sqrt2},
	} {
		if got := w.across(c.p, c.n); math.Abs(got-c.want) > 2e-5 {
			t.Errorf("across from %v: %g m, want %g", c.p, got, c.want)
		}
	}
	if got := w.across(pt(50e-3, 0), pt(1, 0)); !math.IsInf(got, 1) {
		t.Errorf("outwards: %g m", got)
	}
}

// In a plain strip the rows run along all of both edges, at the depth asked for, with sides no longer than asked for.
func TestRowsOfStrip(t *testing.T) {
	const width, depth = 8e-3, 1e-3
	region := outline.NewRegion(outline.Rectangle(pt(0, 0), 80e-3, width, 0))
	m := must(t, region, Options{Size: uniform(5e-3), Row: func(_ outline.Point, w float64) (float64, float64) {
		if w > width*1.5 {
			return 0, 0
		}
		return depth, 3 * depth
	}})
	inRow := 0.0
	for k, n := range m.Triangles {
		p := m.Nodes[n[0]].Add(m.Nodes[n[1]]).Add(m.Nodes[n[2]]).Scale(1.0 / 3)
		if math.Abs(p.Y) > width/2-depth {
			inRow += m.area(k)
			for i := range 3 {
				if y := math.Abs(m.Nodes[n[i]].Y); math.Abs(y-width/2) > 1e-9 && math.Abs(y-(width/2-depth)) > 1e-9 && math.Abs(p.X) < 38e-3 {
					t.Errorf("a triangle of the row has a corner at %v", m.Nodes[n[i]])
				}
			}
		}
	}
	if want := 2 * 80e-3 * depth; inRow < 0.95*want || inRow > 1.001*want {
		t.Errorf("rows cover %g m², want %g", inRow, want)
	}
	for _, e := range m.Edges {
		if l := m.Nodes[e.Nodes[0]].Distance(m.Nodes[e.Nodes[2]]); l > 3.3*depth && m.Nodes[e.Nodes[1]].Y != 0 {
			if math.Abs(m.Nodes[e.Nodes[1]].X) < 39e-3 {
				t.Errorf("an edge is %g m long", l)
			}
		}
	}
}

// Rows of even depth from both sides of a corner of 70 degrees would leave next to nothing between them.
func TestRowsLeaveTightCornersAlone(t *testing.T) {
	region := outline.NewRegion(outline.Polygon(pt(0, 0), pt(30e-3, -20e-3), pt(60e-3, 0), pt(30e-3, 22e-3)))
	g := newMesher(region, Options{Size: uniform(3e-3), Row: func(outline.Point, float64) (float64, float64) { return 1e-3, 2e-3 }})
	if err := g.run(); err != nil {
		t.Fatal(err)
	}
	if count, worst := g.narrow(); count > 0 {
		t.Errorf("%d triangles are narrow without excuse, down to %.1f degrees", count, worst*180/math.Pi)
	}
	if slices.Index(g.refined, false) < 0 || slices.Equal(g.refined, g.inside) {
		t.Error("there are no rows")
	}
}

func BenchmarkTriangulatePlate(b *testing.B) {
	region, lines := plate()
	triangles := 0
	for b.Loop() {
		m, err := Triangulate(region, Options{Size: uniform(2e-3), Lines: lines})
		if err != nil {
			b.Fatal(err)
		}
		triangles += len(m.Triangles)
	}
	b.ReportMetric(float64(triangles)/b.Elapsed().Seconds(), "triangles/s")
}

func BenchmarkTriangulateLarge(b *testing.B) {
	region := outline.NewRegion(outline.Rectangle(pt(0, 0), 1, 1, 0.1), disc(0.1, 0.1, 0.2))
	triangles := 0
	for b.Loop() {
		m, err := Triangulate(region, Options{Size: uniform(4e-3)})
		if err != nil {
			b.Fatal(err)
		}
		triangles += len(m.Triangles)
	}
	b.ReportMetric(float64(triangles)/b.Elapsed().Seconds(), "triangles/s")
}
