package assembly

import (
	"math"

	"hushframe/core/numeric/dense"
)

// Contact ties two plates at points by springs, spread over an area or along a line.
type Contact struct {
	Group     int
	Axes      Axes
	Stiffness [6]float64 // per measure of the points: N/m and N·m/rad per m² or m; finite
	Points    []ContactPoint
}

// ContactPoint is one spring: what side 1 moves there more than side 0.
type ContactPoint struct {
	At      Vec
	Measure float64 // m² or m
	Sides   [2]ContactSide
}

// ContactSide interpolates the motion of a plate: the nodes of an element and their shape functions at
// the place below the point. From that place the motion is carried over rigidly.
type ContactSide struct {
	Nodes   [6]int32
	Weights [6]float64
	Count   int // of nodes in use
}

// arm is the way from the place on the plate to the point.
func (p *ContactPoint) arm(side int, nodes []Vec) Vec {
	s := &p.Sides[side]
	r := p.At
	for i := range s.Count {
		r = sub(r, scale(s.Weights[i], nodes[s.Nodes[i]]))
	}
	return r
}

// gap is what side 1 moves more than side 0 at a point, in the axes of the contact, under the motion of
// all nodes.
func (c *Contact) gap(p *ContactPoint, places []Vec, nodes []float64) (d [6]float64) {
	for side := range 2 {
		var m [6]float64
		x := &p.Sides[side]
		for i := range x.Count {
			for k, v := range nodes[6*x.Nodes[i] : 6*x.Nodes[i]+6] {
				m[k] += x.Weights[i] * v
			}
		}
		m = c.Axes.in6(carried(m, p.arm(side, places)))
		for k := range d {
			d[k] += float64(2*side-1) * m[k]
		}
	}
	return d
}

// strains lists, per motion, the gaps of a contact scaled so that the sum of their squares is twice the
// energy: one row of the same length for each.
func (s *System) strains(c *Contact, nodes [][]float64, threads int) (rows []float64, width int) {
	var stiff []int
	for k, v := range c.Stiffness {
		if v != 0 {
			stiff = append(stiff, k)
		}
	}
	width = len(stiff) * len(c.Points)
	rows = make([]float64, len(nodes)*width)
	places := s.layout.problem.Nodes
	dense.Parallel(threads, len(nodes), func(m int) {
		row := rows[m*width : (m+1)*width]
		for p := range c.Points {
			d := c.gap(&c.Points[p], places, nodes[m])
			for i, k := range stiff {
				row[p*len(stiff)+i] = d[k] * math.Sqrt(c.Stiffness[k]*c.Points[p].Measure)
			}
		}
	})
	return rows, width
}

// contactEnergies adds the strain energy of contacts, which counts as that of joints.
func (s *System) contactEnergies(nodes [][]float64, out *Energies, threads int) {
	const kind = len(EnergyKinds) - 2
	for i := range s.layout.problem.Contacts {
		c := &s.layout.problem.Contacts[i]
		rows, width := s.strains(c, nodes, threads)
		for m := range nodes {
			sum := 0.0
			for _, v := range rows[m*width : (m+1)*width] {
				sum += v * v
			}
			out.Strain[m][c.Group][kind] += sum / 2
		}
	}
}

// contactStiffness adds the work of contacts to the lower triangles of the group matrices.
func (s *System) contactStiffness(nodes [][]float64, out [][]float64, threads int) {
	n := len(nodes)
	g := make([]float64, n*n)
	for i := range s.layout.problem.Contacts {
		c := &s.layout.problem.Contacts[i]
		rows, width := s.strains(c, nodes, threads)
		clear(g)
		dense.Gram(n, n, width, rows, rows, g, threads)
		dst := out[c.Group]
		for r := range n {
			for q := range r + 1 {
				dst[r*n+q] += g[r*n+q]
			}
		}
	}
}
