package loops

import (
	"math"
	"sort"

	"hushframe/core/mechanics/outline"
)

// Find joins pieces within the tolerance tol (m) and sorts what comes of them. It panics unless tol > 0. The order of
// the pieces decides only which of two equal ones is kept.
func Find(pieces []Piece, tol float64) Result {
	if !(tol > 0) {
		panic("loops: Find needs a positive tolerance")
	}
	var r Result
	g := &graph{tol: tol, tight: tol / 100, cells: map[[2]int64][]int{}, result: &r}
	pieces = dropRepeats(pieces, tol, &r)
	pieces = g.cut(pieces)
	pieces = g.tie(pieces)
	// Parts of pieces that overlapped are repeats now.
	pieces = dropRepeats(pieces, tol, &r)
	for _, p := range pieces {
		g.add(p)
	}
	g.trim()
	g.joinLoose()
	g.prune()
	g.sort()
	return r
}

// tie cuts pieces where the loose end of another one lies on them within the tolerance, and moves that end there.
func (g *graph) tie(pieces []Piece) []Piece {
	probe := &graph{tol: g.tol, tight: g.tight, cells: map[[2]int64][]int{}}
	degree := map[int]int{}
	ends := make([][2]int, len(pieces))
	for i, p := range pieces {
		ends[i] = [2]int{probe.vertex(p.Curve.P0), probe.vertex(p.Curve.P1)}
		degree[ends[i][0]]++
		degree[ends[i][1]]++
	}
	// Of two loose ends near each other, neither is tied to a piece in between.
	loose := func(i, end int) bool { return degree[ends[i][end]] == 1 }
	nearLoose := map[[2]int]float64{}
	type meeting struct {
		t, d float64
		on   int
	}
	best := map[[2]int]meeting{}
	eachNear(pieces, g.tol, func(i, j int) {
		for _, pair := range [2][2]int{{i, j}, {j, i}} {
			a, b := pair[0], pair[1]
			for end := range 2 {
				if !loose(a, end) {
					continue
				}
				p := pieces[a].Curve.At(float64(end))
				for other := range 2 {
					if loose(b, other) {
						key := [2]int{a, end}
						d := pieces[b].Curve.At(float64(other)).Distance(p)
						if was, ok := nearLoose[key]; !ok || d < was {
							nearLoose[key] = d
						}
					}
				}
				t, d := pieces[b].Curve.Nearest(p)
				at := pieces[b].Curve.At(t)
				if d > g.tol || at.Distance(pieces[b].Curve.P0) <= g.tol || at.Distance(pieces[b].Curve.P1) <= g.tol {
					continue
				}
				key := [2]int{a, end}
				if was, ok := best[key]; !ok || d < was.d {
					best[key] = meeting{t, d, b}
				}
			}
		}
	})
	cuts := make([][]float64, len(pieces))
	for i := range pieces {
		for end := range 2 {
			key := [2]int{i, end}
			m, ok := best[key]
			if d, near := nearLoose[key]; !ok || near && d <= g.tol {
				continue
			}
			cuts[m.on] = append(cuts[m.on], m.t)
			to := pieces[m.on].Curve.At(m.t)
			if m.d > g.tight {
				g.result.Joined = append(g.result.Joined, Gap{to, m.d, pieces[i].Source})
			}
			pieces[i].Curve = moved(pieces[i].Curve, end, to)
		}
	}
	var out []Piece
	for i, p := range pieces {
		out = append(out, splitAt(p, cuts[i], g.tol/4)...)
	}
	return out
}

// moved puts one end of a curve elsewhere nearby: an arc keeps its middle (its sweep if it is short), a cubic the
// direction at that end.
func moved(c outline.Curve, end int, to outline.Point) outline.Curve {
	p, q := c.P0, c.P1
	by := to.Sub(c.At(float64(end)))
	if by == (outline.Point{}) {
		return c
	}
	if end == 0 {
		p = to
	} else {
		q = to
	}
	switch {
	case c.Kind == outline.KindCubic && end == 0:
		return outline.Cubic(p, c.C1.Add(by), c.C2, q)
	case c.Kind == outline.KindCubic:
		return outline.Cubic(p, c.C1, c.C2.Add(by), q)
	case c.Kind == outline.KindArc && p == q:
		return outline.ArcOf(c.Centre, c.Radius, c.Start, math.Copysign(2*math.Pi, c.Sweep))
	case c.Kind == outline.KindArc && math.Abs(c.Sweep) < 2*math.Pi:
		if math.Abs(c.Sweep) > 1 {
			// The sweep of the arc through the new ends and the old middle: each half of it has the half
			// sweep that its chords make with each other.
			m := c.At(0.5)
			a, b := m.Sub(p), q.Sub(m)
			if sweep := 2 * math.Atan2(a.Cross(b), a.Dot(b)); sweep*c.Sweep > 0 && math.Abs(sweep) < 2*math.Pi {
				return outline.ArcBetween(p, q, sweep)
			}
		}
		return outline.ArcBetween(p, q, c.Sweep)
	}
	return outline.Line(p, q)
}

