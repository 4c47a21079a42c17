package assembly

import (
	"slices"

	"hushframe/core/mechanics/element"
	"hushframe/core/numeric/dense"
)

// tied is the stiffness of a contact between the nodes of its plates. A point with shape functions N adds
//
//	k N_i N_j (G_a m_i)·(G_b m_j)
//
// for nodes i and j of sides a and b with motions m, G carrying a motion over the arm of a side to the point. Where plates
// lie on one another all points have the same arms, so that the products of shape functions are summed over the whole
// contact before the unknowns come in.
type tied struct {
	nodes []tiedNode
	arms  []tiedArms
	// Pairs of node i with itself and with later ones are pairs[rows[i]:rows[i+1]], by arms.
	rows  []int32
	pairs []tiedPair
}

// tiedNode is a node of one side.
type tiedNode struct {
	node    int32
	side    int8
	plain   bool     // its unknowns are its six components in the axes of the side
	columns []column // in those axes
}

// tiedPair is a sum of measure times shape functions of two nodes over points of equal arms.
type tiedPair struct {
	node, arms int32
	weight     float64
}

// tiedArms are the arms of points, from the place on each plate, with the stiffness of a point for the motions of nodes of
// sides a and b, in the axes of these sides: entry 6q+u is that of component q of b and u of a.
type tiedArms struct {
	at        [2]Vec
	stiffness [2][2][36]float64
}

// sameArm is how far arms of points may differ, in metres, to be taken as one: far above rounding, far below any plate.
const sameArm = 1e-10

// overlap is a run of points between the same two elements, of equal arms, with the products of all shape functions. Nodes of
// side 1 follow those of side 0.
type overlap struct {
	nodes [12]int32 // of the tied
	count int
	arms  int32
	sum   [12 * 13 / 2]float64 // packed lower triangle
}

// contactContributions adds an entry per tied node: its coupling with itself and the nodes after it.
func (s *System) contactContributions(all []contribution, columns [][]column, threads int) []contribution {
	contacts := s.layout.problem.Contacts
	parts := make([][]contribution, len(contacts))
	dense.Parallel(threads, len(contacts), func(i int) {
		t := s.layout.tie(&contacts[i], columns)
		parts[i] = make([]contribution, len(t.nodes))
		for v := range t.nodes {
			parts[i][v] = t.contribution(int32(v), contacts[i].Group)
		}
	})
	for _, p := range parts {
		all = append(all, p...)
	}
	return all
}

// tie gathers the points of a contact.
func (l *layout) tie(c *Contact, columns [][]column) *tied {
	t := &tied{}
	overlaps := l.overlaps(c, t)
	axes := l.tiedAxes(c, t)
	for i := range t.nodes {
		n := &t.nodes[i]
		nd := &l.nodes[n.node]
		n.plain = nd.body < 0 && nd.axes == axes[n.side]
		n.columns = columns[n.node]
		n.plain = n.plain && len(n.columns) == 6
		if nd.axes != axes[n.side] {
			n.columns = slices.Clone(n.columns)
			for k := range n.columns {
				n.columns[k].motion = axes[n.side].in6(nd.axes.out6(n.columns[k].motion))
			}
		}
	}
	for i := range t.arms {
		t.arms[i].set(c, axes)
	}
	t.pair(overlaps)
	return t
}

// overlaps divides the points into runs and numbers nodes and arms as they come.
func (l *layout) overlaps(c *Contact, t *tied) []overlap {
	var all []overlap
	var number [2][]int32 // of the nodes of a side, from 1
	for side := range number {
		number[side] = make([]int32, len(l.nodes))
	}
	for i := range c.Points {
		x := &c.Points[i]
		arms := [2]Vec{x.arm(0, l.problem.Nodes), x.arm(1, l.problem.Nodes)}
		turned := len(t.arms) == 0 || !near(arms, t.arms[len(t.arms)-1].at)
		if turned {
			t.arms = append(t.arms, tiedArms{at: arms})
		}
		if turned || x.Sides[0].Nodes != c.Points[i-1].Sides[0].Nodes || x.Sides[1].Nodes != c.Points[i-1].Sides[1].Nodes {
			all = append(all, overlap{arms: int32(len(t.arms) - 1)})
			p := &all[len(all)-1]
			for side := range x.Sides {
				for _, v := range x.Sides[side].Nodes[:x.Sides[side].Count] {
					if number[side][v] == 0 {
						t.nodes = append(t.nodes, tiedNode{node: v, side: int8(side)})
						number[side][v] = int32(len(t.nodes))
					}
					p.nodes[p.count] = number[side][v] - 1
					p.count++
				}
			}
		}
		all[len(all)-1].addPoint(x)
	}
	return all
}

func near(a, b [2]Vec) bool {
	return length(sub(a[0], b[0])) <= sameArm && length(sub(a[1], b[1])) <= sameArm
}

// addPoint adds the products of the shape functions at a point.
func (p *overlap) addPoint(x *ContactPoint) {
	var weights [12]float64
	n := copy(weights[:], x.Sides[0].Weights[:x.Sides[0].Count])
	copy(weights[n:], x.Sides[1].Weights[:x.Sides[1].Count])
	for i := range p.count {
		by, row := x.Measure*weights[i], p.sum[element.Packed(i):][:i+1]
		for j := range row {
			row[j] += by * weights[j]
		}
	}
}

