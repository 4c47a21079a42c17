package planar

import (
	"fmt"
	"math"
	"sort"

	"hushframe/core/mechanics/outline"
)

// sharpAngle is the angle between pieces below which their corner gets common circles of division.
const sharpAngle = 61 * math.Pi / 180

// divide turns the pieces of the plan into segments no longer than the wanted size, that turn by no more than the
// share of a full turn, and whose curves keep clear of all other vertices.
func (g *mesher) divide() error {
	g.findSharp()
	g.findCovered()
	var across *widths
	if g.options.EdgeSize != nil || g.options.Row != nil {
		across = newWidths(g.region)
	}
	for i := range g.plan.pieces {
		if err := g.dividePiece(int32(i), across); err != nil {
			return err
		}
	}
	if err := g.clearCrescents(); err != nil {
		return err
	}
	g.numberVertices()
	return g.layRows(across)
}

// coveredTurn is the share of PerTurn that holes within a mesh line need: the triangles about them are short anyway, and
// an annulus divides best when its inner sides are not much shorter than its outer ones.
const coveredTurn = 2.0 / 3

// findCovered marks the holes that lie within a mesh line, as the hole under a washer does.
func (g *mesher) findCovered() {
	loops := g.region.Loops()
	g.covered = make([]bool, len(loops))
	for i, hole := range loops[1:] {
		for _, line := range g.options.Lines {
			all := true
			for _, c := range hole {
				all = all && line.Contains(c.P0) && line.Contains(c.At(0.5))
			}
			g.covered[i+1] = g.covered[i+1] || all
		}
	}
}

// findSharp marks plan vertices at which two pieces enclose less than sharpAngle of the region.
func (g *mesher) findSharp() {
	type arm struct {
		angle float64
		reach float64
	}
	arms := make([][]arm, len(g.plan.vertices))
	for i := range g.plan.pieces {
		p := &g.plan.pieces[i]
		length := p.curve.Length()
		u, v := p.curve.Tangent(0), p.curve.Tangent(1)
		arms[p.a] = append(arms[p.a], arm{math.Atan2(u.Y, u.X), length})
		arms[p.b] = append(arms[p.b], arm{math.Atan2(-v.Y, -v.X), length})
	}
	g.sharp = make([]bool, len(g.plan.vertices))
	for v, as := range arms {
		sort.Slice(as, func(i, j int) bool { return as[i].angle < as[j].angle })
		for i := range as {
			j := (i + 1) % len(as)
			between := as[j].angle - as[i].angle
			if j <= i {
				between += 2 * math.Pi
			}
			if len(as) < 2 || between >= sharpAngle {
				continue
			}
			s, c := math.Sincos(as[i].angle + between/2)
			step := 1e-3 * math.Min(as[i].reach, as[j].reach)
			if between < 1e-3 || g.region.Contains(g.plan.vertices[v].Add(outline.Point{X: c, Y: s}.Scale(step))) {
				g.sharp[v] = true
			}
		}
	}
}

// dividePiece lays segments along a piece with lengths that follow the local bound.
func (g *mesher) dividePiece(i int32, across *widths) error {
	p := &g.plan.pieces[i]
	samples := 16
	length := p.curve.Length()
	bound, err := g.bound(p, 0.5, across)
	if err != nil {
		return err
	}
	samples = int(math.Min(4096, math.Max(16, math.Ceil(4*length/bound))))
	// total[k] counts the segments wanted from the start to sample k.
	total := make([]float64, samples+1)
	before := 0.0
	for k := 0; k <= samples; k++ {
		t := float64(k) / float64(samples)
		b, err := g.bound(p, t, across)
		if err != nil {
			return err
		}
		density := p.curve.Derivative(t).Norm() / b
		if k > 0 {
			total[k] = total[k-1] + 0.5*(before+density)/float64(samples)
		}
		before = density
	}
	ts := []float64{0, 1}
	if g.sharp[p.a] {
		ts = append(ts, g.onCircle(p, 0, 1, g.firstCircle(p.a)))
	}
	if g.sharp[p.b] {
		ts = append(ts, g.onCircle(p, 1, 0, g.firstCircle(p.b)))
	}
	sort.Float64s(ts)
	wanted := func(t float64) float64 {
		x := t * float64(samples)
		k := min(int(x), samples-1)
		return total[k] + (x-float64(k))*(total[k+1]-total[k])
	}
	least := 1
	if p.a == p.b {
		least = 3
	}
	from := 0
	for k := 1; k < len(ts); k++ {
		w0, w1 := wanted(ts[k-1]), wanted(ts[k])
		n := max(least, int(math.Ceil(w1-w0-0.15)))
		last := ts[k-1]
		for j := 1; j <= n; j++ {
			t := ts[k]
			if j < n {
				goal := w0 + (w1-w0)*float64(j)/float64(n)
				for from < samples-1 && total[from+1] < goal {
					from++
				}
				t = (float64(from) + (goal-total[from])/(total[from+1]-total[from])) / float64(samples)
			}
			g.segments = append(g.segments, segment{piece: i, t0: last, t1: t})
			last = t
		}
	}
	return nil
}

