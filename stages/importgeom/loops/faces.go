package loops

import (
	"math"
	"sort"

	"hushframe/core/mechanics/outline"
)

// sort splits what is left into connected groups, each a plain loop or a tangle, and nests the loops.
func (g *graph) sort() {
	group := make([]int, len(g.at))
	for i := range group {
		group[i] = i
	}
	root := func(v int) int {
		for group[v] != v {
			group[v] = group[group[v]]
			v = group[v]
		}
		return v
	}
	for _, e := range g.edges {
		if !e.gone {
			a, b := root(e.ends[0]), root(e.ends[1])
			group[max(a, b)] = min(a, b)
		}
	}
	degree := g.degrees()
	members := map[int][]int{}
	var roots []int
	for i, e := range g.edges {
		if e.gone {
			continue
		}
		v := root(e.ends[0])
		if members[v] == nil {
			roots = append(roots, v)
		}
		members[v] = append(members[v], i)
	}
	var found []closed
	for _, v := range roots {
		plain := true
		for _, i := range members[v] {
			plain = plain && degree[g.edges[i].ends[0]] == 2 && degree[g.edges[i].ends[1]] == 2
		}
		if plain {
			found = append(found, g.loop(members[v]))
		} else {
			g.result.Tangles = append(g.result.Tangles, g.tangle(members[v], degree))
		}
	}
	nest(found, g.tol, g.result)
}

// closed is a plain loop, counterclockwise.
type closed struct {
	loop   outline.Loop
	area   float64
	source string
}

// loop puts the edges of a plain group in order.
func (g *graph) loop(edges []int) closed {
	at := map[int][]int{}
	for _, i := range edges {
		for _, v := range g.edges[i].ends {
			at[v] = append(at[v], i)
		}
	}
	e := g.edges[edges[0]]
	c := closed{source: e.Source, loop: outline.Loop{e.Curve}}
	start, v, last := e.ends[0], e.ends[1], edges[0]
	for v != start {
		next := at[v][0]
		if next == last {
			next = at[v][1]
		}
		e, last = g.edges[next], next
		if e.ends[0] == v {
			c.loop, v = append(c.loop, e.Curve), e.ends[1]
		} else {
			c.loop, v = append(c.loop, e.Curve.Reverse()), e.ends[0]
		}
	}
	if c.area = c.loop.Area(); c.area < 0 {
		c.loop, c.area = c.loop.Reverse(), -c.area
	}
	return c
}

// nest finds outlines, holes and countersinks among loops that do not cross.
func nest(found []closed, tol float64, r *Result) {
	sort.SliceStable(found, func(i, j int) bool { return less(found[i], found[j]) })
	boxes := make([]outline.Box, len(found))
	parent := make([]int, len(found))
	depth := make([]int, len(found))
	for i, c := range found {
		boxes[i] = c.loop.Bounds()
		parent[i] = -1
		p := c.loop[0].At(0.5)
		for j := i - 1; j >= 0; j-- { // the smallest around it is the nearest before it
			if boxes[j].Holds(p) && found[j].loop.Contains(p) {
				parent[i], depth[i] = j, depth[j]+1
				break
			}
		}
	}
	// A circle inside a round hole and concentric with it takes the hole's place.
	replaced := make([]int, len(found))
	for i := range replaced {
		replaced[i] = -1
	}
	for i := range found {
		p := parent[i]
		if p < 0 || depth[i]%2 == 1 {
			continue
		}
		centre, radius, round := outline.CircleOf(found[i].loop)
		outer, rim, roundToo := outline.CircleOf(found[p].loop)
		if round && roundToo && centre.Distance(outer) <= math.Max(tol, 0.02*rim) && replaced[p] < 0 {
			replaced[p] = i
			r.Countersinks = append(r.Countersinks, Countersink{centre, rim, radius})
		}
	}
	taken := make([]bool, len(found))
	for _, i := range replaced {
		if i >= 0 {
			taken[i] = true
		}
	}
	for i, c := range found {
		if depth[i]%2 == 1 || taken[i] {
			continue
		}
		var holes []outline.Loop
		for j := range found {
			if parent[j] != i {
				continue
			}
			h := j
			if replaced[j] >= 0 {
				h = replaced[j]
			}
			holes = append(holes, found[h].loop.Reverse())
		}
		r.Outlines = append(r.Outlines, Outline{Region: outline.Region{Outer: c.loop, Holes: holes}, Depth: depth[i], Source: c.source})
	}
}

