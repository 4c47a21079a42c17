package planar

import "hushframe/core/mechanics/outline"

const none = int32(-1)

// triangle has its corners counterclockwise. Side i lies opposite corner i, from corner i+1 to corner i+2.
type triangle struct {
	v    [3]int32
	n    [3]int32 // neighbour across side i, none at the frame
	seg  [3]int32 // segment along side i, none if there is none
	zone int32    // set by flood; triangles on both sides of a plain side share it
}

// triangulation is a constrained Delaunay triangulation: within a frame of four corners (vertices 0 to 3) and with
// sides that carry a segment held fixed, the circle round each triangle holds no vertex that can be seen from inside it.
type triangulation struct {
	p     []outline.Point
	at    []int32 // for each vertex a triangle that has it
	t     []triangle
	last  int32 // where the previous search ended
	stack []int32
}

func next(i int) int { return (i + 1) % 3 }
func prev(i int) int { return (i + 2) % 3 }

func newTriangulation(b outline.Box) *triangulation {
	b = b.Grow(3 * b.Diagonal())
	m := &triangulation{
		p:  []outline.Point{b.Min, {X: b.Max.X, Y: b.Min.Y}, b.Max, {X: b.Min.X, Y: b.Max.Y}},
		at: []int32{0, 0, 0, 1},
	}
	free := [3]int32{none, none, none}
	m.t = []triangle{
		{v: [3]int32{0, 1, 2}, n: [3]int32{none, 1, none}, seg: free},
		{v: [3]int32{0, 2, 3}, n: [3]int32{none, none, 0}, seg: free},
	}
	return m
}

func (m *triangulation) corner(t int32, i int) outline.Point { return m.p[m.t[t].v[i]] }

func (m *triangulation) corners(t int32) (a, b, c outline.Point) {
	v := m.t[t].v
	return m.p[v[0]], m.p[v[1]], m.p[v[2]]
}

// relink makes the triangle across a side of t point back to t; side is that side of t.
func (m *triangulation) relink(t int32, side int) {
	u := m.t[t].n[side]
	if u == none {
		return
	}
	b := m.t[t].v[next(side)]
	for j := range 3 {
		// The neighbour runs through the shared side the other way.
		if m.t[u].v[prev(j)] == b && m.t[u].v[next(j)] == m.t[t].v[prev(side)] {
			m.t[u].n[j] = t
			return
		}
	}
	panic("planar: neighbours do not share a side")
}

// facing returns the index of the side of u that it shares with t across side i of t.
func (m *triangulation) facing(t int32, i int) (u int32, j int) {
	u = m.t[t].n[i]
	b := m.t[t].v[next(i)]
	for j := range 3 {
		if m.t[u].v[prev(j)] == b {
			return u, j
		}
	}
	panic("planar: neighbours do not share a side")
}

// side finds the triangle to the left of the side from a to b; ok is false when there is no such side.
func (m *triangulation) side(a, b int32) (t int32, i int, ok bool) {
	first := m.at[a]
	for t = first; t != none; {
		k := m.index(t, a)
		if m.t[t].v[next(k)] == b {
			return t, prev(k), true
		}
		if t = m.t[t].n[next(k)]; t == first { // counterclockwise about a
			return none, 0, false
		}
	}
	// a is a corner of the frame, whose triangles do not close: go on clockwise.
	for t = first; ; {
		if t = m.t[t].n[prev(m.index(t, a))]; t == none {
			return none, 0, false
		}
		if k := m.index(t, a); m.t[t].v[next(k)] == b {
			return t, prev(k), true
		}
	}
}

// index returns which corner of t the vertex a is.
func (m *triangulation) index(t, a int32) int {
	for k, v := range m.t[t].v {
		if v == a {
			return k
		}
	}
	panic("planar: vertex is not a corner of the triangle")
}

// mark sets the segment of the side between a and b on both of its triangles.
func (m *triangulation) mark(a, b, seg int32) {
	t, i, ok := m.side(a, b)
	if !ok {
		panic("planar: mark of a side that is not there")
	}
	u, j := m.facing(t, i)
	m.t[t].seg[i], m.t[u].seg[j] = seg, seg
}

// flip replaces side i of t by the other diagonal of the two triangles that share it. Afterwards corner 0 of both is
// the former corner i of t.
func (m *triangulation) flip(t int32, i int) (u int32) {
	u, j := m.facing(t, i)
	x, y := m.t[t], m.t[u]
	a, b, c, d := x.v[i], x.v[next(i)], x.v[prev(i)], y.v[j]
	// In u, corner j+1 is c and corner j+2 is b.
	m.t[t] = triangle{
		v:    [3]int32{a, b, d},
		n:    [3]int32{y.n[next(j)], u, x.n[prev(i)]},
		seg:  [3]int32{y.seg[next(j)], none, x.seg[prev(i)]},
		zone: x.zone,
	}
	m.t[u] = triangle{
		v:    [3]int32{a, d, c},
		n:    [3]int32{y.n[prev(j)], x.n[next(i)], t},
		seg:  [3]int32{y.seg[prev(j)], x.seg[next(i)], none},
		zone: x.zone,
	}
	m.relink(t, 0)
	m.relink(u, 1)
	m.at[a], m.at[b], m.at[c], m.at[d] = t, t, u, u
	return u
}

func (m *triangulation) addVertex(p outline.Point, t int32) int32 {
	m.p = append(m.p, p)
	m.at = append(m.at, t)
	return int32(len(m.p) - 1)
}

