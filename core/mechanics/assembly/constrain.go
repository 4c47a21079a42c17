package assembly

import (
	"math"
	"slices"
)

// column is the share of one unknown in a motion.
type column struct {
	unknown int32 // -1 for one that is held
	motion  [6]float64
}

// constraint is a linear relation between components of bodies: Σ c_i q_i = 0.
type constraint struct {
	bodies [2]int // Ground for none
	row    [2][6]float64
}

// relative returns the row of component c of the relative motion of spring s: motion of B minus that
// of A at the spring's point in the spring's axes, as a row over the six components of each.
func relative(s *Spring, c int, reference func(body int) Vec) (row [2][6]float64) {
	for side, body := range []int{s.A, s.B} {
		if body == Ground {
			continue
		}
		sign := float64(2*side - 1)
		for k := range 6 {
			var unit [6]float64
			unit[k] = 1
			m := s.Axes.in6(carried(unit, sub(s.Point, reference(body))))
			row[side][k] = sign * m[c]
		}
	}
	return row
}

// dependence expresses the six components of every body through independent ones. free[b][k] says
// whether component k of body b is an unknown of its own; terms[b][k] lists the others.
type dependence struct {
	free  [][6]bool
	terms [][6][]term
}

type term struct {
	body, component int
	factor          float64
}

// resolve brings the constraints to reduced row echelon form, one cluster of bodies at a time.
func resolve(count int, reference []Vec, constraints []constraint) dependence {
	d := dependence{free: make([][6]bool, count), terms: make([][6][]term, count)}
	clusters := newForest(count)
	for _, c := range constraints {
		if c.bodies[0] != Ground && c.bodies[1] != Ground {
			clusters.join(c.bodies[0], c.bodies[1])
		}
	}
	members := map[int][]int{}
	for b := range count {
		for k := range 6 {
			d.free[b][k] = true
		}
		r := clusters.root(b)
		members[r] = append(members[r], b)
	}
	rows := map[int][]constraint{}
	var roots []int
	for _, c := range constraints {
		b := max(c.bodies[0], c.bodies[1]) // not the ground
		if b == Ground {
			continue
		}
		r := clusters.root(b)
		if rows[r] == nil {
			roots = append(roots, r)
		}
		rows[r] = append(rows[r], c)
	}
	slices.Sort(roots)
	for _, r := range roots {
		d.eliminate(members[r], reference, rows[r])
	}
	return d
}

// negligible is the pivot, relative to the largest entry of its row at first, below which a
// constraint repeats others.
const negligible = 1e-9

// eliminate makes one component of the cluster dependent per independent constraint. Rotations are
// scaled by the size of the cluster, so that the largest pivot is comparable with displacements.
func (d *dependence) eliminate(bodies []int, reference []Vec, rows []constraint) {
	size := 0.0
	for _, b := range bodies {
		size = max(size, length(sub(reference[b], reference[bodies[0]])))
	}
	if size == 0 {
		size = 1
	}
	place := map[int]int{}
	for i, b := range bodies {
		place[b] = 6 * i
	}
	width := 6 * len(bodies)
	unit := func(j int) float64 { // of one scaled component, in SI
		if j%6 < 3 {
			return 1
		}
		return 1 / size
	}
	a := make([][]float64, len(rows))
	for i, c := range rows {
		a[i] = make([]float64, width)
		for side, b := range c.bodies {
			if b != Ground {
				for k := range 6 {
					a[i][place[b]+k] += c.row[side][k] * unit(k)
				}
			}
		}
		normalise(a[i])
	}
	var pivots []int
	taken := make([]bool, width)
	done := 0
	for done < len(a) {
		// The largest entry left; of equal ones that of the last body, so that bodies listed first
		// keep their components.
		row, col, best := -1, -1, negligible
		for i := done; i < len(a); i++ {
			for j := width - 1; j >= 0; j-- {
				if v := math.Abs(a[i][j]); !taken[j] && v > best*(1+1e-12) {
					row, col, best = i, j, v
				}
			}
		}
		if row < 0 {
			break
		}
		a[done], a[row] = a[row], a[done]
		taken[col] = true
		pivots = append(pivots, col)
		p := 1 / a[done][col]
		for j := range width {
			a[done][j] *= p
		}
		for i := range a {
			if i == done || a[i][col] == 0 {
				continue
			}
			x := a[i][col]
			for j := range width {
				a[i][j] -= x * a[done][j]
			}
			a[i][col] = 0
		}
		done++
	}
	for i, col := range pivots {
		b, k := bodies[col/6], col%6
		d.free[b][k] = false
		for j := range width {
			if !taken[j] && math.Abs(a[i][j]) > negligible {
				d.terms[b][k] = append(d.terms[b][k], term{bodies[j/6], j % 6, -a[i][j] * unit(col) / unit(j)})
			}
		}
	}
}

func normalise(row []float64) {
	largest := 0.0
	for _, v := range row {
		largest = max(largest, math.Abs(v))
	}
	if largest > 0 {
		for j := range row {
			row[j] /= largest
		}
	}
}
