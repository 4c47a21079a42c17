package loops

import (
	"math"
	"sort"

	"hushframe/core/mechanics/outline"
)

// edge is a piece between two vertices of the graph.
type edge struct {
	Piece
	ends [2]int // vertices of P0 and P1
	gone bool
}

// graph is the set of pieces with their ends made into shared vertices.
type graph struct {
	tol, tight float64
	edges      []edge
	at         []outline.Point // of vertices
	cells      map[[2]int64][]int
	result     *Result
}

// vertex finds or makes the vertex within tight of p.
func (g *graph) vertex(p outline.Point) int {
	size := 2 * g.tight
	cx, cy := int64(math.Floor(p.X/size)), int64(math.Floor(p.Y/size))
	best, bestD := -1, g.tight
	for x := cx - 1; x <= cx+1; x++ {
		for y := cy - 1; y <= cy+1; y++ {
			for _, v := range g.cells[[2]int64{x, y}] {
				if d := g.at[v].Distance(p); d <= bestD {
					best, bestD = v, d
				}
			}
		}
	}
	if best >= 0 {
		return best
	}
	g.at = append(g.at, p)
	key := [2]int64{cx, cy}
	g.cells[key] = append(g.cells[key], len(g.at)-1)
	return len(g.at) - 1
}

// degrees counts the ends that meet at each vertex.
func (g *graph) degrees() []int {
	n := make([]int, len(g.at))
	for _, e := range g.edges {
		if !e.gone {
			n[e.ends[0]]++
			n[e.ends[1]]++
		}
	}
	return n
}

// add puts a piece into the graph; one that is a point vanishes.
func (g *graph) add(p Piece) {
	a, b := g.vertex(p.Curve.P0), g.vertex(p.Curve.P1)
	if a == b && !p.Curve.Closed() && p.Curve.Length() <= 4*g.tight {
		return
	}
	g.edges = append(g.edges, edge{Piece: p, ends: [2]int{a, b}})
}

// cut splits every piece at the places where others cross or touch it.
func (g *graph) cut(pieces []Piece) []Piece {
	cuts := make([][]float64, len(pieces))
	eachNear(pieces, g.tight, func(i, j int) {
		a, b := pieces[i].Curve, pieces[j].Curve
		for _, m := range outline.Meet(a, b, g.tight) {
			cuts[i] = append(cuts[i], m.S)
			cuts[j] = append(cuts[j], m.T)
		}
	})
	var out []Piece
	for i, p := range pieces {
		out = append(out, splitAt(p, cuts[i], g.tol/4)...)
	}
	return out
}

// splitAt cuts a piece at parameters; cuts closer than near (m) to its ends or to each other are left out. A full
// circle that is cut loses its own beginning.
func splitAt(p Piece, cuts []float64, near float64) []Piece {
	sort.Float64s(cuts)
	c := p.Curve
	if c.Closed() {
		if len(cuts) == 0 {
			return []Piece{p}
		}
		first := cuts[0]
		c = outline.ArcOf(c.Centre, c.Radius, c.Start+first*c.Sweep, c.Sweep)
		shifted := cuts[1:]
		for i := range shifted {
			shifted[i] -= first
		}
		cuts = shifted
		p.Curve = c
	}
	var kept []float64
	last := c.P0
	for _, t := range cuts {
		if !(t > 0 && t < 1) {
			continue
		}
		if at := c.At(t); at.Distance(last) > near && at.Distance(c.P1) > near {
			kept, last = append(kept, t), at
		}
	}
	bounds := append(append([]float64{0}, kept...), 1)
	out := make([]Piece, 0, len(bounds))
	for i := 1; i < len(bounds); i++ {
		out = append(out, Piece{c.Part(bounds[i-1], bounds[i]), p.Source})
	}
	return out
}

// eachNear calls f for pairs i < j whose boxes come within reach of each other.
func eachNear(pieces []Piece, reach float64, f func(i, j int)) {
	boxes := make([]outline.Box, len(pieces))
	order := make([]int, len(pieces))
	for i, p := range pieces {
		boxes[i], order[i] = p.Curve.Bounds().Grow(reach), i
	}
	sort.SliceStable(order, func(a, b int) bool { return boxes[order[a]].Min.X < boxes[order[b]].Min.X })
	var pairs [][2]int
	for n, i := range order {
		for _, j := range order[n+1:] {
			if boxes[j].Min.X > boxes[i].Max.X {
				break
			}
			if boxes[i].Meets(boxes[j]) {
				pairs = append(pairs, [2]int{min(i, j), max(i, j)})
			}
		}
	}
	sort.Slice(pairs, func(a, b int) bool {
		if pairs[a][0] != pairs[b][0] {
			return pairs[a][0] < pairs[b][0]
		}
		return pairs[a][1] < pairs[b][1]
	})
	for _, p := range pairs {
		f(p[0], p[1])
	}
}

// dropRepeats removes pieces that lie on an earlier one from end to end.
func dropRepeats(pieces []Piece, tol float64, r *Result) []Piece {
	gone := make([]bool, len(pieces))
	eachNear(pieces, tol, func(i, j int) {
		if !gone[i] && !gone[j] && same(pieces[i].Curve, pieces[j].Curve, tol) {
			gone[j] = true
			r.drop(pieces[j].Source)
		}
	})
	out := pieces[:0:0]
	for i, p := range pieces {
		if !gone[i] {
			out = append(out, p)
		}
	}
	return out
}

func (r *Result) drop(source string) {
	r.Dropped++
	if len(r.DroppedSources) < 8 && (len(r.DroppedSources) == 0 || r.DroppedSources[len(r.DroppedSources)-1] != source) {
		r.DroppedSources = append(r.DroppedSources, source)
	}
}

// same reports whether two curves lie on each other, whichever way they run. Curves shorter than three tolerances
// are only the same when much nearer.
func same(a, b outline.Curve, tol float64) bool {
	tol = math.Min(tol, a.P0.Distance(a.At(0.5))/3)
	if a.Closed() || b.Closed() {
		return a.Closed() && b.Closed() && a.Centre.Distance(b.Centre) <= tol && math.Abs(a.Radius-b.Radius) <= tol
	}
	if a.P0.Distance(b.P0) > tol || a.P1.Distance(b.P1) > tol {
		b = b.Reverse()
		if a.P0.Distance(b.P0) > tol || a.P1.Distance(b.P1) > tol {
			return false
		}
	}
	for _, t := range [3]float64{0.25, 0.5, 0.75} {
		if _, d := b.Nearest(a.At(t)); d > tol {
			return false
		}
		if _, d := a.Nearest(b.At(t)); d > tol {
			return false
		}
	}
	return true
}