// trim takes off what sticks out by less than the tolerance where two pieces cross.
func (g *graph) trim() {
	degree := g.degrees()
	for i := range g.edges {
		e := &g.edges[i]
		a, b := degree[e.ends[0]], degree[e.ends[1]]
		if (a == 1 && b > 2 || b == 1 && a > 2) && e.Curve.Length() <= g.tol {
			e.gone = true
			g.result.Trimmed++
		}
	}
}

// joinLoose makes pairs of loose ends within the tolerance one vertex, nearest first.
func (g *graph) joinLoose() {
	degree := g.degrees()
	type end struct{ edge, which, vertex int }
	var ends []end
	for i, e := range g.edges {
		for w, v := range e.ends {
			if degree[v] == 1 && !e.gone {
				ends = append(ends, end{i, w, v})
			}
		}
	}
	type pair struct {
		a, b int
		d    float64
	}
	var pairs []pair
	order := make([]int, len(ends))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return g.at[ends[order[a]].vertex].X < g.at[ends[order[b]].vertex].X })
	for n, i := range order {
		p := g.at[ends[i].vertex]
		for _, j := range order[n+1:] {
			q := g.at[ends[j].vertex]
			if q.X-p.X > g.tol {
				break
			}
			short := ends[i].edge == ends[j].edge && g.edges[ends[i].edge].Curve.Length() <= 4*g.tol
			if d := p.Distance(q); d <= g.tol && !short {
				pairs = append(pairs, pair{min(i, j), max(i, j), d})
			}
		}
	}
	sort.Slice(pairs, func(x, y int) bool {
		a, b := pairs[x], pairs[y]
		switch {
		case a.d != b.d:
			return a.d < b.d
		case a.a != b.a:
			return a.a < b.a
		}
		return a.b < b.b
	})
	used := make([]bool, len(ends))
	for _, p := range pairs {
		if used[p.a] || used[p.b] {
			continue
		}
		used[p.a], used[p.b] = true, true
		keep, move := ends[p.a], ends[p.b]
		e := &g.edges[move.edge]
		e.ends[move.which] = keep.vertex
		g.at[keep.vertex] = g.at[keep.vertex].Lerp(g.at[move.vertex], 0.5)
		g.result.Joined = append(g.result.Joined, Gap{g.at[keep.vertex], p.d, e.Source})
	}
	for i := range g.edges {
		e := &g.edges[i]
		for w, v := range e.ends {
			if !e.Curve.Closed() && e.Curve.At(float64(w)) != g.at[v] {
				e.Curve = moved(e.Curve, w, g.at[v])
			}
		}
	}
}

// prune takes out runs with loose ends, one end after the other, and reports them as chains.
func (g *graph) prune() {
	degree := g.degrees()
	at := g.incidence()
	touched := append([]int(nil), degree...)
	var queue []int
	for v, n := range degree {
		if n == 1 {
			queue = append(queue, v)
		}
	}
	loose := append([]int(nil), queue...)
	inChain := make([]bool, len(g.edges))
	for len(queue) > 0 {
		v := queue[0]
		queue = queue[1:]
		if degree[v] != 1 {
			continue
		}
		for _, i := range at[v] {
			if e := &g.edges[i]; !e.gone {
				e.gone, inChain[i] = true, true
				for _, u := range e.ends {
					if degree[u]--; degree[u] == 1 {
						queue = append(queue, u)
					}
				}
			}
		}
	}
	g.chains(inChain, at, loose, touched)
}

// incidence lists the edges at each vertex; one that begins and ends there comes twice.
func (g *graph) incidence() [][]int {
	at := make([][]int, len(g.at))
	for i, e := range g.edges {
		if e.gone {
			continue
		}
		at[e.ends[0]] = append(at[e.ends[0]], i)
		at[e.ends[1]] = append(at[e.ends[1]], i)
	}
	return at
}

// chains walks the pruned pieces from each loose end as far as the way is clear.
func (g *graph) chains(inChain []bool, at [][]int, loose, degree []int) {
	seen := make([]bool, len(g.edges))
	walk := func(from int) {
		c := Chain{From: g.at[from], Nearest: math.Inf(1)}
		v := from
		for {
			next := -1
			count := 0
			for _, i := range at[v] {
				if inChain[i] {
					count++
					if !seen[i] {
						next = i
					}
				}
			}
			if next < 0 || v != from && (count > 2 || degree[v] > 2) {
				break
			}
			e := g.edges[next]
			seen[next] = true
			if c.Pieces++; c.Pieces == 1 {
				c.FromPiece = e.Source
			}
			c.ToEnd = e.Source
			c.Length += e.Curve.Length()
			if v == e.ends[0] {
				v = e.ends[1]
			} else {
				v = e.ends[0]
			}
		}
		if c.Pieces == 0 {
			return
		}
		c.To, c.Attached = g.at[v], degree[v] > 1
		for _, u := range loose {
			if u == from {
				continue
			}
			if d := g.at[u].Distance(c.From); d < c.Nearest {
				c.Nearest, c.NearestAt = d, g.at[u]
			}
		}
		g.result.Open = append(g.result.Open, c)
	}
	for _, v := range loose {
		walk(v)
	}
	for v := range at { // what hangs between branches
		for _, i := range at[v] {
			if inChain[i] && !seen[i] {
				walk(v)
			}
		}
	}
}
