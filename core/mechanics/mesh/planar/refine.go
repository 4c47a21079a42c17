package planar

import (
	"container/heap"
	"math"

	"hushframe/core/mechanics/outline"
)

// sizeFactor is the largest circumradius allowed, in wanted side lengths. An equilateral triangle has 0.577; with this
// bound the triangles have about the area of equilateral ones with the wanted sides, since most fall well below it.
const sizeFactor = 0.72

// crampedSize, in wanted side lengths, is the side length below which angles and lenses are no longer cared for, so that
// two boundaries a hair's breadth apart do not call for triangles without end.
const crampedSize = 1e-3

// badTriangle waits to be removed. It counts only while its corners are still a triangle.
type badTriangle struct {
	urgency float64 // largest first
	order   int64   // earliest first among equals
	t       int32
	v       [3]int32
}

type badHeap struct {
	items []badTriangle
	count int64
}

func (h *badHeap) Len() int { return len(h.items) }
func (h *badHeap) Less(i, j int) bool {
	a, b := &h.items[i], &h.items[j]
	if a.urgency != b.urgency {
		return a.urgency > b.urgency
	}
	return a.order < b.order
}
func (h *badHeap) Swap(i, j int) { h.items[i], h.items[j] = h.items[j], h.items[i] }
func (h *badHeap) Push(x any)    { h.items = append(h.items, x.(badTriangle)) }
func (h *badHeap) Pop() any {
	x := h.items[len(h.items)-1]
	h.items = h.items[:len(h.items)-1]
	return x
}

// refine adds vertices until every segment is clear of vertices in its lens and every triangle is small and good
// enough, but for those at sharp corners.
func (g *mesher) refine() error {
	for s := range g.segments {
		g.judgeSegment(int32(s))
	}
	if err := g.divideWorn(); err != nil {
		return err
	}
	for t := range g.t {
		if err := g.judge(int32(t)); err != nil {
			return err
		}
	}
	for {
		if err := g.removeBad(); err != nil || !g.complete {
			return err
		}
		before := len(g.segments)
		if err := g.divideBent(); err != nil {
			return err
		}
		if len(g.segments) == before {
			return nil
		}
	}
}

// removeBad works off the queue of bad triangles.
func (g *mesher) removeBad() error {
	for round := 0; g.bad.Len() > 0; round++ {
		if g.options.Stop != nil && round%1000 == 0 {
			if err := g.options.Stop(); err != nil {
				return err
			}
		}
		if len(g.p) >= g.options.MaxVertices {
			g.complete = false
			return nil
		}
		b := heap.Pop(&g.bad).(badTriangle)
		if g.t[b.t].v != b.v {
			continue
		}
		if err := g.remove(b); err != nil {
			return err
		}
	}
	return nil
}

// divideBent divides segments so curved that a triangle along them would not be sound with a mid-side node on the curve.
func (g *mesher) divideBent() error {
	var bent []int32
	for t := range g.t {
		x := &g.t[t]
		if !g.inside[x.zone] {
			continue
		}
		worst, deepest := none, 0.0
		var c [6]outline.Point
		cusp := false // a corner between two segments that may touch there stays as it is however often they are divided
		for i, s := range x.seg {
			cusp = cusp || g.sharp[x.v[i]] && x.seg[next(i)] != none && x.seg[prev(i)] != none
			// Side i lies opposite corner i; node 3 is between corners 0 and 1, which is side 2.
			c[i] = g.p[x.v[i]]
			mid := g.middle(int32(t), i)
			c[3+next(i)] = mid
			if s != none && !g.plan.pieces[g.segments[s].piece].straight {
				if d := mid.Distance(g.corner(int32(t), next(i)).Lerp(g.corner(int32(t), prev(i)), 0.5)); d > deepest {
					worst, deepest = s, d
				}
			}
		}
		if worst != none && !cusp && leastJacobian(c) < soundness {
			bent = append(bent, worst)
		}
	}
	for _, s := range bent {
		x := &g.segments[s]
		x.final = false
		if err := g.split(s, 1e-5, 0); err != nil {
			return err
		}
	}
	return g.divideWorn()
}

// judgeSegment queues a segment when a corner opposite, on a side that is in the region, lies in its lens.
func (g *mesher) judgeSegment(s int32) {
	x := &g.segments[s]
	if x.final || g.queued[s] {
		return
	}
	t, i, ok := g.side(x.a, x.b)
	if !ok {
		panic("planar: a segment is not a side")
	}
	u, j := g.facing(t, i)
	if g.refined[g.t[t].zone] && g.inLens(s, g.corner(t, i)) || g.refined[g.t[u].zone] && g.inLens(s, g.corner(u, j)) {
		g.queue(s)
	}
}