// splitFace puts a vertex inside t and returns it.
func (m *triangulation) splitFace(t int32, p outline.Point) int32 {
	q := m.addVertex(p, t)
	x := m.t[t]
	u, w := int32(len(m.t)), int32(len(m.t)+1)
	a, b, c := x.v[0], x.v[1], x.v[2]
	m.t[t] = triangle{v: [3]int32{q, b, c}, n: [3]int32{x.n[0], u, w}, seg: [3]int32{x.seg[0], none, none}, zone: x.zone}
	m.t = append(m.t,
		triangle{v: [3]int32{q, c, a}, n: [3]int32{x.n[1], w, t}, seg: [3]int32{x.seg[1], none, none}, zone: x.zone},
		triangle{v: [3]int32{q, a, b}, n: [3]int32{x.n[2], t, u}, seg: [3]int32{x.seg[2], none, none}, zone: x.zone})
	m.relink(u, 0)
	m.relink(w, 0)
	m.at[a], m.at[b], m.at[c] = u, t, t
	m.legalise(t, u, w)
	return q
}

// splitSide puts a vertex on side i of t, which must not be on the frame, and returns it. A segment along the side is
// carried on by both halves.
func (m *triangulation) splitSide(t int32, i int, p outline.Point) int32 {
	q := m.addVertex(p, t)
	u, j := m.facing(t, i)
	x, y := m.t[t], m.t[u]
	a, b, c, d := x.v[i], x.v[next(i)], x.v[prev(i)], y.v[j]
	s := x.seg[i]
	// Counterclockwise about q the corners are a, b, d, c.
	k, l := int32(len(m.t)), int32(len(m.t)+1)
	m.t[t] = triangle{v: [3]int32{q, a, b}, n: [3]int32{x.n[prev(i)], u, k}, seg: [3]int32{x.seg[prev(i)], s, none}, zone: x.zone}
	m.t[u] = triangle{v: [3]int32{q, b, d}, n: [3]int32{y.n[next(j)], l, t}, seg: [3]int32{y.seg[next(j)], none, s}, zone: y.zone}
	m.t = append(m.t,
		triangle{v: [3]int32{q, c, a}, n: [3]int32{x.n[next(i)], t, l}, seg: [3]int32{x.seg[next(i)], none, s}, zone: x.zone},
		triangle{v: [3]int32{q, d, c}, n: [3]int32{y.n[prev(j)], k, u}, seg: [3]int32{y.seg[prev(j)], s, none}, zone: y.zone})
	m.relink(t, 0)
	m.relink(u, 0)
	m.relink(k, 0)
	m.relink(l, 0)
	m.at[a], m.at[b], m.at[c], m.at[d] = t, t, k, l
	m.legalise(t, u, k, l)
	return q
}

// legalise flips sides opposite corner 0 of the given triangles, and of those that arise, until the circle condition
// holds again (C. L. Lawson, Software for C¹ surface interpolation, 1977).
func (m *triangulation) legalise(ts ...int32) {
	m.stack = append(m.stack[:0], ts...)
	for len(m.stack) > 0 {
		t := m.stack[len(m.stack)-1]
		m.stack = m.stack[:len(m.stack)-1]
		if m.illegal(t, 0) {
			u := m.flip(t, 0)
			m.stack = append(m.stack, t, u)
		}
	}
}

// illegal reports whether side i of t may be flipped and the circle condition asks for it.
func (m *triangulation) illegal(t int32, i int) bool {
	x := &m.t[t]
	if x.n[i] == none || x.seg[i] != none {
		return false
	}
	u, j := m.facing(t, i)
	a, b, c := m.corners(t)
	return inCircle(a, b, c, m.corner(u, j)) > 0
}

// locate returns the triangle that holds p and the index of the side it lies on, or −1 when it is inside. It returns
// ok = false when p is outside the frame.
func (m *triangulation) locate(p outline.Point) (t int32, side int, ok bool) {
	t = m.last
	for range len(m.t) + 8 {
		away := -1
		for i := range 3 {
			if orient(m.corner(t, next(i)), m.corner(t, prev(i)), p) < 0 {
				away = i
				break
			}
		}
		if away < 0 {
			m.last = t
			return t, m.on(t, p), true
		}
		if t = m.t[t].n[away]; t == none {
			return none, 0, false
		}
	}
	// A walk may run in circles when segments make the triangulation less than Delaunay.
	for t := range m.t {
		if m.holds(int32(t), p) {
			m.last = int32(t)
			return int32(t), m.on(int32(t), p), true
		}
	}
	return none, 0, false
}

func (m *triangulation) holds(t int32, p outline.Point) bool {
	a, b, c := m.corners(t)
	return covers(a, b, c, p)
}

// on returns the side of t on whose line p lies, or −1.
func (m *triangulation) on(t int32, p outline.Point) int {
	for i := range 3 {
		if orient(m.corner(t, next(i)), m.corner(t, prev(i)), p) == 0 {
			return i
		}
	}
	return -1
}

// insert puts a vertex at p, which must lie within the frame, and returns it, or the vertex that is there already.
func (m *triangulation) insert(p outline.Point) int32 {
	t, side, ok := m.locate(p)
	if !ok {
		panic("planar: vertex outside the frame")
	}
	return m.insertAt(t, side, p)
}

// insertAt does the same in a known triangle and side, as returned by locate.
func (m *triangulation) insertAt(t int32, side int, p outline.Point) int32 {
	for i, v := range m.t[t].v {
		if m.corner(t, i) == p {
			return v
		}
	}
	if side >= 0 {
		return m.splitSide(t, side, p)
	}
	return m.splitFace(t, p)
}

// star calls f for each triangle about the vertex a, counterclockwise, with the index of a in it, until f returns
// false. The vertex must not be a corner of the frame.
func (m *triangulation) star(a int32, f func(t int32, k int) bool) {
	first := m.at[a]
	for t := first; ; {
		k := m.index(t, a)
		following := m.t[t].n[next(k)]
		if !f(t, k) || following == first {
			return
		}
		t = following
	}
}
