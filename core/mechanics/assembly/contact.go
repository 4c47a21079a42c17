package assembly

import (
	"math"
	"slices"

	"hushframe/core/mechanics/element"
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

// contactContributions gives one entry per element of side 0 that holds points in a row. The pairs of elements in it
// share most of their unknowns, so that the entry is not much larger than one of them.
func (s *System) contactContributions(all []contribution) []contribution {
	for i := range s.layout.problem.Contacts {
		c := &s.layout.problem.Contacts[i]
		for lo := 0; lo < len(c.Points); {
			hi := lo + 1
			for hi < len(c.Points) && c.Points[lo].Sides[0].Nodes == c.Points[hi].Sides[0].Nodes {
				hi++
			}
			all = append(all, s.contactContribution(c, c.Points[lo:hi]))
			lo = hi
		}
	}
	return all
}

func sameElements(a, b *ContactPoint) bool {
	return a.Sides[0].Nodes == b.Sides[0].Nodes && a.Sides[1].Nodes == b.Sides[1].Nodes
}

// contactContribution sums over points of one element of side 0. The matrix is computed when it is asked
// for, since all of them together would take more memory than K.
func (s *System) contactContribution(c *Contact, points []ContactPoint) contribution {
	out := contribution{group: c.Group}
	var columns []column
	var met []int32
	for p := range points {
		for side := range 2 {
			x := &points[p].Sides[side]
			for _, v := range x.Nodes[:x.Count] {
				if slices.Contains(met, v) {
					continue
				}
				met = append(met, v)
				columns = s.layout.nodeColumns(columns[:0], v)
				for _, col := range columns {
					if !slices.Contains(out.unknowns, col.unknown) {
						out.unknowns = append(out.unknowns, col.unknown)
					}
				}
			}
		}
	}
	unknowns := out.unknowns
	out.compute = func(dst []float64) {
		var work [2]leverage
		for lo := 0; lo < len(points); {
			hi := lo + 1
			for hi < len(points) && sameElements(&points[lo], &points[hi]) {
				hi++
			}
			s.addContact(dst, unknowns, c, points[lo:hi], &work)
			lo = hi
		}
	}
	return out
}

// lever is what an unknown moves one point of contact by, per unit of the shape function of a node.
type lever struct {
	at, node int        // place in the list of unknowns, node of the side
	motion   [6]float64 // of the node, in airframe axes
	gap      [6]float64 // in those axes of the contact that have stiffness, signed by the side
}

// leverage is what a side of a pair of elements moves; it is kept from pair to pair while its element and its arm are
// the same.
type leverage struct {
	nodes  [6]int32
	levers []lever
	arm    Vec
	set    bool // whether the gaps are those at this arm
}

// take makes the levers those of a side.
func (v *leverage) take(l *layout, x *ContactSide, unknowns []int32, columns []column) []column {
	if len(v.levers) > 0 && v.nodes == x.Nodes {
		return columns
	}
	v.nodes, v.set, v.levers = x.Nodes, false, slices.Grow(v.levers[:0], 6*x.Count)
	for i := range x.Count {
		columns = l.nodeColumns(columns[:0], x.Nodes[i])
		axes := l.nodes[x.Nodes[i]].axes
		for _, col := range columns {
			v.levers = append(v.levers, lever{at: slices.Index(unknowns, col.unknown), node: i, motion: axes.out6(col.motion)})
		}
	}
	return columns
}

// reach makes the gaps those of a point at an arm.
func (v *leverage) reach(c *Contact, stiff []int, arm Vec, sign float64) {
	if v.set && length(sub(arm, v.arm)) <= sameArm {
		return
	}
	v.arm, v.set = arm, true
	for i := range v.levers {
		x := &v.levers[i]
		gap := c.Axes.in6(carried(x.motion, arm))
		for k, at := range stiff {
			x.gap[k] = gap[at] * sign
		}
	}
}

// sameArm is how far arms of points may differ, in metres, to be taken as one: far above rounding, far below any plate.
const sameArm = 1e-10

// addContact adds the stiffness of points of the same two elements over the unknowns. Points of equal arms, which is
// all of them where plates lie on one another, differ by their shape functions alone: these are summed before the unknowns
// come in.
func (s *System) addContact(dst []float64, unknowns []int32, c *Contact, points []ContactPoint, work *[2]leverage) {
	l := s.layout
	var columns []column
	for side := range work {
		columns = work[side].take(l, &points[0].Sides[side], unknowns, columns)
	}
	var stiff []int
	for k, v := range c.Stiffness {
		if v != 0 {
			stiff = append(stiff, k)
		}
	}
	for lo := 0; lo < len(points); {
		arms := [2]Vec{points[lo].arm(0, l.problem.Nodes), points[lo].arm(1, l.problem.Nodes)}
		var products [2][2][6][6]float64 // of the shape functions of both sides, times measure
		hi := lo
		for ; hi < len(points); hi++ {
			p := &points[hi]
			if length(sub(p.arm(0, l.problem.Nodes), arms[0])) > sameArm || length(sub(p.arm(1, l.problem.Nodes), arms[1])) > sameArm {
				break
			}
			for a := range 2 {
				for b := range 2 {
					for i := range p.Sides[a].Count {
						by := p.Measure * p.Sides[a].Weights[i]
						for j := range p.Sides[b].Count {
							products[a][b][i][j] += by * p.Sides[b].Weights[j]
						}
					}
				}
			}
		}
		lo = hi
		for side := range work {
			work[side].reach(c, stiff, arms[side], float64(2*side-1))
		}
		for a := range work {
			for i := range work[a].levers {
				u := &work[a].levers[i]
				var force [6]float64
				for k, at := range stiff {
					force[k] = u.gap[k] * c.Stiffness[at]
				}
				if force == ([6]float64{}) {
					continue
				}
				to := dst[element.Packed(u.at):]
				for b := range work {
					by, levers := &products[a][b][u.node], work[b].levers
					for j := range levers {
						v := &levers[j]
						if v.at > u.at {
							continue
						}
						g := &v.gap
						w := force[0]*g[0] + force[1]*g[1] + force[2]*g[2]
						if len(stiff) > 3 {
							w += force[3]*g[3] + force[4]*g[4] + force[5]*g[5]
						}
						to[v.at] += by[v.node] * w
					}
				}
			}
		}
	}
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
