package planar

import (
	"math"
	"slices"

	"hushframe/core/mechanics/outline"
)

// A row is a strip of stretched triangles along the boundary: between a run of boundary segments and a chain of straight
// segments at the depth of the row. Rows are not refined; what lies beyond the chain is.
//
// A vertex of the boundary has its match on the chain straight across, at a corner along the bisector. It has none where
// the boundary bends sharply, turns inwards, or where something else is near; there the row ends with a triangle.

const (
	rowBend      = 3.0                 // least radius of curvature, in depths
	rowInward    = -25 * math.Pi / 180 // turn (left positive) below which a row ends
	rowOutward   = 100 * math.Pi / 180 // turn above which it does
	rowClearance = 0.6                 // distance kept from all else, in depths
	rowStretch   = 5.0                 // longest boundary segment, in depths
	rowRise      = 0.18                // most that the curve rises over the chord where a row ends, in depths
	rowRun       = 3                   // fewest matches in a row
)

// rowVertex is a boundary vertex on the way to getting a match.
type rowVertex struct {
	before, after int32 // segments, none when the vertex is not on the boundary
	depth         float64
	match         outline.Point
	vertex        int32 // match in the plan
	ok            bool
}

// layRows adds the chains of all rows to the plan and shortens the boundary segments that have none.
func (g *mesher) layRows(across *widths) error {
	if g.options.Row == nil {
		return nil
	}
	vs := g.rowVertices(across)
	features := len(g.segments)
	near := newNearby(g.chords())
	for again := true; again; {
		again = g.dropShort(vs)
		for s := range features {
			if g.plan.pieces[g.segments[s].piece].loop == none {
				continue
			}
			if a, b := &vs[g.segments[s].a], &vs[g.segments[s].b]; (a.ok || b.ok) && !g.rowFits(vs, int32(s), near) {
				a.ok, b.ok = false, false
				again = true
			}
		}
	}
	for v := range vs {
		if vs[v].vertex = int32(v); vs[v].ok {
			vs[v].vertex = g.plan.add(vs[v].match)
			g.sharp = append(g.sharp, false)
		}
	}
	for s := range features {
		x := g.segments[s]
		if g.plan.pieces[x.piece].loop == none || !vs[x.a].ok && !vs[x.b].ok {
			continue
		}
		a, b := vs[x.a].vertex, vs[x.b].vertex
		pa, pb := g.plan.vertices[a], g.plan.vertices[b]
		g.plan.pieces = append(g.plan.pieces, piece{
			curve: outline.Line(pa, pb), a: a, b: b, pa: pa, pb: pb, loop: none, straight: true, row: true,
		})
		g.segments = append(g.segments, segment{piece: int32(len(g.plan.pieces) - 1), t1: 1, a: a, b: b})
	}
	return g.shortenBare(vs, features, across)
}

// rowVertices finds for every boundary vertex whether, how deep and where it has a match, as far as it can tell alone.
func (g *mesher) rowVertices(across *widths) []rowVertex {
	vs := make([]rowVertex, len(g.plan.vertices))
	for v := range vs {
		vs[v].before, vs[v].after = none, none
	}
	for s := range g.segments {
		if x := &g.segments[s]; g.plan.pieces[x.piece].loop != none {
			vs[x.a].after, vs[x.b].before = int32(s), int32(s)
		}
	}
	for v := range vs {
		r := &vs[v]
		if r.before == none || r.after == none {
			continue
		}
		x, y := &g.segments[r.before], &g.segments[r.after]
		p, q := &g.plan.pieces[x.piece], &g.plan.pieces[y.piece]
		in, out := p.curve.Tangent(x.t1), q.curve.Tangent(y.t0)
		turn := math.Atan2(in.Cross(out), in.Dot(out))
		at := g.plan.vertices[v]
		side := in.Add(out)
		if turn < rowInward || turn > rowOutward {
			continue
		}
		normal := outline.Point{X: -side.Y, Y: side.X}.Scale(1 / side.Norm())
		r.depth, _ = g.options.Row(at, across.across(at, normal))
		bend := math.Max(math.Abs(p.curve.Curvature(x.t1)), math.Abs(q.curve.Curvature(y.t0)))
		if !(r.depth > 0) || bend*r.depth*rowBend > 1 {
			continue
		}
		r.match = at.Add(normal.Scale(r.depth / math.Cos(turn/2)))
		r.ok = true
	}
	return vs
}

// chords returns the boxes of the chords of all segments.
func (g *mesher) chords() []outline.Box {
	boxes := make([]outline.Box, len(g.segments))
	for i, s := range g.segments {
		boxes[i] = outline.EmptyBox().With(g.plan.vertices[s.a]).With(g.plan.vertices[s.b])
	}
	return boxes
}

// dropShort takes the match from vertices that have fewer than rowRun of them in a row, and reports whether it did.
func (g *mesher) dropShort(vs []rowVertex) bool {
	dropped := false
	for v := range vs {
		if !vs[v].ok {
			continue
		}
		run := []int32{int32(v)}
		for n := 0; n < len(run) && len(run) < rowRun; n++ {
			r := &vs[run[n]]
			for _, w := range [2]int32{g.segments[r.before].a, g.segments[r.after].b} {
				if vs[w].ok && !slices.Contains(run, w) {
					run = append(run, w)
				}
			}
		}
		if len(run) < rowRun {
			for _, w := range run {
				vs[w].ok = false
			}
			dropped = true
		}
	}
	return dropped
}

