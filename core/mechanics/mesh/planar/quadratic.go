package planar

import (
	"math"
	"sort"

	"hushframe/core/mechanics/outline"
)

// soundness is the least share of its straight-sided value that the Jacobian may fall to in a curved triangle.
const soundness = 0.15

// quadratic numbers the triangles of the region and their corners and adds mid-side nodes, on the curve where a side
// follows one.
func (g *mesher) quadratic() *Mesh {
	m := &Mesh{Complete: g.complete}
	number := make([]int32, len(g.p))
	for i := range number {
		number[i] = none
	}
	var kept []int32
	for t := range g.t {
		if !g.inside[g.t[t].zone] {
			continue
		}
		kept = append(kept, int32(t))
		for _, v := range g.t[t].v {
			if number[v] == none {
				number[v] = int32(len(m.Nodes))
				m.Nodes = append(m.Nodes, g.p[v])
			}
		}
	}
	m.Corners = len(m.Nodes)
	mid := make([][3]int32, len(g.t)) // by side, 0 for none: node 0 is a corner
	place := make([]int32, len(g.t))
	var curved []int32
	for n, t := range kept {
		place[t] = int32(n)
		x := &g.t[t]
		bent := false
		for i, u := range x.n {
			s := x.seg[i]
			bent = bent || s != none && !g.plan.pieces[g.segments[s].piece].straight
			if mid[t][i] == 0 {
				mid[t][i] = int32(len(m.Nodes))
				m.Nodes = append(m.Nodes, g.middle(t, i))
				if u != none {
					_, j := g.facing(t, i)
					mid[u][j] = mid[t][i]
				}
			}
			if s != none {
				m.addEdge(g, t, i, number, mid[t][i])
			}
		}
		if bent {
			curved = append(curved, t)
		}
		// Side i lies opposite corner i; node 3 is between corners 0 and 1, which is side 2.
		m.Triangles = append(m.Triangles, [6]int32{number[x.v[0]], number[x.v[1]], number[x.v[2]], mid[t][2], mid[t][0], mid[t][1]})
	}
	g.straighten(m, curved, place)
	m.Within = g.within(kept)
	return m
}

func (m *Mesh) addEdge(g *mesher, t int32, i int, number []int32, mid int32) {
	s := &g.segments[g.t[t].seg[i]]
	p := &g.plan.pieces[s.piece]
	if p.loop == none {
		return
	}
	a, b := g.t[t].v[next(i)], g.t[t].v[prev(i)]
	m.Edges = append(m.Edges, Edge{Nodes: [3]int32{number[a], mid, number[b]}, Loop: p.loop, Curve: p.index})
}

// middle returns the place of the mid-side node on side i of t: on a curve the place equally far from both ends.
func (g *mesher) middle(t int32, i int) outline.Point {
	a, b := g.corner(t, next(i)), g.corner(t, prev(i))
	s := g.t[t].seg[i]
	if s == none {
		return a.Lerp(b, 0.5)
	}
	x := &g.segments[s]
	p := &g.plan.pieces[x.piece]
	if p.straight {
		return a.Lerp(b, 0.5)
	}
	a, b = g.p[x.a], g.p[x.b]
	lo, hi := x.t0, x.t1
	for range 100 {
		m := 0.5 * (lo + hi)
		if m == lo || m == hi {
			break
		}
		if q := p.at(m); q.Distance(a) < q.Distance(b) {
			lo = m
		} else {
			hi = m
		}
	}
	return p.at(0.5 * (lo + hi))
}