func (g *mesher) queue(s int32) {
	if !g.queued[s] && !g.segments[s].final {
		g.queued[s] = true
		g.worn = append(g.worn, s)
	}
}

// inLens reports whether the segment is seen from p at more than 120 degrees.
func (g *mesher) inLens(s int32, p outline.Point) bool {
	a, b := g.p[g.segments[s].a].Sub(p), g.p[g.segments[s].b].Sub(p)
	d := a.Dot(b)
	return d < 0 && d*d > 0.25*a.Dot(a)*b.Dot(b)
}

// divideWorn divides the queued segments and those that this wears.
func (g *mesher) divideWorn() error {
	for len(g.worn) > 0 {
		s := g.worn[0]
		g.worn = g.worn[1:]
		g.queued[s] = false
		if err := g.split(s, 2*crampedSize, 0); err != nil {
			return err
		}
	}
	return nil
}

// split divides a segment, unless it is shorter than least wanted sizes, at its middle or on a circle about a sharp end.
// A segment in the way is divided first.
func (g *mesher) split(s int32, least float64, depth int) error {
	x := g.segments[s]
	if x.final || len(g.p) >= g.options.MaxVertices {
		return nil
	}
	p := &g.plan.pieces[x.piece]
	t := 0.5 * (x.t0 + x.t1)
	length := g.p[x.a].Distance(g.p[x.b])
	h, err := g.sizeAt(g.p[x.a])
	if err != nil {
		return err
	}
	if length < least*h {
		g.segments[s].final = true
		return nil
	}
	if g.sharp[x.a] != g.sharp[x.b] {
		r := math.Exp2(math.Floor(math.Log2(length / 1.5))) // between a third and two thirds of it
		if g.sharp[x.a] {
			t = g.onCircle(p, x.t0, x.t1, r)
		} else {
			t = g.onCircle(p, x.t1, x.t0, r)
		}
	}
	for range 4 {
		v, by, ok := g.divideSegment(s, t, p.at(t))
		if ok {
			return g.settle(v)
		}
		if by == none || depth > 20 {
			break
		}
		before := len(g.segments)
		if err := g.split(by, least, depth+1); err != nil {
			return err
		}
		if len(g.segments) == before {
			break
		}
		if now := g.segments[s]; now != x {
			return nil
		}
	}
	g.segments[s].final = true
	return nil
}

// settle judges all that a new vertex changed: the triangles about it and the segments it can see.
func (g *mesher) settle(v int32) error {
	var err error
	g.star(v, func(t int32, k int) bool {
		if s := g.t[t].seg[k]; s != none && g.refined[g.t[t].zone] && g.inLens(s, g.p[v]) {
			g.queue(s)
		}
		if s := g.t[t].seg[next(k)]; s != none {
			g.judgeSegment(s)
		}
		err = g.judge(t)
		return err == nil
	})
	return err
}

// judge queues a triangle of the region that is too large or has too small an angle.
func (g *mesher) judge(t int32) error {
	if !g.refined[g.t[t].zone] {
		return nil
	}
	a, b, c := g.corners(t)
	h, err := g.sizeAt(outline.Point{X: (a.X + b.X + c.X) / 3, Y: (a.Y + b.Y + c.Y) / 3})
	if err != nil {
		return err
	}
	i, shortest, radius := g.shape(t)
	urgency := 0.0
	x := &g.t[t]
	corner := x.seg[next(i)] != none && x.seg[prev(i)] != none
	if sine := shortest / (2 * radius); sine < math.Sin(g.options.MinAngle) && shortest > crampedSize*h && !corner {
		urgency = 1 + 1/sine
	} else if radius > sizeFactor*h {
		urgency = 1 - sizeFactor*h/radius
	} else {
		return nil
	}
	g.bad.count++
	heap.Push(&g.bad, badTriangle{urgency, g.bad.count, t, g.t[t].v})
	return nil
}

// shape returns the shortest side of t, its length and the radius of the circle through the corners.
func (g *mesher) shape(t int32) (shortest int, length, radius float64) {
	var l [3]float64
	for i := range 3 {
		l[i] = g.corner(t, next(i)).Distance(g.corner(t, prev(i)))
		if l[i] < l[shortest] {
			shortest = i
		}
	}
	a, b, c := g.corners(t)
	return shortest, l[shortest], l[0] * l[1] * l[2] / (2 * b.Sub(a).Cross(c.Sub(a)))
}

