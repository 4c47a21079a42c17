package planar

import (
	"fmt"
	"math"
	"sort"

	"hushframe/core/mechanics/outline"
)

// tiny, times the diagonal of the region, is the length below which parts of its boundary are one place.
const tiny = 1e-8

// plan is the arrangement of all boundaries and mesh lines: pieces of curves that meet only at plan vertices.
type plan struct {
	vertices []outline.Point
	pieces   []piece
	small    float64 // distances on the boundary below this are none (m)
}

// piece is the stretch of a curve between two plan vertices. Its places are those of the curve, moved by an amount
// that changes evenly along the piece so that the ends agree with the vertices.
type piece struct {
	curve    outline.Curve // only the stretch
	a, b     int32
	pa, pb   outline.Point // where the vertices are
	loop     int32         // region loop, 0 the outer one, none for a mesh line
	index    int32         // of the source curve in that loop
	straight bool
	row      bool // the chain of a row, the row on its right
}

func (p *piece) at(t float64) outline.Point {
	switch {
	case t == 0:
		return p.pa
	case t == 1:
		return p.pb
	}
	q := p.curve.At(t)
	if p.pa == p.curve.P0 && p.pb == p.curve.P1 {
		return q
	}
	return q.Add(p.pa.Sub(p.curve.P0).Lerp(p.pb.Sub(p.curve.P1), t))
}

// check reports what keeps a region from being triangulated.
func check(region outline.Region) error {
	diagonal := region.Bounds().Diagonal()
	if len(region.Outer) == 0 || !(diagonal > 0) || math.IsInf(diagonal, 1) {
		return fmt.Errorf("the outer loop is empty")
	}
	loops := region.Loops()
	names := make([]string, len(loops))
	boxes := make([]outline.Box, len(loops))
	for i, l := range loops {
		names[i] = fmt.Sprintf("hole %d", i)
		if i == 0 {
			names[i] = "the outer loop"
		}
		boxes[i] = l.Bounds()
		for _, c := range l {
			for _, p := range [4]outline.Point{c.P0, c.P1, c.C1, c.C2} {
				if math.IsNaN(p.X+p.Y) || math.IsInf(p.X+p.Y, 0) {
					return fmt.Errorf("%s has a coordinate that is not a number", names[i])
				}
			}
		}
		if gap := l.Gap(); gap > 1e-4*diagonal {
			return fmt.Errorf("%s is open by %g m near %s", names[i], gap, place(l[0].P0))
		}
		if x := l.SelfCrossings(); len(x) > 0 {
			return fmt.Errorf("%s crosses or touches itself at %s", names[i], place(x[0].At))
		}
		area := l.Area()
		if size := boxes[i].Diagonal(); math.Abs(area) <= 1e-9*size*size {
			return fmt.Errorf("%s near %s encloses no area", names[i], place(l[0].P0))
		}
		if (area > 0) != (i == 0) {
			return fmt.Errorf("%s runs the wrong way round", names[i])
		}
	}
	for i := range loops {
		for j := i + 1; j < len(loops); j++ {
			if !boxes[i].Grow(tiny * diagonal).Meets(boxes[j]) {
				continue
			}
			for _, a := range loops[i] {
				for _, b := range loops[j] {
					if m := outline.Meet(a, b, tiny*diagonal); len(m) > 0 {
						return fmt.Errorf("%s and %s meet at %s", names[i], names[j], place(m[0].At))
					}
				}
			}
		}
	}
	for j := 1; j < len(loops); j++ {
		p := loops[j][0].P0
		if !loops[0].Contains(p) {
			return fmt.Errorf("%s at %s lies outside the outer loop", names[j], place(p))
		}
		for i := 1; i < len(loops); i++ {
			if i != j && loops[i].Contains(p) {
				return fmt.Errorf("%s at %s lies inside %s", names[j], place(p), names[i])
			}
		}
	}
	return nil
}

func place(p outline.Point) string { return fmt.Sprintf("(%.6g, %.6g) m", p.X, p.Y) }

// cut is a place where a curve is divided.
type cut struct {
	t      float64
	vertex int32
}

// source is one curve on its way into the plan.
type source struct {
	curve       outline.Curve
	bounds      outline.Box
	loop, index int32
	cuts        []cut
}

// arrange cuts all curves where they meet. Region loops keep their course; mesh lines are moved by at most snap.
func arrange(region outline.Region, lines []outline.Loop, snap float64) *plan {
	pl := &plan{small: tiny * region.Bounds().Diagonal()}
	var sources []source
	for k, l := range region.Loops() {
		sources = append(sources, pl.chain(l, int32(k), pl.small)...)
	}
	outer := len(sources)
	for _, l := range lines {
		added := pl.lineSources(l, sources, snap)
		for _, s := range added {
			sources = pl.meet(sources, s, snap)
		}
	}
	for i := range sources {
		if i < outer {
			pl.cutPieces(&sources[i], 0, func(outline.Curve) bool { return true })
			continue
		}
		pl.cutPieces(&sources[i], snap, func(c outline.Curve) bool { return pl.needed(c, region, snap) })
	}
	return pl
}

func (pl *plan) add(p outline.Point) int32 {
	pl.vertices = append(pl.vertices, p)
	return int32(len(pl.vertices) - 1)
}

