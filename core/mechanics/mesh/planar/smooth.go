package planar

import (
	"math"

	"hushframe/core/mechanics/outline"
)

// smoothPasses bounds the rounds of smoothing; most of the gain comes with the first three.
const smoothPasses = 6

// smooth moves vertices inside the region towards the middle of their neighbours where that raises the smallest angle
// of the triangles about them, and flips sides afterwards until the circle condition holds again; a flip raises the
// smallest angle of its two triangles. So no smallest angle gets worse.
func (g *mesher) smooth() {
	for range smoothPasses {
		moved := false
		for v := range g.kind {
			if g.kind[v] == ofInside && g.smoothVertex(int32(v)) {
				moved = true
			}
		}
		if !moved {
			return
		}
		g.restore()
	}
}

// smoothVertex tries the full way to the weighted middle of the neighbours, then parts of it.
func (g *mesher) smoothVertex(v int32) bool {
	old := g.p[v]
	// The mean of the circumcentres, or here the centroids, weighted with area, keeps the grading of the neighbourhood.
	var sum outline.Point
	weight := 0.0
	g.star(v, func(t int32, k int) bool {
		a, b, c := g.corners(t)
		area := b.Sub(a).Cross(c.Sub(a))
		sum = sum.Add(a.Add(b).Add(c).Scale(area / 3))
		weight += area
		return true
	})
	goal := sum.Scale(1 / weight)
	before := g.worstAbout(v)
	for _, part := range [3]float64{1, 0.5, 0.25} {
		g.p[v] = old.Lerp(goal, part)
		if g.worstAbout(v) > before+1e-9 && !g.wears(v) {
			return true
		}
	}
	g.p[v] = old
	return false
}

// worstAbout returns the smallest sine of an angle in the triangles about v, negative when one is turned over. Only
// angles up to a right one can be the smallest of a triangle, so sines order them.
func (g *mesher) worstAbout(v int32) float64 {
	worst := 1.0
	g.star(v, func(t int32, _ int) bool {
		a, b, c := g.corners(t)
		if orient(a, b, c) <= 0 {
			worst = -1
			return false
		}
		_, shortest, radius := g.shape(t)
		worst = math.Min(worst, shortest/(2*radius))
		return true
	})
	return worst
}

// wears reports whether v lies in the lens of a segment it sees.
func (g *mesher) wears(v int32) bool {
	in := false
	g.star(v, func(t int32, k int) bool {
		s := g.t[t].seg[k]
		in = in || s != none && g.inLens(s, g.p[v])
		return !in
	})
	return in
}

// restore flips sides of the region that break the circle condition.
func (g *mesher) restore() {
	var work []crossing
	for t := range g.t {
		if !g.inside[g.t[t].zone] {
			continue
		}
		for i := range 3 {
			if g.illegal(int32(t), i) {
				work = append(work, crossing{g.t[t].v[next(i)], g.t[t].v[prev(i)]})
			}
		}
	}
	g.relax(work)
}
