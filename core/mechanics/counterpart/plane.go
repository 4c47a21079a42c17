package counterpart

import "math"

// grid sorts triangles into square cells of the plane.
type grid struct {
	low    [2]float64
	size   float64
	counts [2]int
	cells  [][]int32
}

func newGrid(triangles [][3][2]float64) grid {
	low, high := [2]float64{math.Inf(1), math.Inf(1)}, [2]float64{math.Inf(-1), math.Inf(-1)}
	for _, c := range triangles {
		for _, at := range c {
			for d := range at {
				low[d], high[d] = math.Min(low[d], at[d]), math.Max(high[d], at[d])
			}
		}
	}
	g := grid{low: low}
	// About one triangle to a cell, and a bound on cells for plates as thin as a line.
	g.size = math.Max(math.Sqrt((high[0]-low[0])*(high[1]-low[1])/float64(len(triangles))), math.Max(high[0]-low[0], high[1]-low[1])/1000)
	if !(g.size > 0) {
		g.size = 1
	}
	for d := range g.counts {
		g.counts[d] = int((high[d]-low[d])/g.size) + 1
	}
	g.cells = make([][]int32, g.counts[0]*g.counts[1])
	for t, c := range triangles {
		var from, to [2]int
		for d := range from {
			from[d] = g.index(d, math.Min(c[0][d], math.Min(c[1][d], c[2][d])))
			to[d] = g.index(d, math.Max(c[0][d], math.Max(c[1][d], c[2][d])))
		}
		for j := from[1]; j <= to[1]; j++ {
			for i := from[0]; i <= to[0]; i++ {
				g.cells[j*g.counts[0]+i] = append(g.cells[j*g.counts[0]+i], int32(t))
			}
		}
	}
	return g
}

func (g *grid) index(d int, x float64) int {
	return max(0, min(g.counts[d]-1, int(math.Floor((x-g.low[d])/g.size))))
}

// at lists the triangles that may hold a point.
func (g *grid) at(p [2]float64) []int32 {
	return g.cells[g.index(1, p[1])*g.counts[0]+g.index(0, p[0])]
}

// distance is the square of the distance of a point from a triangle, 0 within.
func distance(c [3][2]float64, p [2]float64) float64 {
	l := closest(c, p)
	x, y := p[0], p[1]
	for k := range c {
		x, y = x-l[k]*c[k][0], y-l[k]*c[k][1]
	}
	return x*x + y*y
}

// closest gives the area coordinates of the point of a triangle nearest to p: p itself within, else a point of an edge.
func closest(c [3][2]float64, p [2]float64) [3]float64 {
	cross := func(a, b, o [2]float64) float64 { return (a[0]-o[0])*(b[1]-o[1]) - (b[0]-o[0])*(a[1]-o[1]) }
	if whole := cross(c[1], c[2], c[0]); whole != 0 {
		l := [3]float64{cross(c[1], c[2], p) / whole, cross(c[2], c[0], p) / whole, cross(c[0], c[1], p) / whole}
		if l[0] >= 0 && l[1] >= 0 && l[2] >= 0 {
			return l
		}
	}
	var best [3]float64
	least := math.Inf(1)
	for k := range c {
		a, b := c[k], c[(k+1)%3]
		dx, dy := b[0]-a[0], b[1]-a[1]
		t := 0.0
		if n := dx*dx + dy*dy; n > 0 {
			t = max(0, min(1, ((p[0]-a[0])*dx+(p[1]-a[1])*dy)/n))
		}
		x, y := p[0]-a[0]-t*dx, p[1]-a[1]-t*dy
		if d := x*x + y*y; d < least {
			least, best = d, [3]float64{}
			best[k], best[(k+1)%3] = 1-t, t
		}
	}
	return best
}
