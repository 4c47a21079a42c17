package planar

import "hushframe/core/mechanics/outline"

// obstacle says what keeps a straight side from being laid.
type obstacle int

const (
	clear      obstacle = iota
	isThere             // the side exists already
	atVertex            // a vertex lies exactly on the way
	atSegment           // a segment crosses the way
	atTheFrame          // the way leaves the frame
)

// crossing is a side on a way, seen from its start.
type crossing struct{ right, left int32 }

// way is a straight way from a vertex to another or to a place.
type way struct {
	what  obstacle
	hit   int32      // the vertex or segment in the way
	sides []crossing // the sides crossed before the end or the obstacle
	end   int32      // the triangle that holds the place, when there is no vertex yet
}

// trace follows the way from vertex a to vertex b.
func (m *triangulation) trace(a, b int32) way { return m.follow(a, b, m.p[b]) }

// traceTo follows the way from vertex a to a place that is no vertex yet.
func (m *triangulation) traceTo(a int32, p outline.Point) way { return m.follow(a, none, p) }

func (m *triangulation) follow(a, b int32, p outline.Point) way {
	o := m.p[a]
	w := way{what: atTheFrame, hit: none, end: none}
	right, left := none, none
	m.star(a, func(t int32, k int) bool {
		x, y := m.t[t].v[next(k)], m.t[t].v[prev(k)]
		switch {
		case b == none && m.holds(t, p):
			w.what, w.end = clear, t
			return false
		case b != none && (x == b || y == b):
			w.what = isThere
			return false
		}
		ox := orient(o, p, m.p[x])
		if ox == 0 && m.p[x].Sub(o).Dot(p.Sub(o)) > 0 {
			w.what, w.hit = atVertex, x
			return false
		}
		if ox < 0 && orient(o, p, m.p[y]) > 0 {
			right, left = x, y
			return false
		}
		return true
	})
	for right != none {
		s, i, _ := m.side(right, left)
		if seg := m.t[s].seg[i]; seg != none {
			w.what, w.hit = atSegment, seg
			return w
		}
		w.sides = append(w.sides, crossing{right, left})
		u, j := m.facing(s, i)
		d := m.t[u].v[j]
		if b != none && d == b || b == none && m.holds(u, p) {
			w.what, w.end = clear, u
			return w
		}
		switch side := orient(o, p, m.p[d]); {
		case side == 0:
			w.what, w.hit = atVertex, d
			return w
		case side > 0:
			left = d
		default:
			right = d
		}
	}
	return w
}

// covers reports whether p lies in the counterclockwise triangle abc or on its edge.
func covers(a, b, c, p outline.Point) bool {
	return orient(a, b, p) >= 0 && orient(b, c, p) >= 0 && orient(c, a, p) >= 0
}

// opposite reports whether x and y have opposite signs.
func opposite(x, y float64) bool { return x > 0 && y < 0 || x < 0 && y > 0 }

// lay makes the side between a and b exist by flipping the sides that cross it, marks it with seg and restores the
// circle condition round it (S. W. Sloan, A fast algorithm for generating constrained Delaunay triangulations,
// Computers & Structures 47, 1993). The way must be clear: sides is what trace returned.
func (m *triangulation) lay(a, b int32, sides []crossing, seg int32) {
	pa, pb := m.p[a], m.p[b]
	queue := append([]crossing(nil), sides...)
	var fresh []crossing
	for n := 0; n < len(queue); n++ {
		t, i, ok := m.side(queue[n].right, queue[n].left)
		if !ok {
			panic("planar: a side to be flipped is gone")
		}
		u, j := m.facing(t, i)
		p, q := m.t[t].v[i], m.t[u].v[j]
		x, y := m.p[queue[n].right], m.p[queue[n].left]
		if !opposite(orient(m.p[p], m.p[q], x), orient(m.p[p], m.p[q], y)) {
			queue = append(queue, queue[n]) // the two triangles are not convex yet
			continue
		}
		m.flip(t, i)
		ends := p == a || p == b || q == a || q == b
		if !ends && opposite(orient(pa, pb, m.p[p]), orient(pa, pb, m.p[q])) {
			queue = append(queue, crossing{p, q})
		} else {
			fresh = append(fresh, crossing{p, q})
		}
	}
	m.mark(a, b, seg)
	m.relax(fresh)
}

// relax flips the given sides, and those that are affected, until the circle condition holds.
func (m *triangulation) relax(work []crossing) {
	for len(work) > 0 {
		c := work[len(work)-1]
		work = work[:len(work)-1]
		t, i, ok := m.side(c.right, c.left)
		if !ok || !m.illegal(t, i) {
			continue
		}
		u, j := m.facing(t, i)
		a, b, d, e := m.t[t].v[i], c.right, c.left, m.t[u].v[j]
		m.flip(t, i)
		work = append(work, crossing{a, b}, crossing{a, d}, crossing{e, b}, crossing{e, d})
	}
}