// chain turns a region loop into sources that share their end vertices; curves no longer than small are left out.
func (pl *plan) chain(l outline.Loop, loop int32, small float64) []source {
	var kept []source
	for i, c := range l {
		if c.Length() > small {
			kept = append(kept, source{curve: c, bounds: c.Bounds(), loop: loop, index: int32(i)})
		}
	}
	first := int32(len(pl.vertices))
	for i := range kept {
		pl.add(kept[i].curve.P0)
		following := first + int32((i+1)%len(kept))
		kept[i].cuts = []cut{{0, first + int32(i)}, {1, following}}
	}
	return kept
}

// lineSources turns a mesh line into sources; its corners join boundaries and lines within snap.
func (pl *plan) lineSources(l outline.Loop, sources []source, snap float64) []source {
	var added []source
	for i, c := range l {
		if c.Length() > snap/2 {
			added = append(added, source{curve: c, bounds: c.Bounds(), loop: none, index: int32(i)})
		}
	}
	if len(added) == 0 {
		return nil
	}
	ends := make([]int32, len(added))
	for i := range added {
		ends[i] = pl.vertexNear(added[i].curve.P0, sources, snap)
	}
	for i := range added {
		added[i].cuts = []cut{{0, ends[i]}, {1, ends[(i+1)%len(added)]}}
	}
	return added
}

// nearest returns the plan vertex nearest to p among those within snap that lie on the boundary curve on, when that is
// given, or none.
func (pl *plan) nearest(p outline.Point, snap float64, on *source) int32 {
	best, bestD := none, snap
	for v, q := range pl.vertices {
		d := q.Distance(p)
		if d > bestD {
			continue
		}
		if on != nil {
			if _, off := on.curve.Nearest(q); off > pl.small {
				continue
			}
		}
		best, bestD = int32(v), d
	}
	return best
}

// vertexNear returns a vertex within snap of p, or a new one on a curve within snap (a boundary before a mesh line), or
// a new one at p.
func (pl *plan) vertexNear(p outline.Point, sources []source, snap float64) int32 {
	if v := pl.nearest(p, snap, nil); v != none {
		return v
	}
	on, onT, bestD := none, 0.0, snap
	for i := range sources {
		s := &sources[i]
		if on != none && sources[on].loop != none && s.loop == none {
			break
		}
		if !s.bounds.Grow(snap).Holds(p) {
			continue
		}
		if t, d := s.curve.Nearest(p); d <= bestD {
			on, onT, bestD = int32(i), t, d
		}
	}
	if on == none {
		return pl.add(p)
	}
	s := &sources[on]
	v := pl.add(s.curve.At(onT))
	s.cuts = append(s.cuts, cut{onT, v})
	return v
}

// meet appends s, a stretch of a mesh line, to the sources and cuts it and those it meets.
func (pl *plan) meet(sources []source, s source, snap float64) []source {
	for i := range sources {
		o := &sources[i]
		if !o.bounds.Grow(snap).Meets(s.bounds) {
			continue
		}
		for _, m := range outline.Meet(o.curve, s.curve, snap) {
			var v int32
			if o.loop == none {
				v = pl.vertexNear(m.At, sources, snap)
			} else if v = pl.nearest(m.At, snap, o); v == none {
				v = pl.add(o.curve.At(m.S))
			}
			o.cutAt(m.S, v, pl.vertices[v])
			s.cutAt(m.T, v, pl.vertices[v])
		}
	}
	return append(sources, s)
}

// cutAt adds a cut at vertex v, which is at p, unless there is one; t is about where.
func (s *source) cutAt(t float64, v int32, p outline.Point) {
	for _, c := range s.cuts {
		if c.vertex == v {
			return
		}
	}
	if s.curve.At(t) != p {
		t, _ = s.curve.Nearest(p)
	}
	s.cuts = append(s.cuts, cut{t, v})
}

// cutPieces turns a source into the pieces between its cuts, but for those that shrink to nothing or are not needed.
func (pl *plan) cutPieces(s *source, snap float64, needed func(outline.Curve) bool) {
	sort.SliceStable(s.cuts, func(i, j int) bool { return s.cuts[i].t < s.cuts[j].t })
	for i := 1; i < len(s.cuts); i++ {
		a, b := s.cuts[i-1], s.cuts[i]
		if a.t >= b.t {
			continue
		}
		c := s.curve.Part(a.t, b.t)
		if a.vertex == b.vertex && c.Length() <= 4*snap || !needed(c) {
			continue
		}
		pl.pieces = append(pl.pieces, piece{
			curve: c, a: a.vertex, b: b.vertex, pa: pl.vertices[a.vertex], pb: pl.vertices[b.vertex],
			loop: s.loop, index: s.index, straight: c.Kind == outline.KindLine,
		})
	}
}

// needed reports whether the stretch c of a mesh line runs inside the region and not along an earlier piece.
func (pl *plan) needed(c outline.Curve, region outline.Region, snap float64) bool {
	const samples = 7
	box := c.Bounds().Grow(snap)
	along := true
	free, freeD := c.At(0.5), 0.0
	for i := range samples {
		p := c.At((float64(i) + 0.5) / samples)
		toBoundary, toAny := math.Inf(1), math.Inf(1)
		for k := range pl.pieces {
			o := &pl.pieces[k]
			if o.loop == none && !o.curve.Bounds().Meets(box) {
				continue
			}
			_, d := o.curve.Nearest(p)
			toAny = math.Min(toAny, d)
			if o.loop != none {
				toBoundary = math.Min(toBoundary, d)
			}
		}
		along = along && toAny <= snap
		if toBoundary > freeD {
			free, freeD = p, toBoundary
		}
	}
	return !along && region.Contains(free)
}
