package main

import (
	"math"

	"hushframe/core/mechanics/element"
)

// Seven points in a triangle, exact to degree 5 (J. Radon, Zur mechanischen Kubatur, Monatsh. Math. 52, 1948); the
// weights add up to one half, the area of the unit triangle.
var (
	inTriangle [7][2]float64
	weights    [7]float64
)

// Three Gauss points on -1 to 1.
var (
	gaussPoints  = [3]float64{-math.Sqrt(0.6), 0, math.Sqrt(0.6)}
	gaussWeights = [3]float64{5.0 / 9, 8.0 / 9, 5.0 / 9}
)

func init() {
	r := math.Sqrt(15)
	a, b := (6-r)/21, (6+r)/21
	inTriangle = [7][2]float64{{1.0 / 3, 1.0 / 3}, {a, a}, {1 - 2*a, a}, {a, 1 - 2*a}, {b, b}, {1 - 2*b, b}, {b, 1 - 2*b}}
	wa, wb := (155-r)/2400, (155+r)/2400
	weights = [7]float64{9.0 / 80, wa, wa, wa, wb, wb, wb}
}

// column computes the columns of one batch, one at a time.
type column struct {
	layers int
	order  int // unknowns
	full   []float64
	mass   []float64 // over points
	at     [7]spot
}

// spot is an integration point of the triangle.
type spot struct {
	area   float64       // weight times Jacobian, m²
	corner [3]float64    // area coordinates of the corners
	slope  [3][2]float64 // their gradients in x and y, 1/m
}

func newColumn(layers int) *column {
	n := len(points(layers))
	return &column{layers: layers, order: 3 * n, full: make([]float64, 9*n*n), mass: make([]float64, n*n)}
}

// locate places the integration points; nodes are those of the triangle, three coordinates each. It says why no
// element can be made of it.
func (c *column) locate(nodes []float64) string {
	for q, p := range inTriangle {
		l := [3]float64{1 - p[0] - p[1], p[0], p[1]}
		d := [3][2]float64{{-1, -1}, {1, 0}, {0, 1}} // of the area coordinates by ξ and η
		var j [2][2]float64
		for n := range 6 {
			var dn [2]float64
			for k := range 2 {
				if n < 3 {
					dn[k] = (4*l[n] - 1) * d[n][k]
				} else {
					a, b := n-3, (n-2)%3
					dn[k] = 4 * (l[a]*d[b][k] + l[b]*d[a][k])
				}
			}
			for i := range 2 {
				for k := range 2 {
					j[i][k] += nodes[3*n+i] * dn[k]
				}
			}
		}
		det := j[0][0]*j[1][1] - j[0][1]*j[1][0]
		if !(det > 0) {
			return "its triangle is turned over or has no area"
		}
		s := &c.at[q]
		s.area, s.corner = weights[q]*det, l
		for i := range 3 {
			s.slope[i] = [2]float64{
				(d[i][0]*j[1][1] - d[i][1]*j[1][0]) / det,
				(-d[i][0]*j[0][1] + d[i][1]*j[0][0]) / det,
			}
		}
	}
	return ""
}

// shape gives the 15 shape functions and their gradients by x, y, z (1/m) at ζ in a layer of a thickness (m).
func (s *spot) shape(zeta, thickness float64) (n [15]float64, g [15][3]float64) {
	low, high, mid := (1-zeta)/2, (1+zeta)/2, 1-zeta*zeta
	dz := 2 / thickness // dζ/dz
	for i := range 3 {
		l, sl := s.corner[i], s.slope[i]
		v := l * (2*l - 1)
		n[i], n[6+i], n[12+i] = v*low-l*mid/2, v*high-l*mid/2, l*mid
		for k := range 2 {
			dv := (4*l - 1) * sl[k]
			g[i][k], g[6+i][k], g[12+i][k] = dv*low-sl[k]*mid/2, dv*high-sl[k]*mid/2, sl[k]*mid
		}
		g[i][2], g[6+i][2], g[12+i][2] = dz*(-v/2+l*zeta), dz*(v/2+l*zeta), -2*zeta*l*dz
		a, b := i, (i+1)%3
		m := 4 * s.corner[a] * s.corner[b]
		n[3+i], n[9+i] = m*low, m*high
		for k := range 2 {
			dm := 4 * (s.corner[a]*s.slope[b][k] + s.corner[b]*s.slope[a][k])
			g[3+i][k], g[9+i][k] = dm*low, dm*high
		}
		g[3+i][2], g[9+i][2] = -m*dz/2, m*dz/2
	}
	return n, g
}

