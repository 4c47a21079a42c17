package planar

import (
	"fmt"

	"hushframe/core/mechanics/outline"
)

// constrain builds the triangulation of all segment ends and makes every segment a side of triangles.
func (g *mesher) constrain() error {
	g.triangulation = newTriangulation(g.region.Bounds())
	g.kind = []vertexKind{ofFrame, ofFrame, ofFrame, ofFrame}
	g.on = []int32{none, none, none, none}
	number := make([]int32, len(g.plan.vertices))
	sharp := make([]bool, 4, len(g.plan.vertices)+4)
	for i := range number {
		number[i] = none
	}
	name := func(v, piece int32, kind vertexKind) int32 {
		if number[v] == none {
			number[v] = g.insert(g.plan.vertices[v])
			if int(number[v]) == len(g.kind) {
				g.kind = append(g.kind, kind)
				g.on = append(g.on, piece)
				sharp = append(sharp, kind == ofPlan && g.sharp[v])
			}
		}
		return number[v]
	}
	for i := range g.segments {
		s := &g.segments[i]
		ka, kb := ofSegment, ofSegment
		if s.t0 == 0 {
			ka = ofPlan
		}
		if s.t1 == 1 {
			kb = ofPlan
		}
		s.a, s.b = name(s.a, s.piece, ka), name(s.b, s.piece, kb)
	}
	for i := range g.plan.pieces {
		p := &g.plan.pieces[i]
		p.a, p.b = number[p.a], number[p.b]
	}
	g.sharp = sharp
	all := g.segments
	g.segments = make([]segment, 0, 2*len(all))
	for _, s := range all {
		if err := g.lay(s); err != nil {
			return err
		}
	}
	g.flood()
	return nil
}

// lay makes a segment a side of triangles, in parts when vertices or mesh lines are in its way.
func (g *mesher) lay(s segment) error {
	work := []segment{s}
	for steps := 0; len(work) > 0; steps++ {
		s := work[len(work)-1]
		work = work[:len(work)-1]
		if s.a == s.b {
			continue
		}
		if steps > 1000 {
			return fmt.Errorf("curves run too close together at %s", place(g.p[s.a]))
		}
		via := none
		switch w := g.trace(s.a, s.b); w.what {
		case clear:
			g.triangulation.lay(s.a, s.b, w.sides, g.addSegment(s))
			continue
		case isThere:
			t, i, _ := g.side(s.a, s.b)
			if g.t[t].seg[i] == none {
				g.mark(s.a, s.b, g.addSegment(s))
			}
			continue
		case atVertex:
			via = w.hit
		case atSegment:
			var err error
			if via, err = g.crossAt(s, w.hit); err != nil {
				return err
			}
		default:
			return fmt.Errorf("planar: a segment leaves the frame")
		}
		m := s.t0 + (s.t1-s.t0)*g.p[via].Distance(g.p[s.a])/g.p[s.b].Distance(g.p[s.a])
		m = min(max(m, s.t0), s.t1)
		work = append(work, segment{piece: s.piece, t0: m, t1: s.t1, a: via, b: s.b},
			segment{piece: s.piece, t0: s.t0, t1: m, a: s.a, b: via})
	}
	return nil
}

// crossAt returns the vertex at which s and the laid segment x share a place: an end of x within the snap distance, or
// a new vertex on x. Two parts of the boundary must not cross.
func (g *mesher) crossAt(s segment, x int32) (int32, error) {
	o := &g.segments[x]
	a, b, c, d := g.p[s.a], g.p[s.b], g.p[o.a], g.p[o.b]
	u := c.Sub(a).Cross(b.Sub(a)) / b.Sub(a).Cross(d.Sub(c)) // along c to d
	at := c.Lerp(d, min(max(u, 0), 1))
	if g.plan.pieces[s.piece].loop != none && g.plan.pieces[o.piece].loop != none {
		return none, fmt.Errorf("the boundary crosses itself at %s", place(at))
	}
	snap := g.options.Snap
	switch {
	case at.Distance(c) <= snap && o.a != s.a:
		return o.a, nil
	case at.Distance(d) <= snap && o.b != s.a:
		return o.b, nil
	}
	t := o.t0 + min(max(u, 0), 1)*(o.t1-o.t0)
	v, _, ok := g.divideSegment(x, t, g.plan.pieces[o.piece].at(t))
	if !ok {
		return none, fmt.Errorf("curves run too close together at %s", place(at))
	}
	return v, nil
}

// addSegment stores a segment that is about to become a side.
func (g *mesher) addSegment(s segment) int32 {
	g.segments = append(g.segments, s)
	g.queued = append(g.queued, false)
	return int32(len(g.segments) - 1)
}

