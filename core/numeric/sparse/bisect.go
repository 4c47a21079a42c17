package sparse

import (
	"cmp"
	"container/heap"
	"math"
	"slices"
)

// between is the side of the vertices of a separator; the parts it separates are sides 0 and 1.
const between = 2

// bisection divides the vertices of a graph so that no edge joins side 0 and side 1.
type bisection struct {
	side   []int8
	weight [3]float64 // of the sides and the separator
}

// cost is what a bisection is judged by: the weight s of the separator over the product of the weights of the parts, so
// that a corner cut off must have a much shorter separator than one half from the other.
func (b *bisection) cost() float64 { return cutCost(b.weight[0], b.weight[1], b.weight[between]) }

func cutCost(a, b, s float64) float64 {
	if a <= 0 || b <= 0 {
		return math.Inf(1)
	}
	return s / a / b
}

// sides returns the side of each vertex as a number.
func (b *bisection) sides() []int32 {
	out := make([]int32, len(b.side))
	for v, s := range b.side {
		out[v] = int32(s)
	}
	return out
}

// cut is a place to divide a line of all vertices, and what that costs.
type cut struct {
	line []int32
	at   int
	// first says that the separator is the last vertices before the cut, else the first after it.
	first bool
	cost  float64
}

// bisect looks for a cheap separator: the best few of the cuts along lines of all vertices, improved by local moves.
func bisect(g *graph, lines [][]int32) *bisection {
	const keep = 3
	var cuts []cut
	for _, line := range lines {
		cuts = append(cuts, sweep(g, line)...)
	}
	if len(cuts) == 0 {
		// Every vertex is next to every other: both sides stay empty, and the caller sees that.
		b := &bisection{side: slices.Repeat([]int8{between}, g.order())}
		for _, w := range g.weight {
			b.weight[between] += float64(w)
		}
		return b
	}
	slices.SortStableFunc(cuts, func(a, b cut) int { return cmp.Compare(a.cost, b.cost) })
	var best *bisection
	for _, c := range cuts[:min(keep, len(cuts))] {
		b := c.divide(g)
		b.improve(g)
		if best == nil || b.cost() < best.cost() {
			best = b
		}
	}
	return best
}

// sweep returns the two cheapest cuts of a line of all vertices: one whose separator is the last vertices before it
// that have neighbours after it, one with the first vertices after it that have neighbours before it.
// A vertex at place r with neighbours up to place f is in the separators of the first kind of the cuts in (r, f], so one
// pass over the differences gives all weights.
func sweep(g *graph, line []int32) []cut {
	n := len(line)
	place := make([]int32, n)
	for k, v := range line {
		place[v] = int32(k)
	}
	left := make([]float64, n+1) // weight of the separator of each cut; a cut at c has places below c before it
	right := make([]float64, n+1)
	total := 0.0
	for v := range int32(n) {
		r := place[v]
		lo, hi := r, r
		for _, w := range g.near(v) {
			lo, hi = min(lo, place[w]), max(hi, place[w])
		}
		weight := float64(g.weight[v])
		total += weight
		left[r+1] += weight
		if int(hi)+1 <= n {
			left[hi+1] -= weight
		}
		right[lo+1] += weight
		right[r+1] -= weight
	}
	best := [2]cut{{line, 0, true, math.Inf(1)}, {line, 0, false, math.Inf(1)}}
	before, l, r := 0.0, 0.0, 0.0
	for c := 1; c < n; c++ {
		before += float64(g.weight[line[c-1]])
		l += left[c]
		r += right[c]
		if v := cutCost(before-l, total-before, l); v < best[0].cost {
			best[0].at, best[0].cost = c, v
		}
		if v := cutCost(before, total-before-r, r); v < best[1].cost {
			best[1].at, best[1].cost = c, v
		}
	}
	return slices.DeleteFunc(best[:], func(c cut) bool { return c.at == 0 })
}