// tiedAxes are the axes that most nodes of a side have: those of the first free one.
func (l *layout) tiedAxes(c *Contact, t *tied) [2]Axes {
	axes := [2]Axes{c.Axes, c.Axes}
	var found [2]bool
	for i := range t.nodes {
		n := &t.nodes[i]
		if nd := &l.nodes[n.node]; !found[n.side] && nd.body < 0 {
			axes[n.side], found[n.side] = nd.axes, true
		}
	}
	return axes
}

// set computes the stiffness of a point: the work of the forces of unit motions of side a on those of side b.
func (r *tiedArms) set(c *Contact, axes [2]Axes) {
	var gaps [2][6][6]float64 // of unit motions, in the axes of the contact
	for side := range gaps {
		for u := range 6 {
			var unit [6]float64
			unit[u] = float64(2*side - 1)
			gaps[side][u] = c.Axes.in6(carried(axes[side].out6(unit), r.at[side]))
		}
	}
	for a := range gaps {
		for b := range gaps {
			for q := range 6 {
				for u := range 6 {
					sum := 0.0
					for k, stiffness := range c.Stiffness {
						sum += stiffness * gaps[a][u][k] * gaps[b][q][k]
					}
					r.stiffness[a][b][6*q+u] = sum
				}
			}
		}
	}
}

// pair sums the overlaps by pairs of nodes.
func (t *tied) pair(overlaps []overlap) {
	type use struct{ overlap, at int32 }
	start := make([]int32, len(t.nodes)+1)
	for i := range overlaps {
		for _, v := range overlaps[i].nodes[:overlaps[i].count] {
			start[v+1]++
		}
	}
	for v := range t.nodes {
		start[v+1] += start[v]
	}
	uses := make([]use, start[len(t.nodes)])
	next := append([]int32(nil), start...)
	for i := range overlaps {
		for at, v := range overlaps[i].nodes[:overlaps[i].count] {
			uses[next[v]] = use{int32(i), int32(at)}
			next[v]++
		}
	}
	t.rows = make([]int32, 1, len(t.nodes)+1)
	place := make([]int32, len(t.nodes)) // of the pair with each node, from 1; older ones lie below the first of these arms
	for v := range t.nodes {
		from, arms := int32(len(t.pairs)), int32(-1)
		for _, u := range uses[start[v]:start[v+1]] {
			p := &overlaps[u.overlap]
			if p.arms != arms {
				from, arms = int32(len(t.pairs)), p.arms
			}
			for at, w := range p.nodes[:p.count] {
				if int(w) < v {
					continue
				}
				if place[w] <= from {
					t.pairs = append(t.pairs, tiedPair{node: w, arms: arms})
					place[w] = int32(len(t.pairs))
				}
				t.pairs[place[w]-1].weight += p.sum[element.Packed(max(int(u.at), at))+min(int(u.at), at)]
			}
		}
		t.rows = append(t.rows, int32(len(t.pairs)))
	}
}

// contribution is the entry of node v: the columns of its unknowns, with those of its partners as rows.
func (t *tied) contribution(v int32, group int) contribution {
	own := t.nodes[v].columns
	pairs := t.pairs[t.rows[v]:t.rows[v+1]]
	count := len(own)
	for i := range pairs {
		count += len(t.nodes[pairs[i].node].columns)
	}
	c := contribution{group: group, columns: len(own), unknowns: make([]int32, 0, count)}
	for i := range own {
		c.unknowns = append(c.unknowns, own[i].unknown)
	}
	for i := range pairs {
		if pairs[i].node != v {
			for _, col := range t.nodes[pairs[i].node].columns {
				c.unknowns = append(c.unknowns, col.unknown)
			}
		}
	}
	c.compute = func(dst []float64) { t.compute(dst, v) }
	return c
}

// compute writes the matrix of node v.
func (t *tied) compute(dst []float64, v int32) {
	own := &t.nodes[v]
	width := len(own.columns)
	var forces [2][]float64 // on component q of a node of each side, of every column: entry q*width+u
	if !own.plain {
		forces = [2][]float64{make([]float64, 6*width), make([]float64, 6*width)}
	}
	at := width * (width + 1) / 2
	clear(dst[:at])
	arms := int32(-1)
	for _, p := range t.pairs[t.rows[v]:t.rows[v+1]] {
		if p.arms != arms {
			arms = p.arms
			for side, unit := range t.arms[arms].stiffness[own.side] {
				if own.plain {
					forces[side] = t.arms[arms].stiffness[own.side][side][:]
					continue
				}
				for q := range 6 {
					for u := range own.columns {
						sum := 0.0
						for k, m := range own.columns[u].motion {
							sum += unit[6*q+k] * m
						}
						forces[side][q*width+u] = sum
					}
				}
			}
		}
		other := &t.nodes[p.node]
		from := forces[other.side]
		switch {
		case p.node == v:
			for q := range own.columns {
				row := dst[q*(q+1)/2:][:q+1]
				for k, m := range own.columns[q].motion {
					if m *= p.weight; m != 0 {
						for u := range row {
							row[u] += m * from[k*width+u]
						}
					}
				}
			}
		case other.plain:
			for i, f := range from {
				dst[at+i] = p.weight * f
			}
			at += len(from)
		default:
			for q := range other.columns {
				row := dst[at:][:width]
				clear(row)
				for k, m := range other.columns[q].motion {
					if m *= p.weight; m != 0 {
						for u := range row {
							row[u] += m * from[k*width+u]
						}
					}
				}
				at += width
			}
		}
	}
}
