package sparse

import (
	"sync"

	"hushframe/core/numeric/dense"
)

// lanes is the number of right-hand sides solved for in one pass over the factor, which is what a pass costs: reading
// it. Those of a position lie side by side.
const lanes = dense.Columns

// Solve overwrites nrhs right-hand sides, stored one after another, each of length N, with the solutions of A·x = b.
// Each gets the same bits whatever is solved along with it. It uses one goroutine; SolveThreads uses several.
func (f *Factor) Solve(x []float64, nrhs int) { f.SolveThreads(x, nrhs, 1) }

// SolveThreads is Solve with the subtrees of the elimination tree spread over goroutines.
func (f *Factor) SolveThreads(x []float64, nrhs, threads int) {
	n := len(f.d)
	if nrhs < 0 || len(x) != n*nrhs {
		panic("sparse: Solve: bad length")
	}
	if n == 0 || nrhs == 0 {
		return
	}
	ps, _ := f.passages.Get().(*passage)
	if ps == nil {
		ps = f.newPassage()
	}
	defer f.passages.Put(ps)
	ps.threads = threads
	for r := 0; r < nrhs; r += lanes {
		ps.count = min(lanes, nrhs-r)
		ps.solve(x[r*n:][:ps.count*n])
	}
}

// passage is a pass over the factor for some right-hand sides, and the memory it needs.
type passage struct {
	f       *Factor
	threads int
	count   int       // right-hand sides
	y       []float64 // lanes of each position
	// carries holds what each subtree subtracts from the positions beyond it, those of the rows below its root. It is
	// added when all subtrees are done, in their order, so that it does not matter who has done them.
	carries [][]float64
	rooms   sync.Pool // of *room
}

// room is the workspace of one goroutine.
type room struct {
	z     []float64 // lanes of the columns of a supernode, in pivot order
	local []int32   // place in the carry of each position beyond the subtree
}

func (f *Factor) newPassage() *passage {
	n, widest := len(f.d), 0
	for s := range f.pivots {
		widest = max(widest, len(f.pivots[s]))
	}
	ps := &passage{f: f, y: make([]float64, n*lanes)}
	ps.rooms.New = func() any { return &room{z: make([]float64, widest*lanes), local: make([]int32, n)} }
	for _, t := range f.analysis.passes.subtrees {
		ps.carries = append(ps.carries, make([]float64, f.analysis.nodes[t.last].below()*lanes))
	}
	return ps
}

func (ps *passage) solve(x []float64) {
	f, an := ps.f, ps.f.analysis
	ps.exchange(x, true)
	dense.Parallel(ps.threads, len(an.passes.subtrees), func(k int) {
		w := ps.rooms.Get().(*room)
		defer ps.rooms.Put(w)
		t := an.passes.subtrees[k]
		root := &an.nodes[t.last]
		for i, position := range root.rows[root.width:] {
			w.local[position] = int32(i)
		}
		clear(ps.carries[k])
		for s := t.first; s <= t.last; s++ {
			ps.forward(s, int(root.first+root.width), ps.carries[k], w)
		}
	})
	for k, t := range an.passes.subtrees {
		root := &an.nodes[t.last]
		for i, position := range root.rows[root.width:] {
			y := ps.y[int(position)*lanes:][:lanes]
			for r, v := range ps.carries[k][i*lanes:][:lanes] {
				y[r] += v
			}
		}
	}
	w := ps.rooms.Get().(*room)
	for _, s := range an.passes.top {
		ps.forward(s, len(f.d), nil, w)
	}
	for k := len(an.passes.top) - 1; k >= 0; k-- {
		ps.backward(an.passes.top[k], w)
	}
	ps.rooms.Put(w)
	dense.Parallel(ps.threads, len(an.passes.subtrees), func(k int) {
		w := ps.rooms.Get().(*room)
		defer ps.rooms.Put(w)
		t := an.passes.subtrees[k]
		for s := t.last; s >= t.first; s-- {
			ps.backward(s, w)
		}
	})
	ps.exchange(x, false)
}

