package planar

import (
	"math"
	"reflect"
	"testing"

	"hushframe/core/mechanics/outline"
)

func uniform(h float64) func(outline.Point) float64 { return func(outline.Point) float64 { return h } }

// side is side i of a six-node triangle as a curve.
func (m *Mesh) side(n [6]int32, i int) outline.Curve {
	p, q, c := m.Nodes[n[i]], m.Nodes[n[next(i)]], m.Nodes[n[3+i]]
	k := c.Scale(2).Sub(p.Add(q).Scale(0.5))
	return outline.Cubic(p, p.Lerp(k, 2.0/3), q.Lerp(k, 2.0/3), q)
}

func (m *Mesh) area(k int) float64 {
	n := m.Triangles[k]
	return outline.Loop{m.side(n, 0), m.side(n, 1), m.side(n, 2)}.Area()
}

// checkMesh asserts what holds for every mesh.
func checkMesh(t *testing.T, region outline.Region, m *Mesh) {
	t.Helper()
	type shared struct {
		mid   int32
		count int
	}
	sides := map[[2]int32]*shared{}
	area := 0.0
	for k, n := range m.Triangles {
		var c [6]outline.Point
		for i, v := range n {
			c[i] = m.Nodes[v]
		}
		if least := leastJacobian(c); !(least > 0.01) {
			t.Errorf("triangle %d at %v: Jacobian down to %.3g of its mean", k, c[0], least)
		}
		area += m.area(k)
		for i := range 3 {
			a, b := n[i], n[next(i)]
			if int(a) >= m.Corners || int(n[3+i]) < m.Corners {
				t.Fatalf("triangle %d: corner and mid-side nodes are mixed up", k)
			}
			s := sides[[2]int32{min(a, b), max(a, b)}]
			if s == nil {
				s = &shared{mid: n[3+i]}
				sides[[2]int32{min(a, b), max(a, b)}] = s
			}
			if s.count++; s.count > 2 || s.mid != n[3+i] {
				t.Fatalf("side %d-%d is not shared properly", a, b)
			}
		}
	}
	edges := 0
	for _, s := range sides {
		if s.count == 1 {
			edges++
		}
	}
	loops := region.Loops()
	perLoop := make([]outline.Loop, len(loops))
	tol := 1e-7 * region.Bounds().Diagonal()
	for _, e := range m.Edges {
		s := sides[[2]int32{min(e.Nodes[0], e.Nodes[2]), max(e.Nodes[0], e.Nodes[2])}]
		if s == nil || s.count != 1 || s.mid != e.Nodes[1] {
			t.Fatal("a boundary edge is not a free side")
		}
		c := loops[e.Loop][e.Curve]
		for i, v := range e.Nodes {
			if _, d := c.Nearest(m.Nodes[v]); d > tol && (i != 1 || m.Straightened == 0) {
				t.Errorf("node %d is %g m off its curve", v, d)
			}
		}
		perLoop[e.Loop] = append(perLoop[e.Loop], m.side([6]int32{e.Nodes[0], e.Nodes[2], 0, e.Nodes[1]}, 0))
	}
	if edges != len(m.Edges) {
		t.Errorf("%d free sides but %d boundary edges", edges, len(m.Edges))
	}
	total := 0.0
	for i, l := range loops {
		// The material is on the left, so the edges of a loop add up to its area.
		got := 0.0
		for _, c := range perLoop[i] {
			got += c.AreaTerm()
		}
		total += got
		// A parabola through the ends and the middle of an eighth of a circle leaves out 8e-4 of the circle's area, one of
		// a twelfth 1.6e-4; straight sides leave out nothing. Cubics may bend more at one end of a side than at the other.
		share := 1e-12
		for _, c := range l {
			share = math.Max(share, [...]float64{outline.KindLine: 0, outline.KindArc: 8e-4, outline.KindCubic: 1.5e-3}[c.Kind])
		}
		if math.Abs(got-l.Area()) > share*math.Abs(l.Area())+tol*tol {
			t.Errorf("the edges of loop %d enclose %g m², the loop %g", i, got, l.Area())
		}
	}
	if math.Abs(area-total) > 1e-12*area+1e-18 {
		t.Errorf("triangles cover %g m², their edges enclose %g", area, total)
	}
	if got, want := m.Corners-len(sides)+len(m.Triangles), 1-len(region.Holes); got != want {
		t.Errorf("Euler number %d, want %d", got, want)
	}
	if len(m.Nodes) != m.Corners+len(sides) {
		t.Errorf("%d nodes, want %d corners and %d mid-side nodes", len(m.Nodes), m.Corners, len(sides))
	}
	if !m.Complete {
		t.Error("not complete")
	}
}

// narrow lists the triangles of the region with an angle below 25 degrees that have no excuse: rows are stretched on
// purpose, and at sharp corners and within the segments next to them no better shape is possible.
func (g *mesher) narrow() (count int, worst float64) {
	worst = math.Pi / 3
	near := append([]bool(nil), g.sharp...)
	for _, s := range g.segments {
		if g.sharp[s.a] || g.sharp[s.b] {
			near[s.a], near[s.b] = true, true
		}
	}
	for t := range g.t {
		x := &g.t[t]
		if !g.refined[x.zone] || near[x.v[0]] || near[x.v[1]] || near[x.v[2]] {
			continue
		}
		_, shortest, radius := g.shape(int32(t))
		angle := math.Asin(min(1, shortest/(2*radius)))
		worst = math.Min(worst, angle)
		if angle < 25*math.Pi/180 {
			count++
		}
	}
	return count, worst
}

// withRows asks for rows as deep as an eighth of the width, at most a third of the size.
func withRows(o Options, size float64) Options {
	o.Row = func(_ outline.Point, width float64) (float64, float64) {
		if width > 8*size {
			return 0, 0
		}
		d := math.Min(width/8, size/3)
		return d, 3 * d
	}
	o.EdgeSize = func(_ outline.Point, width float64) float64 { return math.Min(size, width/4) }
	return o
}

func TestGallery(t *testing.T) {
	for _, e := range gallery() {
		for _, rows := range []bool{false, true} {
			o := Options{Size: uniform(e.size), Lines: e.lines}
			name := e.name
			if rows {
				o, name = withRows(o, e.size), name+" with rows"
			}
			t.Run(name, func(t *testing.T) {
				m, err := Triangulate(e.region, o)
				if err != nil {
					t.Fatal(err)
				}
				checkMesh(t, e.region, m)
				if again, _ := Triangulate(e.region, o); !reflect.DeepEqual(m, again) {
					t.Error("a second run gives another mesh")
				}
				g := newMesher(e.region, o)
				if err := g.run(); err != nil {
					t.Fatal(err)
				}
				checkTriangulation(t, g.triangulation)
				if count, worst := g.narrow(); count > 0 && !e.cramped {
					t.Errorf("%d triangles are narrow without excuse, down to %.1f degrees", count, worst*180/math.Pi)
				}
				a := m.MinAngles()
				const deg = 180 / math.Pi
				t.Logf("%d triangles, %d nodes, smallest angles %.1f, hundredth %.1f, median %.1f degrees, %d sides straightened",
					len(m.Triangles), len(m.Nodes), a[0]*deg, a[len(a)/100]*deg, a[len(a)/2]*deg, m.Straightened)
			})
		}
	}
}