// straighten moves mid-side nodes towards their chords where a triangle would not be sound otherwise: those on mesh
// lines first, those on the boundary only if that is not enough.
func (g *mesher) straighten(m *Mesh, curved, place []int32) {
	moved := map[int32]bool{}
	const passes = 16
	for pass := range passes {
		last := pass%8 == 7
		done := true
		for _, t := range curved {
			n := m.Triangles[place[t]]
			var c [6]outline.Point
			for i, v := range n {
				c[i] = m.Nodes[v]
			}
			if leastJacobian(c) >= soundness {
				continue
			}
			done = false
			for i := range 3 {
				mid := n[3+i]
				chord := c[i].Lerp(c[next(i)], 0.5)
				// Node 3+i is on the side opposite corner i+2.
				s := g.t[t].seg[prev(i)]
				if c[3+i] == chord || pass < passes/2 && g.plan.pieces[g.segments[s].piece].loop != none {
					continue
				}
				m.Nodes[mid] = c[3+i].Lerp(chord, 0.5)
				if last {
					m.Nodes[mid] = chord
				}
				moved[mid] = true
			}
		}
		if done {
			break
		}
	}
	m.Straightened = len(moved)
}

// leastJacobian returns a lower bound on the Jacobian determinant within a six-node triangle, over that of the
// straight-sided triangle with its corners. The determinant is a quadratic, and no smaller than the least of its six
// Bernstein coefficients; the corner ones are attained.
func leastJacobian(c [6]outline.Point) float64 {
	// The Bézier points of the sides: corner, 2·mid − (a+b)/2, corner.
	var q [3]outline.Point
	for i := range 3 {
		q[i] = c[3+i].Scale(2).Sub(c[i].Add(c[next(i)]).Scale(0.5))
	}
	p0, p1, p2, q01, q12, q20 := c[0], c[1], c[2], q[0], q[1], q[2]
	// The derivatives along sides 0-1 and 0-2 are linear, with these values at the three corners.
	u := [3]outline.Point{q01.Sub(p0), p1.Sub(q01), q12.Sub(q20)}
	v := [3]outline.Point{q20.Sub(p0), q12.Sub(q01), p2.Sub(q20)}
	whole := p1.Sub(p0).Cross(p2.Sub(p0)) / 4
	least := math.Inf(1)
	for i := range 3 {
		j := next(i)
		least = math.Min(least, u[i].Cross(v[i]))
		least = math.Min(least, 0.5*(u[i].Cross(v[j])+u[j].Cross(v[i])))
	}
	return least / whole
}

// within finds the mesh lines round each kept triangle. A zone is inside a line when most of its area is.
func (g *mesher) within(kept []int32) [][]int32 {
	lists := make([][]int32, len(g.inside))
	area := make([]float64, len(g.inside))
	for _, t := range kept {
		a, b, c := g.corners(t)
		area[g.t[t].zone] += b.Sub(a).Cross(c.Sub(a))
	}
	for k, l := range g.options.Lines {
		box := l.Bounds()
		in := make([]float64, len(g.inside))
		for _, t := range kept {
			a, b, c := g.corners(t)
			p := outline.Point{X: (a.X + b.X + c.X) / 3, Y: (a.Y + b.Y + c.Y) / 3}
			if box.Holds(p) && l.Contains(p) {
				in[g.t[t].zone] += b.Sub(a).Cross(c.Sub(a))
			}
		}
		for z := range in {
			if in[z] > 0.5*area[z] {
				lists[z] = append(lists[z], int32(k))
			}
		}
	}
	out := make([][]int32, len(kept))
	for n, t := range kept {
		out[n] = lists[g.t[t].zone]
	}
	return out
}

// MinAngles returns the smallest angle of each triangle between the chords of its sides, sorted upwards (rad).
func (m *Mesh) MinAngles() []float64 {
	angles := make([]float64, len(m.Triangles))
	for k, t := range m.Triangles {
		angles[k] = math.Inf(1)
		for i := range 3 {
			p := m.Nodes[t[i]]
			u, v := m.Nodes[t[next(i)]].Sub(p), m.Nodes[t[prev(i)]].Sub(p)
			angles[k] = math.Min(angles[k], math.Atan2(u.Cross(v), u.Dot(v)))
		}
	}
	sort.Float64s(angles)
	return angles
}