// less sorts loops by descending area, then by place, so that the order of the drawing does not matter. Areas that
// differ by rounding are equal.
func less(a, b closed) bool {
	if math.Abs(a.area-b.area) > 1e-9*math.Max(a.area, b.area) {
		return a.area > b.area
	}
	p, q := a.loop.Bounds().Min, b.loop.Bounds().Min
	if p.X != q.X {
		return p.X < q.X
	}
	return p.Y < q.Y
}

// half is an edge run through one way.
type half struct {
	edge    int
	reverse bool
}

// tangle describes a group with branches by the faces between its curves.
func (g *graph) tangle(edges []int, degree []int) Tangle {
	t := Tangle{Box: outline.EmptyBox()}
	at := map[int][]half{}
	var vertices []int
	for _, i := range edges {
		e := g.edges[i]
		t.Box = t.Box.Union(e.Curve.Bounds())
		for w, v := range e.ends {
			if at[v] == nil {
				vertices = append(vertices, v)
			}
			at[v] = append(at[v], half{i, w == 1})
		}
	}
	sort.Slice(vertices, func(i, j int) bool {
		p, q := g.at[vertices[i]], g.at[vertices[j]]
		return p.X < q.X || p.X == q.X && p.Y < q.Y
	})
	for _, v := range vertices {
		if degree[v] > 2 && len(t.Places) < 8 {
			t.Places = append(t.Places, Crossing{g.at[v], g.sourcesAt(at[v])})
		}
		g.sortAround(at[v])
	}
	seen := map[half]bool{}
	for _, i := range edges {
		for _, h := range [2]half{{i, false}, {i, true}} {
			if seen[h] {
				continue
			}
			face := 0.0
			for !seen[h] {
				seen[h] = true
				c := g.curve(h)
				face += c.AreaTerm()
				h = g.following(h, at)
			}
			// Faces to the left of their edges have positive area; the outside is the one with negative area.
			if face > 0 {
				t.Area += face
			}
		}
	}
	return t
}

func (g *graph) curve(h half) outline.Curve {
	if h.reverse {
		return g.edges[h.edge].Curve.Reverse()
	}
	return g.edges[h.edge].Curve
}

func (g *graph) sourcesAt(hs []half) []string {
	var out []string
	for _, h := range hs {
		s := g.edges[h.edge].Source
		known := false
		for _, o := range out {
			known = known || o == s
		}
		if !known {
			out = append(out, s)
		}
	}
	return out
}

// sortAround orders the halves leaving a vertex counterclockwise by direction, by where they are a little further on.
func (g *graph) sortAround(hs []half) {
	reach := math.Inf(1)
	for _, h := range hs {
		reach = math.Min(reach, g.edges[h.edge].Curve.Length())
	}
	angle := make(map[half]float64, len(hs))
	for _, h := range hs {
		c := g.curve(h)
		// Places at one small distance from the vertex also tell tangent curves apart.
		d := c.At(0.05 * reach / c.Length()).Sub(c.P0)
		angle[h] = math.Atan2(d.Y, d.X)
	}
	sort.SliceStable(hs, func(i, j int) bool { return angle[hs[i]] < angle[hs[j]] })
}

// following is the next half round the face to the left of h: the one just clockwise of h's way back.
func (g *graph) following(h half, at map[int][]half) half {
	e := g.edges[h.edge]
	v := e.ends[1]
	if h.reverse {
		v = e.ends[0]
	}
	back := half{h.edge, !h.reverse}
	around := at[v]
	for i, o := range around {
		if o == back {
			return around[(i+len(around)-1)%len(around)]
		}
	}
	panic("loops: a half edge is not at its own vertex")
}