// divide makes the bisection of a cut.
func (c *cut) divide(g *graph) *bisection {
	before := make([]bool, len(c.line))
	for _, v := range c.line[:c.at] {
		before[v] = true
	}
	b := &bisection{side: make([]int8, len(c.line))}
	for v, first := range before {
		if !first {
			b.side[v] = 1
		}
		if first == c.first && slices.ContainsFunc(g.near(int32(v)), func(w int32) bool { return before[w] != first }) {
			b.side[v] = between
		}
		b.weight[b.side[v]] += float64(g.weight[v])
	}
	return b
}

// improve moves vertices out of the separator as long as that helps, in the manner of C. Fiduccia and R. Mattheyses (A
// linear-time heuristic for improving network partitions, Design Automation Conference 1982) for vertex separators:
// moving v to a side pulls its neighbours on the other side into the separator; the cheapest move is made even if it
// costs, each vertex moves once in a pass, and the pass is undone back to its best moment.
func (b *bisection) improve(g *graph) {
	for range 8 {
		before := b.cost()
		b.pass(g)
		if !(b.cost() < before) {
			return
		}
	}
}

// move is a vertex on offer to leave the separator for a side, with the change of separator weight that brings.
type move struct {
	vertex int32
	side   int8
	change float64
}

type moves []move

func (m moves) Len() int { return len(m) }
func (m moves) Less(i, j int) bool {
	if m[i].change != m[j].change {
		return m[i].change < m[j].change
	}
	if m[i].vertex != m[j].vertex {
		return m[i].vertex < m[j].vertex
	}
	return m[i].side < m[j].side
}
func (m moves) Swap(i, j int) { m[i], m[j] = m[j], m[i] }
func (m *moves) Push(x any)   { *m = append(*m, x.(move)) }
func (m *moves) Pop() any {
	old := *m
	x := old[len(old)-1]
	*m = old[:len(old)-1]
	return x
}

func (b *bisection) change(g *graph, v int32, side int8) float64 {
	c := -float64(g.weight[v])
	for _, w := range g.near(v) {
		if b.side[w] == 1-side {
			c += float64(g.weight[w])
		}
	}
	return c
}

func (b *bisection) pass(g *graph) {
	var queue moves
	offer := func(v int32) {
		for side := range int8(2) {
			queue = append(queue, move{v, side, b.change(g, v, side)})
		}
	}
	count := 0
	for v, s := range b.side {
		if s == between {
			count++
			offer(int32(v))
		}
	}
	heap.Init(&queue)
	moved := map[int32]bool{}
	type undo struct {
		vertex int32
		side   int8
	}
	var log []undo
	set := func(v int32, side int8) {
		log = append(log, undo{v, b.side[v]})
		b.weight[b.side[v]] -= float64(g.weight[v])
		b.weight[side] += float64(g.weight[v])
		b.side[v] = side
	}
	best, bestAt, idle := b.cost(), 0, 0
	for len(queue) > 0 && idle < 30+count/2 {
		m := heap.Pop(&queue).(move)
		if b.side[m.vertex] != between || moved[m.vertex] {
			continue
		}
		if c := b.change(g, m.vertex, m.side); c != m.change {
			m.change = c
			heap.Push(&queue, m)
			continue
		}
		// No side may grow beyond three quarters or so: the cost sees to small differences.
		if b.weight[m.side]+float64(g.weight[m.vertex]) > 3*b.weight[1-m.side]+3*float64(g.weight[m.vertex]) {
			continue
		}
		moved[m.vertex] = true
		set(m.vertex, m.side)
		for _, w := range g.near(m.vertex) {
			if b.side[w] == 1-m.side {
				set(w, between)
				if !moved[w] {
					for side := range int8(2) {
						heap.Push(&queue, move{w, side, b.change(g, w, side)})
					}
				}
			}
		}
		idle++
		if c := b.cost(); c < best {
			best, bestAt, idle = c, len(log), 0
		}
	}
	for k := len(log) - 1; k >= bestAt; k-- {
		u := log[k]
		b.weight[b.side[u.vertex]] -= float64(g.weight[u.vertex])
		b.weight[u.side] += float64(g.weight[u.vertex])
		b.side[u.vertex] = u.side
	}
}