// rowFits reports whether the cell of a row along segment s has a good shape and keeps clear of everything else.
func (g *mesher) rowFits(vs []rowVertex, s int32, nearby *nearby) bool {
	x := &g.segments[s]
	a, b := g.plan.vertices[x.a], g.plan.vertices[x.b]
	c, d := b, a // the cell is a, b, c, d
	depth := math.Inf(1)
	if vs[x.a].ok {
		d, depth = vs[x.a].match, vs[x.a].depth
	}
	if vs[x.b].ok {
		c, depth = vs[x.b].match, math.Min(depth, vs[x.b].depth)
	}
	length := a.Distance(b)
	if length > rowStretch*depth || d.Distance(c) < 0.3*length || orient(a, b, c) < 0 || orient(a, b, d) < 0 ||
		orient(a, c, d) < 0 || orient(b, c, d) < 0 {
		return false
	}
	if p := &g.plan.pieces[x.piece]; !vs[x.a].ok || !vs[x.b].ok {
		if m := p.at(0.5 * (x.t0 + x.t1)); m.Distance(a.Lerp(b, 0.5)) > rowRise*depth {
			return false
		}
	}
	if !vs[x.a].ok && g.tight(vs, x.a) || !vs[x.b].ok && g.tight(vs, x.b) {
		return false
	}
	keep := rowClearance * depth
	box := outline.EmptyBox().With(a).With(b).With(c).With(d).Grow(2 * depth)
	for t := range nearby.in(box) {
		if t == s {
			continue
		}
		y := &g.segments[t]
		p, q := g.plan.vertices[y.a], g.plan.vertices[y.b]
		touching := y.a == x.a || y.a == x.b || y.b == x.a || y.b == x.b
		if !touching && (chordDistance(c, d, p, q) < keep || chordDistance(a, d, p, q) < keep/2 || chordDistance(b, c, p, q) < keep/2) {
			return false
		}
		if touching && g.plan.pieces[y.piece].loop == none {
			return false // a mesh line starts from this stretch of the boundary
		}
		// The matches of other stretches, in front of the chain.
		for _, v := range [2]int32{y.a, y.b} {
			if v != x.a && v != x.b && vs[v].ok && chordDistance(c, d, vs[v].match, vs[v].match) < keep/2 {
				return false
			}
		}
	}
	return true
}

// tight reports whether the rows that end at vertex v leave less than a sharp angle of the region there.
func (g *mesher) tight(vs []rowVertex, v int32) bool {
	toward := func(w int32) outline.Point {
		p := g.plan.vertices[w]
		if vs[w].ok {
			p = vs[w].match
		}
		return p.Sub(g.plan.vertices[v])
	}
	from, to := toward(g.segments[vs[v].after].b), toward(g.segments[vs[v].before].a)
	angle := math.Atan2(from.Cross(to), from.Dot(to)) // of the region, counterclockwise
	return angle > 0 && angle < sharpAngle
}

// chordDistance returns the distance between the straight stretches ab and cd, 0 when they cross.
func chordDistance(a, b, c, d outline.Point) float64 {
	if opposite(orient(a, b, c), orient(a, b, d)) && opposite(orient(c, d, a), orient(c, d, b)) {
		return 0
	}
	least := math.Inf(1)
	for _, p := range [2]outline.Point{a, b} {
		_, e := outline.Line(c, d).Nearest(p)
		least = math.Min(least, e)
	}
	for _, p := range [2]outline.Point{c, d} {
		_, e := outline.Line(a, b).Nearest(p)
		least = math.Min(least, e)
	}
	return least
}

// shortenBare divides boundary segments without a row down to what EdgeSize wants.
func (g *mesher) shortenBare(vs []rowVertex, features int, across *widths) error {
	if g.options.EdgeSize == nil {
		return nil
	}
	all := make([]segment, 0, len(g.segments))
	for s, x := range g.segments {
		p := &g.plan.pieces[x.piece]
		if s >= features || p.loop == none || vs[x.a].ok || vs[x.b].ok {
			all = append(all, x)
			continue
		}
		bound, err := g.edgeSize(p, 0.5*(x.t0+x.t1), across)
		if err != nil {
			return err
		}
		n := int(math.Ceil(g.plan.vertices[x.a].Distance(g.plan.vertices[x.b])/bound - 0.15))
		last, t := x.a, x.t0
		for k := 1; k < n; k++ {
			u := x.t0 + (x.t1-x.t0)*float64(k)/float64(n)
			v := g.plan.add(p.at(u))
			g.sharp = append(g.sharp, false)
			all = append(all, segment{piece: x.piece, t0: t, t1: u, a: last, b: v})
			last, t = v, u
		}
		all = append(all, segment{piece: x.piece, t0: t, t1: x.t1, a: last, b: x.b})
	}
	g.segments = all
	return nil
}
