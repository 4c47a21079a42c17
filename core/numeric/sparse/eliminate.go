package sparse

import (
	"cmp"
	"context"
	"slices"
	"sync/atomic"

	"hushframe/core/numeric/dense"
)

const (
	panelWidth = 48 // columns eliminated together
	stripRows  = 72 // rows that one goroutine updates at a time; fixed, so that sums do not depend on threads
)

// update is what a supernode leaves for its parent: a square matrix on its rows below, lower triangle.
type update []float64

// elimination is the state that the goroutines of one factorisation share.
type elimination struct {
	f       *Factor
	a       *Symmetric
	updates []update // of each supernode, from when it is done until its parent has taken it
}

// failure is where and why a supernode could not be eliminated.
type failure struct {
	node  int32
	cause *PivotError
}

func (f *Factor) eliminate(ctx context.Context, a *Symmetric, threads int) error {
	el := &elimination{f: f, a: a, updates: make([]update, len(f.analysis.nodes))}
	tasks := &f.analysis.tasks
	workers := max(1, min(threads, len(tasks.subtrees)))
	failures := make([]failure, len(tasks.subtrees))
	var next atomic.Int64
	dense.Parallel(workers, workers, func(int) {
		w := newWorker(len(f.d), 1)
		for {
			k := int(next.Add(1)) - 1
			if k >= len(tasks.subtrees) {
				return
			}
			t := tasks.subtrees[k]
			for s := t.first; s <= t.last && ctx.Err() == nil; s++ {
				if err := el.front(s, w); err != nil {
					failures[k] = failure{s, err}
					break
				}
			}
		}
	})
	if ctx.Err() != nil {
		return context.Cause(ctx)
	}
	// Of several failures the first in the order of elimination is told, whoever met it first.
	failures = slices.DeleteFunc(failures, func(f failure) bool { return f.cause == nil })
	if len(failures) > 0 {
		return slices.MinFunc(failures, func(x, y failure) int { return cmp.Compare(x.node, y.node) }).cause
	}
	w := newWorker(len(f.d), threads)
	for _, s := range tasks.top {
		if ctx.Err() != nil {
			break
		}
		if err := el.front(s, w); err != nil {
			return err
		}
	}
	if ctx.Err() != nil {
		return context.Cause(ctx)
	}
	return nil
}

// worker is the workspace of one goroutine (or, above the subtrees, of all together).
type worker struct {
	threads int
	local   []int32 // row of the current front at each position
	pool    [][]float64
	panel   []float64    // diagonal block of the current panel
	weighed dense.Panels // rows of L·D
	unit    dense.Panels // the diagonal block once it is factorised
	pv      dense.Pivots
}

func newWorker(n, threads int) *worker {
	return &worker{
		threads: threads, local: make([]int32, n), panel: make([]float64, panelWidth*panelWidth),
		pv: dense.Pivots{Perm: make([]int, panelWidth), D: make([]float64, panelWidth), E: make([]float64, panelWidth)},
	}
}

// take returns zeroed memory for n numbers, the smallest that fits from what was given back.
func (w *worker) take(n int) []float64 {
	best := -1
	for k, b := range w.pool {
		if cap(b) >= n && (best < 0 || cap(b) < cap(w.pool[best])) {
			best = k
		}
	}
	if best < 0 || cap(w.pool[best]) > 4*n+4096 {
		return make([]float64, n)
	}
	b := w.pool[best][:n]
	w.pool[best] = w.pool[len(w.pool)-1]
	w.pool = w.pool[:len(w.pool)-1]
	clear(b)
	return b
}

// give takes memory back. Of more than a handful of pieces the smallest is let go.
func (w *worker) give(b []float64) {
	if cap(b) == 0 {
		return
	}
	w.pool = append(w.pool, b)
	if len(w.pool) > 16 {
		least := 0
		for k := range w.pool {
			if cap(w.pool[k]) < cap(w.pool[least]) {
				least = k
			}
		}
		w.pool = slices.Delete(w.pool, least, least+1)
	}
}

// front eliminates the columns of supernode s.
func (el *elimination) front(s int32, w *worker) *PivotError {
	an := el.f.analysis
	node := &an.nodes[s]
	width, m := int(node.width), len(node.rows)
	l := el.f.l[node.offset : node.offset+m*width]
	below := m - width
	up := update(w.take(below * below))
	for i, position := range node.rows {
		w.local[position] = int32(i)
	}
	el.scatter(node, l, w)
	for _, c := range node.children {
		el.extendAdd(&an.nodes[c], el.updates[c], l, width, up, below, w)
		w.give(el.updates[c])
		el.updates[c] = nil
	}
	if err := el.f.eliminateColumns(s, l, w); err != nil {
		return err
	}
	el.f.reduceBelow(s, l, up, w)
	el.updates[s] = up
	return nil
}

// scatter adds the scaled entries of the matrix in the columns of the supernode.
func (el *elimination) scatter(node *supernode, l []float64, w *worker) {
	an := el.f.analysis
	width := int(node.width)
	for k := range width {
		column := int(node.first) + k
		sk := el.f.scale[an.order[column]]
		for _, e := range an.source[an.columns[column]:an.columns[column+1]] {
			l[int(w.local[e.row])*width+k] = el.a.Val[e.val] * sk * el.f.scale[an.order[e.row]]
		}
	}
}

// extendAdd adds the update of a child into the columns and the update of its parent. Positions rise in both, so the
// lower triangle stays the lower triangle.
func (el *elimination) extendAdd(child *supernode, from update, l []float64, width int, up update, below int, w *worker) {
	rows := child.rows[child.width:]
	n := len(rows)
	to := make([]int32, n)
	inside := 0 // rows that are columns of the parent
	for k, position := range rows {
		to[k] = w.local[position]
		if int(to[k]) < width {
			inside++
		}
	}
	strips := (n + stripRows - 1) / stripRows
	if n < 4*stripRows {
		strips = 1
	}
	size := (n + strips - 1) / max(strips, 1)
	dense.Parallel(w.threads, strips, func(t int) {
		for i := t * size; i < min(n, (t+1)*size); i++ {
			row := from[i*n:][:i+1]
			target := l[int(to[i])*width:][:width]
			head := min(i+1, inside)
			for j, v := range row[:head] {
				target[to[j]] += v
			}
			if i < inside {
				continue
			}
			target = up[(int(to[i])-width)*below:][:below]
			for j := head; j < len(row); j++ {
				target[int(to[j])-width] += row[j]
			}
		}
	})
}