// bound returns the longest segment wanted at parameter t of a piece.
func (g *mesher) bound(p *piece, t float64, across *widths) (float64, error) {
	at := p.curve.At(t)
	h, err := g.sizeAt(at)
	if err != nil {
		return 0, err
	}
	if k := math.Abs(p.curve.Curvature(t)); k > 0 {
		perTurn := float64(g.options.PerTurn)
		if p.loop != none && g.covered[p.loop] {
			perTurn = math.Max(coveredTurn*perTurn, 4)
		}
		h = math.Min(h, 2*math.Pi/(k*perTurn))
	}
	if p.loop != none && g.options.Row != nil {
		w := g.width(p, t, across)
		if depth, length := g.options.Row(at, w); depth > 0 {
			return math.Max(math.Min(h, length), 1e-5*g.diagonal), nil
		}
	}
	if p.loop != none && g.options.EdgeSize != nil {
		e, err := g.edgeSize(p, t, across)
		if err != nil {
			return 0, err
		}
		h = math.Min(h, e)
	}
	// A cusp of a cubic has no length to be divided; its curvature must not ask for endless segments.
	return math.Max(h, 1e-5*g.diagonal), nil
}

// width returns the local width of the region at parameter t of a boundary piece.
func (g *mesher) width(p *piece, t float64, across *widths) float64 {
	u := p.curve.Tangent(t)
	return across.across(p.curve.At(t), outline.Point{X: -u.Y, Y: u.X})
}

// edgeSize returns what EdgeSize says at parameter t of a boundary piece.
func (g *mesher) edgeSize(p *piece, t float64, across *widths) (float64, error) {
	at := p.curve.At(t)
	e := g.options.EdgeSize(at, g.width(p, t, across))
	if !(e > 0) {
		return 0, fmt.Errorf("the bound on the size at the boundary at %s is %g m; it must be positive", place(at), e)
	}
	return e, nil
}

// firstCircle returns the radius of the outermost circle of division round a sharp vertex: a power of two below a
// third of the shortest piece there and the wanted size.
func (g *mesher) firstCircle(v int32) float64 {
	r := g.options.Size(g.plan.vertices[v])
	for i := range g.plan.pieces {
		if p := &g.plan.pieces[i]; p.a == v || p.b == v {
			r = math.Min(r, p.curve.Length()/3)
		}
	}
	return math.Exp2(math.Floor(math.Log2(r)))
}

// onCircle returns the parameter between from and to at which the piece is at distance r from its place at from. The
// distance must grow along the way, as it does on stretches that turn by less than a quarter.
func (g *mesher) onCircle(p *piece, from, to, r float64) float64 {
	o := p.at(from)
	lo, hi := from, to
	for range 100 {
		m := 0.5 * (lo + hi)
		if m == lo || m == hi {
			break
		}
		if p.at(m).Distance(o) < r {
			lo = m
		} else {
			hi = m
		}
	}
	return hi
}

// clearCrescents halves curved segments until no vertex of another lies between a curve and its chord, so that chords
// cross no more than the curves do.
func (g *mesher) clearCrescents() error {
	type end struct {
		p       outline.Point
		segment int
	}
	for range 60 {
		vertices := make([]end, 0, len(g.segments)+len(g.plan.vertices))
		for i, s := range g.segments {
			vertices = append(vertices, end{g.plan.pieces[s.piece].at(s.t0), i})
		}
		for _, p := range g.plan.vertices {
			vertices = append(vertices, end{p, -1})
		}
		sort.SliceStable(vertices, func(i, j int) bool { return vertices[i].p.X < vertices[j].p.X })
		var split []int
		for i, s := range g.segments {
			p := &g.plan.pieces[s.piece]
			if p.straight {
				continue
			}
			c := newCrescent(p, s.t0, s.t1)
			k := sort.Search(len(vertices), func(k int) bool { return vertices[k].p.X >= c.bounds.Min.X })
			for ; k < len(vertices) && vertices[k].p.X <= c.bounds.Max.X; k++ {
				if c.holds(vertices[k].p) {
					split = append(split, i)
					break
				}
			}
		}
		if len(split) == 0 {
			return nil
		}
		var all []segment
		for i, s := range g.segments {
			if len(split) == 0 || split[0] != i {
				all = append(all, s)
				continue
			}
			split = split[1:]
			m := 0.5 * (s.t0 + s.t1)
			p := &g.plan.pieces[s.piece]
			if p.at(s.t0).Distance(p.at(m)) < 1e-9*g.diagonal {
				return fmt.Errorf("curves run too close together at %s", place(p.at(m)))
			}
			all = append(all, segment{piece: s.piece, t0: s.t0, t1: m}, segment{piece: s.piece, t0: m, t1: s.t1})
		}
		g.segments = all
	}
	return fmt.Errorf("curves run too close together to be told apart")
}

// numberVertices names the ends of all segments in the plan: its own vertices first, then those between segments.
func (g *mesher) numberVertices() {
	for i := range g.segments {
		s := &g.segments[i]
		p := &g.plan.pieces[s.piece]
		s.a, s.b = p.a, p.b
		if s.t0 > 0 {
			s.a = g.segments[i-1].b
		}
		if s.t1 < 1 {
			s.b = g.plan.add(p.at(s.t1))
			g.sharp = append(g.sharp, false)
		}
	}
}
