package sparse

import (
	"hushframe/core/numeric/dense"
)

// lanes is the number of right-hand sides solved for in one pass over the factor.
const lanes = 4

// Solve overwrites nrhs right-hand sides, stored one after another, each of length N, with the solutions of A·x = b.
// Each gets the same bits whatever is solved along with it. It uses one goroutine; SolveThreads uses several.
func (f *Factor) Solve(x []float64, nrhs int) { f.SolveThreads(x, nrhs, 1) }

// SolveThreads is Solve with groups of right-hand sides spread over goroutines.
func (f *Factor) SolveThreads(x []float64, nrhs, threads int) {
	n := len(f.d)
	if nrhs < 0 || len(x) != n*nrhs {
		panic("sparse: Solve: bad length")
	}
	groups := (nrhs + lanes - 1) / lanes
	dense.Parallel(threads, groups, func(g int) {
		count := min(lanes, nrhs-g*lanes)
		f.solveGroup(x[g*lanes*n:][:count*n], count)
	})
}

// solveGroup solves for up to four right-hand sides, held side by side: the four numbers of a position are adjacent.
func (f *Factor) solveGroup(x []float64, count int) {
	n := len(f.d)
	y := make([]float64, n*lanes)
	order := f.analysis.order
	for r := range count {
		b := x[r*n:][:n]
		for k, u := range order {
			y[k*lanes+r] = b[u] * f.scale[u]
		}
	}
	most := 0
	for s := range f.pivots {
		most = max(most, len(f.pivots[s]))
	}
	z := make([]float64, most*lanes)
	for s := range f.pivots {
		f.forward(s, y, z)
	}
	for s := len(f.pivots) - 1; s >= 0; s-- {
		f.backward(s, y, z)
	}
	for r := range count {
		b := x[r*n:][:n]
		for k, u := range order {
			b[u] = y[k*lanes+r] * f.scale[u]
		}
	}
}

// forward eliminates the columns of supernode s from the right-hand sides and divides them by D.
func (f *Factor) forward(s int, y, z []float64) {
	node := &f.analysis.nodes[s]
	width := int(node.width)
	l := f.l[node.offset:]
	for k, position := range f.pivots[s] {
		copy(z[k*lanes:][:lanes], y[int(position)*lanes:])
	}
	for k := 1; k < width; k++ {
		s0, s1, s2, s3 := dotLanes(l[k*width:][:k], z)
		v := z[k*lanes:][:lanes]
		v[0] -= s0
		v[1] -= s1
		v[2] -= s2
		v[3] -= s3
	}
	rows := node.rows[width:]
	i := 0
	for ; i+2 <= len(rows); i += 2 {
		l0 := l[(width+i)*width:][:width]
		l1 := l[(width+i+1)*width:][:width]
		var a0, a1, a2, a3, b0, b1, b2, b3 float64
		zz := z
		for k, u := range l0 {
			if len(zz) < lanes {
				break
			}
			v := l1[k]
			a0 += u * zz[0]
			b0 += v * zz[0]
			a1 += u * zz[1]
			b1 += v * zz[1]
			a2 += u * zz[2]
			b2 += v * zz[2]
			a3 += u * zz[3]
			b3 += v * zz[3]
			zz = zz[lanes:]
		}
		t := y[int(rows[i])*lanes:][:lanes]
		t[0] -= a0
		t[1] -= a1
		t[2] -= a2
		t[3] -= a3
		t = y[int(rows[i+1])*lanes:][:lanes]
		t[0] -= b0
		t[1] -= b1
		t[2] -= b2
		t[3] -= b3
	}
	if i < len(rows) {
		s0, s1, s2, s3 := dotLanes(l[(width+i)*width:][:width], z)
		t := y[int(rows[i])*lanes:][:lanes]
		t[0] -= s0
		t[1] -= s1
		t[2] -= s2
		t[3] -= s3
	}
	f.divideLanes(int(node.first), width, z)
	for k, position := range f.pivots[s] {
		copy(y[int(position)*lanes:][:lanes], z[k*lanes:])
	}
}

// dotLanes returns the sums over k of l[k] times the four numbers at k.
func dotLanes(l, z []float64) (s0, s1, s2, s3 float64) {
	for _, u := range l {
		if len(z) < lanes {
			break
		}
		s0 += u * z[0]
		s1 += u * z[1]
		s2 += u * z[2]
		s3 += u * z[3]
		z = z[lanes:]
	}
	return s0, s1, s2, s3
}

func (f *Factor) divideLanes(first, width int, z []float64) {
	for k := 0; k < width; k++ {
		d, e := f.d[first+k], f.e[first+k]
		v := z[k*lanes:][:lanes]
		if e == 0 {
			for r := range v {
				v[r] /= d
			}
			continue
		}
		u := z[(k+1)*lanes:][:lanes]
		for r := range v {
			v[r], u[r] = dense.SolveTwo(d, f.d[first+k+1], e, v[r], u[r])
		}
		k++
	}
}

// backward substitutes the rows below into the columns of supernode s.
func (f *Factor) backward(s int, y, z []float64) {
	node := &f.analysis.nodes[s]
	width := int(node.width)
	l := f.l[node.offset:]
	for k, position := range f.pivots[s] {
		copy(z[k*lanes:][:lanes], y[int(position)*lanes:])
	}
	rows := node.rows[width:]
	i := 0
	for ; i+2 <= len(rows); i += 2 {
		t := y[int(rows[i])*lanes:][:lanes]
		a0, a1, a2, a3 := t[0], t[1], t[2], t[3]
		t = y[int(rows[i+1])*lanes:][:lanes]
		b0, b1, b2, b3 := t[0], t[1], t[2], t[3]
		l0 := l[(width+i)*width:][:width]
		l1 := l[(width+i+1)*width:][:width]
		zz := z
		for k, u := range l0 {
			if len(zz) < lanes {
				break
			}
			v := l1[k]
			zz[0] -= u*a0 + v*b0
			zz[1] -= u*a1 + v*b1
			zz[2] -= u*a2 + v*b2
			zz[3] -= u*a3 + v*b3
			zz = zz[lanes:]
		}
	}
	if i < len(rows) {
		subtractRow(l[(width+i)*width:][:width], y[int(rows[i])*lanes:], z)
	}
	for k := width - 1; k > 0; k-- {
		subtractRow(l[k*width:][:k], z[k*lanes:], z)
	}
	for k, position := range f.pivots[s] {
		copy(y[int(position)*lanes:][:lanes], z[k*lanes:])
	}
}

// subtractRow takes from the four numbers at each k l[k] times the four numbers at t.
func subtractRow(l, t, z []float64) {
	a0, a1, a2, a3 := t[0], t[1], t[2], t[3]
	for _, u := range l {
		if len(z) < lanes {
			break
		}
		z[0] -= u * a0
		z[1] -= u * a1
		z[2] -= u * a2
		z[3] -= u * a3
		z = z[lanes:]
	}
}
