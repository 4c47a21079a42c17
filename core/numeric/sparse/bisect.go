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

// bisect looks for a cheap separator: the best few of all sweeps, improved by local moves.
func bisect(g *graph, places [][3]float64) *bisection {
	const keep = 3
	var cuts []*bisection
	for _, line := range lines(g, places) {
		cuts = append(cuts, sweep(g, line)...)
	}
	slices.SortStableFunc(cuts, func(a, b *bisection) int { return cmp.Compare(a.cost(), b.cost()) })
	cuts = cuts[:min(keep, len(cuts))]
	for _, b := range cuts {
		b.improve(g)
	}
	return slices.MinFunc(cuts, func(a, b *bisection) int { return cmp.Compare(a.cost(), b.cost()) })
}

// sweep returns the two cheapest bisections along a line of all vertices: one whose separator is the last vertices
// before a cut that have neighbours after it, one with the first vertices after a cut that have neighbours before it.
// A vertex at place r with neighbours up to place f is in the separators of the first kind of the cuts in (r, f], so one
// pass over the differences gives all weights.
func sweep(g *graph, line []int32) []*bisection {
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
	best := [2]int{-1, -1}
	cost := [2]float64{math.Inf(1), math.Inf(1)}
	before, l, r := 0.0, 0.0, 0.0
	for c := 1; c < n; c++ {
		before += float64(g.weight[line[c-1]])
		l += left[c]
		r += right[c]
		if v := cutCost(before-l, total-before, l); v < cost[0] {
			best[0], cost[0] = c, v
		}
		if v := cutCost(before, total-before-r, r); v < cost[1] {
			best[1], cost[1] = c, v
		}
	}
	var out []*bisection
	for kind, c := range best {
		if c < 0 {
			continue
		}
		b := &bisection{side: make([]int8, n)}
		for v := range int32(n) {
			first := int(place[v]) < c
			if !first {
				b.side[v] = 1
			}
			if first != (kind == 0) {
				continue
			}
			for _, w := range g.near(v) {
				if (int(place[w]) < c) != first {
					b.side[v] = between
					break
				}
			}
		}
		for v, s := range b.side {
			b.weight[s] += float64(g.weight[v])
		}
		out = append(out, b)
	}
	if len(out) == 0 {
		// Every vertex is next to every other: one side stays empty, and the caller sees that.
		b := &bisection{side: slices.Repeat([]int8{between}, n)}
		b.weight[between] = total
		out = append(out, b)
	}
	return out
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

// directions are the axes, the diagonals of the horizontal plane and the principal axis of the places.
func directions(g *graph, places [][3]float64) [][3]float64 {
	out := [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}, {1, 1, 0}, {1, -1, 0}}
	var mean [3]float64
	total := 0.0
	for v, x := range places {
		w := float64(g.weight[v])
		total += w
		for c := range 3 {
			mean[c] += w * x[c]
		}
	}
	for c := range 3 {
		mean[c] /= total
	}
	var m [3][3]float64
	for v, x := range places {
		w := float64(g.weight[v])
		for a := range 3 {
			for b := range 3 {
				m[a][b] += w * (x[a] - mean[a]) * (x[b] - mean[b])
			}
		}
	}
	axis := [3]float64{1, 0.618, 0.414}
	for range 50 {
		var y [3]float64
		norm := 0.0
		for a := range 3 {
			for b := range 3 {
				y[a] += m[a][b] * axis[b]
			}
			norm += y[a] * y[a]
		}
		if norm == 0 {
			return out
		}
		norm = math.Sqrt(norm)
		for a := range 3 {
			axis[a] = y[a] / norm
		}
	}
	return append(out, axis)
}
