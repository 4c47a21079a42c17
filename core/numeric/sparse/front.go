package sparse

import (
	"math"

	"hushframe/core/numeric/dense"
)

// eliminateColumns factorises the columns of a front, panel by panel. A panel first takes the updates of all earlier
// columns (the left-looking form, which reads long rows and writes each entry once), then its diagonal block is
// factorised with pivoting, then the rows below are solved for.
func (f *Factor) eliminateColumns(s int32, l []float64, w *worker) *PivotError {
	node := &f.analysis.nodes[s]
	width, m, first := int(node.width), len(node.rows), int(node.first)
	if f.pivots[s] == nil {
		f.pivots[s] = make([]int32, width)
	}
	pivots := f.pivots[s]
	copy(pivots, node.rows)

	for k := 0; k < width; {
		b := min(panelWidth, width-k)
		w.weigh(f, first, k, l[k*width:], width, b)
		// The diagonal block is worked on in a copy, because columns put off must stay as they were.
		for i := range b {
			copy(w.panel[i*panelWidth:][:i+1], l[(k+i)*width+k:])
		}
		dense.SubMulLower(0, b, l[k*width:], width, &w.weighed, w.panel, panelWidth)
		deferBelow := 0.0
		if k+b < width {
			deferBelow = 1e-3
		}
		dense.Pivoted(b, w.panel, panelWidth, leastPivot, deferBelow, &w.pv)
		if w.pv.Failed {
			at := w.pv.Done
			u := f.analysis.order[pivots[k+w.pv.Perm[at]]]
			return &PivotError{Unknown: int(u), Pivot: math.Abs(w.panel[at*panelWidth+at])}
		}
		done := w.pv.Done
		permute(w.pv.Perm, pivots[k:k+b], func(p, q int) { dense.SwapSymmetric(m, width, k+p, k+q, l, width) })
		copy(f.d[first+k:], w.pv.D[:done])
		copy(f.e[first+k:], w.pv.E[:done])
		for i := range done {
			copy(l[(k+i)*width+k:], w.panel[i*panelWidth:][:i])
		}

		w.weigh(f, first, k, l[k*width:], width, done)
		w.unit.Pack(done, done, w.panel, panelWidth)
		start := k + done
		strips := (m - start + stripRows - 1) / stripRows
		dense.Parallel(w.threadsFor((m-start)*done*(k+done)), strips, func(t int) {
			i := start + t*stripRows
			rows := min(stripRows, m-i)
			block := l[i*width:]
			dense.SubMul(rows, block, width, &w.weighed, block[k:], width)
			dense.SolveLowerPacked(rows, &w.unit, block[k:], width)
			f.divide(first+k, done, rows, block[k:], width)
		})
		k += done
	}
	return nil
}

// threadsFor is the number of goroutines worth starting for a number of operations.
func (w *worker) threadsFor(work int) int {
	if work < 1<<17 {
		return 1
	}
	return w.threads
}

// weigh packs L·D for the first k columns of the given rows of a trapezoid.
func (w *worker) weigh(f *Factor, first, k int, l []float64, width, rows int) {
	w.weighed.Reset(rows, k)
	if k == 0 {
		return
	}
	d, e := f.d[first:][:k], f.e[first:][:k]
	for i := range rows {
		src, dst := l[i*width:][:k], w.weighed.Row(i)
		for j, at := 0, 0; j < k; j, at = j+1, at+dense.Columns {
			if e[j] != 0 {
				u, v := src[j], src[j+1]
				dst[at] = d[j]*u + e[j]*v
				j, at = j+1, at+dense.Columns
				dst[at] = e[j-1]*u + d[j]*v
				continue
			}
			dst[at] = d[j] * src[j]
		}
	}
}

// divide multiplies rows by the inverse of D for the pivots from the given one on.
func (f *Factor) divide(from, count, rows int, b []float64, ldb int) {
	d, e := f.d[from:][:count], f.e[from:][:count]
	for i := range rows {
		x := b[i*ldb:][:count]
		for j := 0; j < count; j++ {
			if e[j] != 0 {
				x[j], x[j+1] = dense.SolveTwo(d[j], d[j+1], e[j], x[j], x[j+1])
				j++
				continue
			}
			x[j] /= d[j]
		}
	}
}

// permute brings pivots into the order perm by exchanges, each of which it also hands to exchange.
func permute(perm []int, pivots []int32, exchange func(p, q int)) {
	at := make([]int, len(perm)) // at[k] is the original place of what is now at k
	for k := range at {
		at[k] = k
	}
	for p := range perm {
		if at[p] == perm[p] {
			continue
		}
		q := p + 1
		for at[q] != perm[p] {
			q++
		}
		at[p], at[q] = at[q], at[p]
		pivots[p], pivots[q] = pivots[q], pivots[p]
		exchange(p, q)
	}
}

// reduceBelow subtracts L·D·Lᵀ of the rows below from the update.
func (f *Factor) reduceBelow(s int32, l []float64, up update, w *worker) {
	node := &f.analysis.nodes[s]
	width, below := int(node.width), node.below()
	if below == 0 {
		return
	}
	rows := l[width*width:]
	w.weigh(f, int(node.first), width, rows, width, below)
	strips := (below + stripRows - 1) / stripRows
	// Later strips are longer; taking them first evens out the ends.
	dense.Parallel(w.threadsFor(below*below*width), strips, func(t int) {
		i := (strips - 1 - t) * stripRows
		n := min(stripRows, below-i)
		dense.SubMulLower(i, i+n, rows, width, &w.weighed, up, below)
	})
}