// each calls f at every integration point of the column with the weight of its volume (m³).
func (c *column) each(q int, cuts []slice, f func(s *slice, zeta, volume float64)) {
	for i := range cuts {
		s := &cuts[i]
		middle, half := (s.low+s.high)/2, (s.high-s.low)/2
		for p, x := range gaussPoints {
			f(s, middle+half*x, c.at[q].area*gaussWeights[p]*half*s.thickness/2)
		}
	}
}

// matrices writes packed stiffness and mass.
func (c *column) matrices(cuts []slice, stiffness, mass []float64) {
	clear(c.full)
	clear(c.mass)
	points := c.order / 3
	for q := range c.at {
		c.each(q, cuts, func(s *slice, zeta, volume float64) {
			n, g := c.at[q].shape(zeta, s.thickness)
			to := place(s.layer)
			var cb [15][6][3]float64 // stress of each unknown
			for i := range 15 {
				for r := range 6 {
					d := &s.stiffness[r]
					x, y, z := g[i][0], g[i][1], g[i][2]
					cb[i][r] = [3]float64{
						volume * (d[0]*x + d[4]*z + d[5]*y),
						volume * (d[1]*y + d[3]*z + d[5]*x),
						volume * (d[2]*z + d[3]*y + d[4]*x),
					}
				}
			}
			for i := range 15 {
				x, y, z := g[i][0], g[i][1], g[i][2]
				for j := range 15 {
					if to[j] > to[i] {
						continue
					}
					t := &cb[j]
					at := 3*to[i]*c.order + 3*to[j]
					for k := range 3 {
						c.full[at+k] += x*t[0][k] + y*t[5][k] + z*t[4][k]
						c.full[at+c.order+k] += y*t[1][k] + x*t[5][k] + z*t[3][k]
						c.full[at+2*c.order+k] += z*t[2][k] + y*t[3][k] + x*t[4][k]
					}
					c.mass[to[i]*points+to[j]] += s.density * volume * n[i] * n[j]
				}
			}
		})
	}
	clear(mass)
	for i := range c.order {
		copy(stiffness[element.Packed(i):element.Packed(i)+i+1], c.full[i*c.order:])
	}
	for i := range points {
		for j := range i + 1 {
			for k := range 3 {
				mass[element.Packed(3*i+k)+3*j+k] = c.mass[i*points+j]
			}
		}
	}
}

// energies writes the energy of one motion by kind.
func (c *column) energies(cuts []slice, u, out []float64) {
	clear(out)
	inPlane := [3]int{0, 1, 5}
	for q := range c.at {
		var force, strainSum, work [3]float64
		thick, across := 0.0, 0.0
		c.each(q, cuts, func(s *slice, zeta, volume float64) {
			_, g := c.at[q].shape(zeta, s.thickness)
			to := place(s.layer)
			var e [6]float64
			for i := range 15 {
				ux, uy, uz := u[3*to[i]], u[3*to[i]+1], u[3*to[i]+2]
				x, y, z := g[i][0], g[i][1], g[i][2]
				e[0] += x * ux
				e[1] += y * uy
				e[2] += z * uz
				e[3] += z*uy + y*uz
				e[4] += z*ux + x*uz
				e[5] += y*ux + x*uy
			}
			var stress [6]float64
			for r := range 6 {
				for k := range 6 {
					stress[r] += s.stiffness[r][k] * e[k]
				}
			}
			for k, r := range inPlane {
				force[k] += volume * stress[r]
				strainSum[k] += volume * e[r]
				work[k] += volume * stress[r] * e[r] / 2
			}
			thick += volume
			across += volume * (stress[2]*e[2] + stress[3]*e[3] + stress[4]*e[4]) / 2
		})
		for k := range 3 {
			mean := force[k] * strainSum[k] / thick / 2
			out[element.InPlane] += mean
			if k == 2 {
				out[element.Twist] += work[k] - mean
			} else {
				out[element.Bending] += work[k] - mean
			}
		}
		out[element.Shear] += across
	}
}