// remove inserts a vertex that does away with a bad triangle, or divides the segments in the way of that.
func (g *mesher) remove(b badTriangle) error {
	target := g.target(b.t)
	t, blocked := g.walk(b.t, target)
	if blocked == none && t != none {
		if g.kindOfSpot(t, target) {
			return nil
		}
		worn := g.wornBy(t, target)
		if len(worn) == 0 {
			v := g.insertAt(t, g.triangulation.on(t, target), target)
			g.kind = append(g.kind, ofInside)
			g.on = append(g.on, none)
			g.sharp = append(g.sharp, false)
			if err := g.settle(v); err != nil {
				return err
			}
			return g.divideWorn()
		}
		return g.divideAndRetry(b, worn)
	}
	if blocked != none {
		return g.divideAndRetry(b, []int32{blocked})
	}
	return nil
}

// kindOfSpot reports whether a new vertex in t would fall on a corner or on a segment.
func (g *mesher) kindOfSpot(t int32, p outline.Point) bool {
	for i := range 3 {
		if g.corner(t, i) == p {
			return true
		}
	}
	i := g.triangulation.on(t, p)
	return i >= 0 && g.t[t].seg[i] != none
}

// divideAndRetry divides the segments in the way of removing b and queues it again. For the sake of an angle it leaves
// segments at sharp corners alone: that would make another narrow triangle of the same shape, and in a cusp a worse one.
func (g *mesher) divideAndRetry(b badTriangle, worn []int32) error {
	if b.urgency > 1 {
		for _, s := range worn {
			if g.sharp[g.segments[s].a] || g.sharp[g.segments[s].b] {
				return nil
			}
		}
	}
	before := len(g.segments)
	for _, s := range worn {
		g.queue(s)
	}
	if err := g.divideWorn(); err != nil {
		return err
	}
	if len(g.segments) > before && g.t[b.t].v == b.v {
		g.bad.count++
		b.order = g.bad.count
		heap.Push(&g.bad, b)
	}
	return nil
}

// target returns where a new vertex removes triangle t: the centre of its circle, or nearer to its shortest side, so
// that the triangle with that side just has the angle wanted.
func (g *mesher) target(t int32) outline.Point {
	i, shortest, _ := g.shape(t)
	p, q, r := g.corner(t, next(i)), g.corner(t, prev(i)), g.corner(t, i)
	d, e := q.Sub(p), r.Sub(p)
	x := 2 * d.Cross(e)
	dd, ee := d.Dot(d), e.Dot(e)
	centre := outline.Point{X: (e.Y*dd - d.Y*ee) / x, Y: (d.X*ee - e.X*dd) / x} // from p
	half := d.Scale(0.5)
	out := centre.Sub(half)
	reach := 0.95 * 0.5 * shortest / math.Tan(g.options.MinAngle/2)
	if l := out.Norm(); l > reach {
		out = out.Scale(reach / l)
	}
	return p.Add(half).Add(out)
}

// walk goes straight from the middle of t to p. It returns the triangle that holds p, or the segment in the way.
func (g *mesher) walk(t int32, p outline.Point) (end, blocked int32) {
	a, b, c := g.corners(t)
	o := outline.Point{X: (a.X + b.X + c.X) / 3, Y: (a.Y + b.Y + c.Y) / 3}
	from := none
	for range len(g.t) + 8 {
		if g.holds(t, p) {
			return t, none
		}
		exit := -1
		for i := range 3 {
			if g.t[t].n[i] == from && from != none {
				continue
			}
			x, y := g.corner(t, next(i)), g.corner(t, prev(i))
			if orient(o, p, x) <= 0 && orient(o, p, y) >= 0 && orient(x, y, p) < 0 {
				exit = i
				break
			}
		}
		if exit < 0 {
			return none, none
		}
		if s := g.t[t].seg[exit]; s != none {
			return none, s
		}
		from, t = t, g.t[t].n[exit]
	}
	return none, none
}

// wornBy returns the segments that a vertex at p, inside t, would see and whose lens holds it.
func (g *mesher) wornBy(t int32, p outline.Point) []int32 {
	for len(g.visited) < len(g.t) {
		g.visited = append(g.visited, 0)
	}
	g.stamp++
	g.visited[t] = g.stamp
	cavity := []int32{t}
	var worn []int32
	for n := 0; n < len(cavity); n++ {
		x := &g.t[cavity[n]]
		for i, u := range x.n {
			if s := x.seg[i]; s != none {
				if g.inLens(s, p) {
					worn = append(worn, s)
				}
				continue
			}
			if u == none || g.visited[u] == g.stamp {
				continue
			}
			a, b, c := g.corners(u)
			if inCircle(a, b, c, p) > 0 {
				g.visited[u] = g.stamp
				cavity = append(cavity, u)
			}
		}
	}
	return worn
}
