package sparse

import (
	"hushframe/core/numeric/dense"
)

// lanes is the number of right-hand sides solved for in one pass over the factor. Those of a position lie side by side.
const lanes = 4

type lane = [lanes]float64

// Solve overwrites nrhs right-hand sides, stored one after another, each of length N, with the solutions of A·x = b.
// Each gets the same bits whatever is solved along with it. It uses one goroutine; SolveThreads uses several.
func (f *Factor) Solve(x []float64, nrhs int) { f.SolveThreads(x, nrhs, 1) }

// SolveThreads is Solve with groups of four right-hand sides spread over goroutines.
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

// solveGroup solves for up to four right-hand sides.
func (f *Factor) solveGroup(x []float64, count int) {
	n := len(f.d)
	y := make([]lane, n)
	order := f.analysis.order
	for r := range count {
		b := x[r*n:][:n]
		for k, u := range order {
			y[k][r] = b[u] * f.scale[u]
		}
	}
	widest := 0
	for s := range f.pivots {
		widest = max(widest, len(f.pivots[s]))
	}
	z := make([]lane, widest)
	for s := range f.pivots {
		f.forward(s, y, z)
	}
	for s := len(f.pivots) - 1; s >= 0; s-- {
		f.backward(s, y, z)
	}
	for r := range count {
		b := x[r*n:][:n]
		for k, u := range order {
			b[u] = y[k][r] * f.scale[u]
		}
	}
}

// forward eliminates the columns of supernode s from the right-hand sides y and divides them by D. z is room for them.
func (f *Factor) forward(s int, y, z []lane) {
	node := &f.analysis.nodes[s]
	width := int(node.width)
	l := f.l[node.offset:]
	z = z[:width]
	for k, position := range f.pivots[s] {
		z[k] = y[position]
	}
	for k := 1; k < width; k++ {
		subtract(&z[k], dot(l[k*width:][:k], z))
	}
	below := l[width*width:]
	rows := node.rows[width:]
	for _, position := range rows {
		subtract(&y[position], dot(below[:width], z))
		below = below[width:]
	}
	f.divideLanes(int(node.first), z)
	for k, position := range f.pivots[s] {
		y[position] = z[k]
	}
}

// backward substitutes the rows below into the columns of supernode s.
func (f *Factor) backward(s int, y, z []lane) {
	node := &f.analysis.nodes[s]
	width := int(node.width)
	l := f.l[node.offset:]
	z = z[:width]
	for k, position := range f.pivots[s] {
		z[k] = y[position]
	}
	below := l[width*width:]
	rows := node.rows[width:]
	for len(rows) >= 2 {
		subtractTwo(z, below[:width], below[width:2*width], &y[rows[0]], &y[rows[1]])
		rows, below = rows[2:], below[2*width:]
	}
	if len(rows) > 0 {
		subtractRow(z, below[:width], &y[rows[0]])
	}
	for k := width - 1; k > 0; k-- {
		subtractRow(z[:k], l[k*width:][:k], &z[k])
	}
	for k, position := range f.pivots[s] {
		y[position] = z[k]
	}
}

func subtract(t *lane, s lane) {
	t[0] -= s[0]
	t[1] -= s[1]
	t[2] -= s[2]
	t[3] -= s[3]
}

// dot returns the sum over k of l[k]·z[k].
func dot(l []float64, z []lane) lane {
	var s0, s1, s2, s3 float64
	z = z[:len(l)]
	for k, u := range l {
		t := &z[k]
		s0 += u * t[0]
		s1 += u * t[1]
		s2 += u * t[2]
		s3 += u * t[3]
	}
	return lane{s0, s1, s2, s3}
}

// subtractRow computes z[k] -= l[k]·t for all k.
func subtractRow(z []lane, l []float64, t *lane) {
	a0, a1, a2, a3 := t[0], t[1], t[2], t[3]
	z = z[:len(l)]
	for k, u := range l {
		w := &z[k]
		w[0] -= u * a0
		w[1] -= u * a1
		w[2] -= u * a2
		w[3] -= u * a3
	}
}

// subtractTwo computes z[k] -= l[k]·s + m[k]·t for all k.
func subtractTwo(z []lane, l, m []float64, s, t *lane) {
	a0, a1, a2, a3 := s[0], s[1], s[2], s[3]
	b0, b1, b2, b3 := t[0], t[1], t[2], t[3]
	z, m = z[:len(l)], m[:len(l)]
	for k, u := range l {
		w, v := &z[k], m[k]
		w[0] -= u*a0 + v*b0
		w[1] -= u*a1 + v*b1
		w[2] -= u*a2 + v*b2
		w[3] -= u*a3 + v*b3
	}
}

// divideLanes divides by the blocks of D of the columns from first on.
func (f *Factor) divideLanes(first int, z []lane) {
	for k := 0; k < len(z); k++ {
		d, e := f.d[first+k], f.e[first+k]
		if e == 0 {
			for r := range z[k] {
				z[k][r] /= d
			}
			continue
		}
		for r := range z[k] {
			z[k][r], z[k+1][r] = dense.SolveTwo(d, f.d[first+k+1], e, z[k][r], z[k+1][r])
		}
		k++
	}
}
