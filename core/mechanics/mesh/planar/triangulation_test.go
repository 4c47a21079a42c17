package planar

import (
	"math"
	"math/rand/v2"
	"testing"

	"hushframe/core/mechanics/outline"
)

// checkTriangulation asserts what must hold after every operation: links match, corners run counterclockwise, the
// frame is covered once and the circle condition holds on every side without a segment.
func checkTriangulation(t *testing.T, m *triangulation) {
	t.Helper()
	area := 0.0
	for k := range m.t {
		x := &m.t[k]
		a, b, c := m.corners(int32(k))
		if !(orient(a, b, c) > 0) {
			t.Fatalf("triangle %d is turned over", k)
		}
		area += 0.5 * b.Sub(a).Cross(c.Sub(a))
		for i := range 3 {
			u := x.n[i]
			if u == none {
				continue
			}
			v, j := m.facing(int32(k), i)
			if v != u || m.t[u].n[j] != int32(k) || m.t[u].seg[j] != x.seg[i] {
				t.Fatalf("triangles %d and %d do not agree on their side", k, u)
			}
			if m.illegal(int32(k), i) {
				t.Fatalf("side %d of triangle %d breaks the circle condition", i, k)
			}
			if x.seg[i] == none && x.zone != m.t[u].zone {
				t.Fatalf("zones differ across a plain side")
			}
		}
	}
	for v, k := range m.at {
		m.index(k, int32(v))
	}
	// Euler: a triangulated rectangle with n inner vertices has 2n+2 triangles.
	if want := 2*(len(m.p)-4) + 2; len(m.t) != want {
		t.Fatalf("%d triangles, Euler's formula wants %d", len(m.t), want)
	}
	w := m.p[2].Sub(m.p[0])
	if math.Abs(area-w.X*w.Y) > 1e-9*w.X*w.Y {
		t.Fatalf("area %g of %g", area, w.X*w.Y)
	}
}

func TestInsertKeepsDelaunay(t *testing.T) {
	box := outline.Box{Max: outline.Point{X: 1, Y: 1}}
	rng := rand.New(rand.NewPCG(7, 7))
	clouds := map[string]func(i int) outline.Point{
		"random": func(int) outline.Point { return outline.Point{X: rng.Float64(), Y: rng.Float64()} },
		"grid":   func(i int) outline.Point { return outline.Point{X: float64(i%20) / 20, Y: float64(i/20) / 20} },
		"circle": func(i int) outline.Point {
			s, c := math.Sincos(2 * math.Pi * float64(i*7%400) / 400)
			return outline.Point{X: 0.5 + c/2, Y: 0.5 + s/2}
		},
		"line":  func(i int) outline.Point { x := float64(i*37%400) / 400; return outline.Point{X: x, Y: x / 3} },
		"twice": func(i int) outline.Point { return outline.Point{X: float64(i % 13), Y: float64(i % 7)}.Scale(0.05) },
	}
	for name, at := range clouds {
		t.Run(name, func(t *testing.T) {
			m := newTriangulation(box)
			for i := range 400 {
				p := at(i)
				v := m.insert(p)
				if m.p[v] != p {
					t.Fatalf("vertex %d is at %v, not %v", v, m.p[v], p)
				}
			}
			checkTriangulation(t, m)
		})
	}
}

// Random segments that do not cross are laid among random points; all must be sides at the end.
func TestLayKeepsDelaunayAndSegments(t *testing.T) {
	blocked := map[obstacle]int{}
	for seed := range uint64(30) {
		rng := rand.New(rand.NewPCG(seed, 9))
		m := newTriangulation(outline.Box{Max: outline.Point{X: 1, Y: 1}})
		var vs []int32
		for range 120 {
			p := outline.Point{X: rng.Float64(), Y: rng.Float64()}
			if rng.IntN(2) == 0 {
				p = outline.Point{X: float64(rng.IntN(12)) / 12, Y: float64(rng.IntN(12)) / 12}
			}
			vs = append(vs, m.insert(p))
		}
		var laid [][2]int32
		for range 300 {
			a, b := vs[rng.IntN(len(vs))], vs[rng.IntN(len(vs))]
			if a == b {
				continue
			}
			w := m.trace(a, b)
			blocked[w.what]++
			switch w.what {
			case clear:
				m.lay(a, b, w.sides, int32(len(laid)))
				laid = append(laid, [2]int32{a, b})
			case atVertex:
				if orient(m.p[a], m.p[b], m.p[w.hit]) != 0 {
					t.Fatal("the vertex in the way is beside it")
				}
			case atSegment:
				s := laid[w.hit]
				if !opposite(orient(m.p[a], m.p[b], m.p[s[0]]), orient(m.p[a], m.p[b], m.p[s[1]])) {
					t.Fatal("the segment in the way is beside it")
				}
			case atTheFrame:
				t.Fatal("the way leaves the frame")
			}
		}
		checkTriangulation(t, m)
		for i, s := range laid {
			tri, k, ok := m.side(s[0], s[1])
			if !ok || m.t[tri].seg[k] != int32(i) {
				t.Fatalf("segment %d is lost", i)
			}
		}
		// More points, none of which may tear a segment.
		for range 100 {
			p := outline.Point{X: rng.Float64(), Y: rng.Float64()}
			m.insert(p)
		}
		checkTriangulation(t, m)
		for i, s := range laid {
			if _, _, ok := m.side(s[0], s[1]); !ok {
				t.Fatalf("segment %d was torn by a later point", i)
			}
		}
	}
	for _, what := range []obstacle{clear, isThere, atVertex, atSegment} {
		if blocked[what] < 30 {
			t.Fatalf("too few cases: %v", blocked)
		}
	}
}

func BenchmarkInsert(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for b.Loop() {
		m := newTriangulation(outline.Box{Max: outline.Point{X: 1, Y: 1}})
		for range 2000 {
			m.insert(outline.Point{X: rng.Float64(), Y: rng.Float64()})
		}
	}
}