// exchange brings the scaled right-hand sides into the order of elimination, or the solutions back.
func (ps *passage) exchange(x []float64, in bool) {
	const piece = 512 // positions whose lanes stay in the first-level cache
	f, n := ps.f, len(ps.f.d)
	dense.Parallel(ps.threads, (n+piece-1)/piece, func(t int) {
		order := f.analysis.order[t*piece : min(n, (t+1)*piece)]
		y := ps.y[t*piece*lanes:]
		for r := range ps.count {
			b, at := x[r*n:][:n], r
			for _, u := range order {
				if in {
					y[at] = b[u] * f.scale[u]
				} else {
					b[u] = y[at] * f.scale[u]
				}
				at += lanes
			}
		}
	})
}

// multiply computes C -= A·B for the lanes in use.
func (ps *passage) multiply(m, depth int, a []float64, ars, acs int, b, c []float64) {
	dense.Strip(m, ps.count, depth, a, ars, acs, b, lanes, c, lanes)
}

// run returns the number of leading rows that follow one another without a gap, up to a position.
func run(rows []int32, end int) int {
	k := 1
	for k < len(rows) && rows[k] == rows[0]+int32(k) && int(rows[k]) != end {
		k++
	}
	return k
}

// few is the number of columns of the diagonal block of a supernode that are substituted one by one.
const few = 6

// forward eliminates the columns of supernode s from the right-hand sides and divides them by D. What belongs to
// positions from end on goes into the carry.
func (ps *passage) forward(s int32, end int, carry []float64, w *room) {
	f := ps.f
	node := &f.analysis.nodes[s]
	width := int(node.width)
	l := f.l[node.offset:]
	z := w.z[:width*lanes]
	for k, position := range f.pivots[s] {
		copy(z[k*lanes:][:lanes], ps.y[int(position)*lanes:])
	}
	for k := 0; k < width; k += few {
		ps.multiply(min(few, width-k), k, l[k*width:], width, 1, z, z[k*lanes:])
		for i := k + 1; i < min(k+few, width); i++ {
			ps.multiply(1, i-k, l[i*width+k:], width, 1, z[k*lanes:], z[i*lanes:])
		}
	}
	below := l[width*width:]
	for rows := node.rows[width:]; len(rows) > 0; {
		m := run(rows, end)
		to := ps.y[int(rows[0])*lanes:]
		if int(rows[0]) >= end {
			to = carry[int(w.local[rows[0]])*lanes:]
		}
		ps.multiply(m, width, below, width, 1, z, to)
		rows, below = rows[m:], below[m*width:]
	}
	f.divideLanes(int(node.first), z)
	for k, position := range f.pivots[s] {
		copy(ps.y[int(position)*lanes:], z[k*lanes:][:lanes])
	}
}

// backward substitutes the rows below into the columns of supernode s.
func (ps *passage) backward(s int32, w *room) {
	f := ps.f
	node := &f.analysis.nodes[s]
	width := int(node.width)
	l := f.l[node.offset:]
	z := w.z[:width*lanes]
	for k, position := range f.pivots[s] {
		copy(z[k*lanes:][:lanes], ps.y[int(position)*lanes:])
	}
	below := l[width*width:]
	depth := max(8, 4096/width) // rows that stay in the first-level cache while all columns are served
	for rows := node.rows[width:]; len(rows) > 0; {
		m := min(run(rows, -1), depth)
		ps.multiply(width, m, below, 1, width, ps.y[int(rows[0])*lanes:], z)
		rows, below = rows[m:], below[m*width:]
	}
	for k := (width - 1) / few * few; k >= 0; k -= few {
		for i := min(k+few, width) - 1; i > k; i-- {
			ps.multiply(i-k, 1, l[i*width+k:], 1, width, z[i*lanes:], z[k*lanes:])
		}
		ps.multiply(k, min(few, width-k), l[k*width:], 1, width, z[k*lanes:], z)
	}
	for k, position := range f.pivots[s] {
		copy(ps.y[int(position)*lanes:], z[k*lanes:][:lanes])
	}
}

// divideLanes divides by the blocks of D of the columns from first on.
func (f *Factor) divideLanes(first int, z []float64) {
	for k := 0; k*lanes < len(z); k++ {
		d, e := f.d[first+k], f.e[first+k]
		a := z[k*lanes:][:lanes]
		if e == 0 {
			for r := range a {
				a[r] /= d
			}
			continue
		}
		b := z[(k+1)*lanes:][:lanes]
		for r := range a {
			a[r], b[r] = dense.SolveTwo(d, f.d[first+k+1], e, a[r], b[r])
		}
		k++
	}
}
