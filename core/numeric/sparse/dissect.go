package sparse

import (
	"cmp"
	"slices"
)

// Vertex sets below this number of unknowns are ordered by minimum degree.
const leafUnknowns = 240

// NestedDissection orders by recursive bisection of the compressed graph. nodeOf[u] is the node of unknown u and coords
// the position of each node (in any length unit); unknowns with the same neighbours have the place of the first of
// them. Separators are taken from sweeps along coordinate directions and along breadth-first numberings and improved by
// local moves; sets that are small are ordered by minimum degree with what surrounds them in view.
//
// It panics when nodeOf does not name a node in coords for each unknown.
func NestedDissection(p *Pattern, nodeOf []int32, coords [][3]float64) Ordering {
	c := compress(p)
	return c.expand(dissect(c, nodeOf, coords))
}

func dissect(c *compressed, nodeOf []int32, coords [][3]float64) []int32 {
	if len(nodeOf) != len(c.member) {
		panic("sparse: NestedDissection: a node is needed for each unknown")
	}
	n := c.order()
	d := &dissector{g: &c.graph, place: make([][3]float64, n), local: make([]int32, n), set: make([]int32, n)}
	all := make([]int32, n)
	for v := range all {
		all[v] = int32(v)
		d.place[v] = coords[nodeOf[c.member[c.first[v]]]]
	}
	return d.dissect(all, nil)
}

// dissectionWorth is the number of operations of the elimination for each unknown from which on dissection is tried. It
// takes ten times as long as minimum degree to find and saves a third of the operations at best.
const dissectionWorth = 2e5

// Order returns MinimumDegree, or the cheaper of it and NestedDissection, by the exact number of operations of the
// elimination, where that is much work. Dissection wins on wide sheets, minimum degree on frames of slender arms. Without
// coordinates (both nil) it is MinimumDegree.
func Order(p *Pattern, nodeOf []int32, coords [][3]float64) Ordering {
	c := compress(p)
	best := minimumDegree(&c.graph, nil)
	if coords == nil {
		return c.expand(best)
	}
	if least := operations(&c.graph, best); least > dissectionWorth*float64(p.N) {
		if other := dissect(c, nodeOf, coords); operations(&c.graph, other) < least {
			best = other
		}
	}
	return c.expand(best)
}

func operations(g *graph, order []int32) float64 { return newSymbolic(g, slices.Clone(order)).flops() }

// dissector carries the graph through the recursion.
type dissector struct {
	g     *graph
	place [][3]float64
	local []int32 // number of a vertex in the set at hand
	set   []int32 // stamp of the set a vertex was last part of
	stamp int32
}

// dissect appends an order of the vertices of a set.
func (d *dissector) dissect(vertices []int32, order []int32) []int32 {
	weight := int32(0)
	for _, v := range vertices {
		weight += d.g.weight[v]
	}
	if weight <= leafUnknowns {
		return d.leaf(vertices, order)
	}
	sub := d.within(vertices)
	if parts := sub.components(); len(parts) > 1 {
		for _, part := range parts {
			order = d.dissect(globals(part, vertices), order)
		}
		return order
	}
	places := make([][3]float64, len(vertices))
	for k, v := range vertices {
		places[k] = d.place[v]
	}
	cut := bisect(sub, places)
	var sides [3][]int32
	for k, v := range vertices {
		sides[cut.side[k]] = append(sides[cut.side[k]], v)
	}
	if len(sides[0]) == 0 || len(sides[1]) == 0 {
		return d.leaf(vertices, order) // too tightly joined to divide
	}
	order = d.dissect(sides[0], order)
	order = d.dissect(sides[1], order)
	return append(order, sides[between]...)
}

func globals(part, vertices []int32) []int32 {
	out := make([]int32, len(part))
	for k, v := range part {
		out[k] = vertices[v]
	}
	return out
}

// number marks vertices as the set at hand.
func (d *dissector) number(vertices []int32) {
	d.stamp++
	for k, v := range vertices {
		d.set[v], d.local[v] = d.stamp, int32(k)
	}
}

// within is the graph between the vertices of a set, numbered as listed.
func (d *dissector) within(vertices []int32) *graph {
	d.number(vertices)
	sub := &graph{ptr: make([]int32, 1, len(vertices)+1), weight: make([]int32, len(vertices))}
	for k, v := range vertices {
		sub.weight[k] = d.g.weight[v]
		for _, w := range d.g.near(v) {
			if d.set[w] == d.stamp {
				sub.adj = append(sub.adj, d.local[w])
			}
		}
		sub.ptr = append(sub.ptr, int32(len(sub.adj)))
	}
	return sub
}

// leaf orders a set by minimum degree. Its neighbours outside, all eliminated later, are added as a halo.
func (d *dissector) leaf(vertices []int32, order []int32) []int32 {
	d.number(vertices)
	all := slices.Clone(vertices)
	for _, v := range vertices {
		for _, w := range d.g.near(v) {
			if d.set[w] != d.stamp {
				d.set[w] = d.stamp
				all = append(all, w)
			}
		}
	}
	sub := d.within(all)
	halo := make([]bool, len(all))
	for k := len(vertices); k < len(all); k++ {
		halo[k] = true
	}
	for _, k := range minimumDegree(sub, halo) {
		order = append(order, all[k])
	}
	return order
}

// components lists the vertices of each connected part, parts by lowest vertex, vertices rising.
func (g *graph) components() [][]int32 {
	seen := make([]bool, g.order())
	var parts [][]int32
	for root := range int32(g.order()) {
		if seen[root] {
			continue
		}
		seen[root] = true
		part := []int32{root}
		for k := 0; k < len(part); k++ {
			for _, w := range g.near(part[k]) {
				if !seen[w] {
					seen[w] = true
					part = append(part, w)
				}
			}
		}
		slices.Sort(part)
		parts = append(parts, part)
	}
	return parts
}

// breadthFirst numbers a connected graph by distance from root.
func (g *graph) breadthFirst(root int32) []int32 {
	seen := make([]bool, g.order())
	seen[root] = true
	line := make([]int32, 1, g.order())
	line[0] = root
	for k := 0; k < len(line); k++ {
		for _, w := range g.near(line[k]) {
			if !seen[w] {
				seen[w] = true
				line = append(line, w)
			}
		}
	}
	return line
}

// lines returns the vertices in several orders along which the graph is stretched out: by projection on coordinate
// directions, and by breadth-first search from far ends.
func lines(g *graph, places [][3]float64) [][]int32 {
	var out [][]int32
	for _, dir := range directions(g, places) {
		at := make([]float64, len(places))
		line := make([]int32, len(places))
		for v, x := range places {
			at[v] = x[0]*dir[0] + x[1]*dir[1] + x[2]*dir[2]
			line[v] = int32(v)
		}
		slices.SortFunc(line, func(a, b int32) int { return cmp.Or(cmp.Compare(at[a], at[b]), cmp.Compare(a, b)) })
		out = append(out, line)
	}
	far := g.breadthFirst(0)
	for range 2 {
		far = g.breadthFirst(far[len(far)-1])
		out = append(out, far)
	}
	return out
}
