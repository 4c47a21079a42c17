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
	d := &dissector{g: &c.graph, local: make([]int32, n), set: make([]int32, n)}
	all, place := make([]int32, n), make([][3]float64, n)
	for v := range all {
		all[v] = int32(v)
		place[v] = coords[nodeOf[c.member[c.first[v]]]]
	}
	return d.dissect(region{all, stretched(place)}, nil)
}

// dissectionWorth is the number of operations of the elimination for each unknown from which on dissection is tried. It
// takes five times as long as minimum degree to find and saves a third of the operations at best. On frames of plates pressed together,
// 60 to 230 thousand unknowns and about 1e5 operations each, it saves nothing and takes as long as the elimination; on crosses
// of 90 to 365 thousand, 5e4 to 9e4, it breaks even or saves a twentieth of the processor time of a whole solve.
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
	local []int32 // number of a vertex in the set at hand
	set   []int32 // stamp of the set a vertex was last part of
	stamp int32
}

// region is a set of vertices, rising, and the same in the order of their projections on some directions.
type region struct {
	vertices []int32
	lines    [][]int32
}

// dissect appends an order of the vertices of a region.
func (d *dissector) dissect(r region, order []int32) []int32 {
	weight := int32(0)
	for _, v := range r.vertices {
		weight += d.g.weight[v]
	}
	if weight <= leafUnknowns {
		return d.leaf(r.vertices, order)
	}
	sub := d.within(r.vertices)
	if part, parts := sub.components(); parts > 1 {
		for _, p := range d.divide(r, part, parts) {
			order = d.dissect(p, order)
		}
		return order
	}
	cut := bisect(sub, append(d.locals(r.lines), sub.farLines()...))
	sides := d.divide(r, cut.sides(), 3)
	if len(sides[0].vertices) == 0 || len(sides[1].vertices) == 0 {
		return d.leaf(r.vertices, order) // too tightly joined to divide
	}
	order = d.dissect(sides[0], order)
	order = d.dissect(sides[1], order)
	return append(order, sides[between].vertices...)
}

// locals returns lines in the numbers of the set at hand.
func (d *dissector) locals(lines [][]int32) [][]int32 {
	out := make([][]int32, len(lines))
	for i, line := range lines {
		out[i] = make([]int32, len(line))
		for k, v := range line {
			out[i][k] = d.local[v]
		}
	}
	return out
}

// divide divides the region at hand by the part that each of its vertices belongs to.
func (d *dissector) divide(r region, part []int32, parts int) []region {
	out := make([]region, parts)
	size := make([]int, parts)
	for _, p := range part {
		size[p]++
	}
	for k, list := range append([][]int32{r.vertices}, r.lines...) {
		split := make([][]int32, parts)
		for p := range split {
			split[p] = make([]int32, 0, size[p])
		}
		for _, v := range list {
			p := part[d.local[v]]
			split[p] = append(split[p], v)
		}
		for p := range out {
			if k == 0 {
				out[p].vertices = split[p]
			} else {
				out[p].lines = append(out[p].lines, split[p])
			}
		}
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

// components returns the connected part of each vertex, parts numbered by their lowest vertex, and how many there are.
func (g *graph) components() (part []int32, parts int) {
	part = make([]int32, g.order())
	for v := range part {
		part[v] = -1
	}
	var line []int32
	for root := range int32(g.order()) {
		if part[root] >= 0 {
			continue
		}
		part[root] = int32(parts)
		line = append(line[:0], root)
		for k := 0; k < len(line); k++ {
			for _, w := range g.near(line[k]) {
				if part[w] < 0 {
					part[w] = int32(parts)
					line = append(line, w)
				}
			}
		}
		parts++
	}
	return part, parts
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

// farLines returns breadth-first numberings of a connected graph from far ends.
func (g *graph) farLines() [][]int32 {
	far := g.breadthFirst(0)
	var out [][]int32
	for range 2 {
		far = g.breadthFirst(far[len(far)-1])
		out = append(out, far)
	}
	return out
}

// stretched returns all vertices in the orders of their projections on the axes and the diagonals of the horizontal plane.
func stretched(places [][3]float64) [][]int32 {
	var out [][]int32
	at := make([]float64, len(places))
	for _, dir := range [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}, {1, 1, 0}, {1, -1, 0}} {
		line := make([]int32, len(places))
		for v, x := range places {
			at[v] = x[0]*dir[0] + x[1]*dir[1] + x[2]*dir[2]
			line[v] = int32(v)
		}
		slices.SortFunc(line, func(a, b int32) int { return cmp.Or(cmp.Compare(at[a], at[b]), cmp.Compare(a, b)) })
		out = append(out, line)
	}
	return out
}