// divideSegment puts the vertex p, a place of its curve, between the ends of segment x. The two halves are x itself
// and a new segment, the zones on both sides are kept true. When something hems the segment in, nothing is changed, ok
// is false and by is the segment in the way, if it is one.
func (g *mesher) divideSegment(x int32, t float64, p outline.Point) (v, by int32, ok bool) {
	s := g.segments[x]
	a, b := s.a, s.b
	left, i, there := g.side(a, b)
	if !there {
		panic("planar: a segment is not a side")
	}
	right := g.t[left].n[i]
	away := orient(g.p[a], g.p[b], p)
	if p == g.p[a] || p == g.p[b] || !(s.t0 < t && t < s.t1) {
		return none, none, false
	}
	if away == 0 {
		v = g.splitSide(left, i, p)
	} else {
		zone := g.t[right].zone
		if away < 0 {
			a, b, zone = b, a, g.t[left].zone
		}
		end, by, ok := g.corridor(a, b, p)
		if !ok {
			return none, by, false
		}
		v = g.insertAt(end, g.triangulation.on(end, p), p)
		g.connect(a, v, x)
		g.connect(v, b, x)
		// The face between the chord and its two parts changes sides.
		f, k, _ := g.side(a, b)
		if g.t[f].v[k] != v {
			panic("planar: a vertex lies between a segment and its curve")
		}
		h, l := g.facing(f, k)
		g.t[f].zone = zone
		g.t[f].seg[k], g.t[h].seg[l] = none, none
		g.relax([]crossing{{a, b}})
	}
	g.kind = append(g.kind, ofSegment)
	g.on = append(g.on, s.piece)
	g.sharp = append(g.sharp, false)
	g.segments[x].t1, g.segments[x].b = t, v
	s.t0, s.a = t, v
	g.mark(v, s.b, g.addSegment(s))
	return v, none, true
}

// corridor finds the triangle that holds p, a place to the left of the side from a to b, and makes sure that no vertex
// and no segment lies in the triangle a, b, p. If one does, ok is false and by is a segment in the way, if known.
func (g *mesher) corridor(a, b int32, p outline.Point) (end, by int32, ok bool) {
	// A segment that leaves from one end crosses the way from the other.
	w := g.traceTo(b, p)
	if w.what == atSegment {
		return none, w.hit, false
	}
	w = g.traceTo(a, p)
	if w.what == atSegment {
		return none, w.hit, false
	}
	if w.what != clear {
		return none, none, false
	}
	// Between the way from a and the vertices to the right of it there is no other vertex; so it is enough that these
	// are beyond the line from b to p.
	for _, c := range w.sides {
		if c.right != b && covers(g.p[a], g.p[b], p, g.p[c.right]) {
			return none, none, false
		}
	}
	for i, v := range g.t[w.end].v {
		if g.p[v] == p || v != a && v != b && covers(g.p[a], g.p[b], p, g.p[v]) {
			return none, none, false
		}
		on := orient(g.corner(w.end, next(i)), g.corner(w.end, prev(i)), p) == 0
		if on && g.t[w.end].seg[i] != none {
			return none, g.t[w.end].seg[i], false
		}
	}
	return w.end, none, true
}

// connect makes a clear way, or a side that is there, part of segment x.
func (g *mesher) connect(a, b, x int32) {
	switch w := g.trace(a, b); w.what {
	case clear:
		g.triangulation.lay(a, b, w.sides, x)
	case isThere:
		g.mark(a, b, x)
	default:
		panic("planar: the way to a place on a curve is not clear")
	}
}

// flood gives each part of the triangulation that segments bound a zone of its own and finds out which zones lie in
// the region: those reached by crossing its boundary to the left.
func (g *mesher) flood() {
	for t := range g.t {
		g.t[t].zone = none
	}
	g.inside = nil
	type door struct {
		t int32
		i int
	}
	var room []int32
	var doors []door
	fill := func(t int32, inside bool) {
		zone := int32(len(g.inside))
		g.inside = append(g.inside, inside)
		g.t[t].zone = zone
		room = append(room[:0], t)
		for len(room) > 0 {
			t := room[len(room)-1]
			room = room[:len(room)-1]
			for i, u := range g.t[t].n {
				switch {
				case u == none || g.t[u].zone != none:
				case g.t[t].seg[i] != none:
					doors = append(doors, door{t, i})
				default:
					g.t[u].zone = zone
					room = append(room, u)
				}
			}
		}
	}
	fill(g.at[0], false) // at a corner of the frame
	for len(doors) > 0 {
		d := doors[0]
		doors = doors[1:]
		t := &g.t[d.t]
		if g.t[t.n[d.i]].zone != none {
			continue
		}
		inside := g.inside[t.zone]
		s := &g.segments[t.seg[d.i]]
		if g.plan.pieces[s.piece].loop != none {
			inside = t.v[next(d.i)] != s.a // the triangle left behind is not on the left of the boundary
		}
		fill(t.n[d.i], inside)
	}
	g.refined = append([]bool(nil), g.inside...)
	for i := range g.segments {
		if s := &g.segments[i]; g.plan.pieces[s.piece].row {
			if t, _, ok := g.side(s.b, s.a); ok {
				g.refined[g.t[t].zone] = false
			}
		}
	}
}
