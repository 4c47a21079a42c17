package assembly

import "hushframe/core/numeric/sparse"

// Expand writes the motion of every node under the unknowns y: six components per node, node by
// node, in airframe axes. A node of the mesh on which solid elements stand gets the straight line that fits the motion
// of its fibre best. Mid-side nodes of three-node elements get the mean of their corners, other
// unused nodes zeros. It panics when lengths do not fit.
func (s *System) Expand(dst, y []float64) {
	l := s.layout
	if len(y) != s.N || len(dst) != 6*len(l.nodes) {
		panic("assembly: Expand: bad length")
	}
	bodies := s.bodyMotions(y)
	for v := range l.nodes {
		nd := &l.nodes[v]
		var m [6]float64
		if nd.body >= 0 {
			m = carried(bodies[nd.body], sub(l.problem.Nodes[v], l.bodies[nd.body].reference))
			if !nd.global {
				m = nd.axes.in6(m)
			}
		}
		for k := range 6 {
			switch {
			case nd.own[k] >= 0:
				m[k] = y[nd.own[k]]
			case !nd.slaved[k]:
				m[k] = 0
			}
		}
		if !nd.global {
			m = nd.axes.out6(m)
		}
		copy(dst[6*v:], m[:])
	}
	for i := range l.problem.Plates {
		part := &l.problem.Plates[i]
		for f := range part.Fibres {
			m := part.Fibres[f].line(dst, part.Axes)
			copy(dst[6*part.Fibres[f].Node:], m[:])
		}
		if part.Type.Describe().Nodes != 3 {
			continue
		}
		for _, e := range part.Elements {
			for side := range 3 {
				if mid := e[3+side]; !l.used[mid] {
					a, b := dst[6*e[side]:], dst[6*e[(side+1)%3]:]
					for k := range 6 {
						dst[6*int(mid)+k] = (a[k] + b[k]) / 2
					}
				}
			}
		}
	}
}

func (s *System) bodyMotions(y []float64) [][6]float64 {
	m := make([][6]float64, len(s.layout.bodies))
	for b := range m {
		m[b] = s.layout.bodyMotion(b, y)
	}
	return m
}

func (l *layout) bodyMotion(b int, y []float64) (m [6]float64) {
	for _, c := range l.columns[b] {
		for k := range 6 {
			m[k] += c.motion[k] * y[c.unknown]
		}
	}
	return m
}

// Motion returns the motion of the point at, fixed to body b of the problem, under the unknowns y.
func (s *System) Motion(b int, at Vec, y []float64) [6]float64 {
	mb := s.layout.bodyOf[b]
	return carried(s.layout.bodyMotion(mb, y), sub(at, s.layout.bodies[mb].reference))
}

// Load adds to dst, over the unknowns, the force (N) and moment (N·m) about the point at that act on
// body b of the problem: dst + Tᵀ f, so that the work of f is dst·y.
func (s *System) Load(dst []float64, b int, at Vec, force [6]float64) {
	mb := s.layout.bodyOf[b]
	r := sub(at, s.layout.bodies[mb].reference)
	for _, c := range s.layout.columns[mb] {
		m := carried(c.motion, r)
		for k := range 6 {
			dst[c.unknown] += m[k] * force[k]
		}
	}
}

// LoadNodes adds to dst the forces and moments on nodes, six components per node in airframe axes.
func (s *System) LoadNodes(dst, forces []float64) {
	l := s.layout
	if len(dst) != s.N || len(forces) != 6*len(l.nodes) {
		panic("assembly: LoadNodes: bad length")
	}
	var columns []column
	for v := range l.nodes {
		f := l.nodes[v].axes.in6([6]float64(forces[6*v : 6*v+6]))
		columns = l.nodeColumns(columns[:0], int32(v))
		for _, c := range columns {
			for k := range 6 {
				dst[c.unknown] += c.motion[k] * f[k]
			}
		}
	}
}

// Rigid returns the unknowns in six rigid motions about the centre of gravity: unit displacements (m)
// along and unit rotations (rad) about the airframe axes. They are exact, without any solution.
func (s *System) Rigid() [6][]float64 {
	var all [6][]float64
	for k := range 6 {
		var unit [6]float64
		unit[k] = 1
		y := make([]float64, s.N)
		for i, src := range s.layout.source {
			m := carried(unit, sub(s.layout.where[i], s.Centre))
			if src.node >= 0 {
				m = s.layout.nodes[src.node].axes.in6(m)
			}
			y[i] = m[src.component]
		}
		all[k] = y
	}
	return all
}

// NodeUnknowns lists the unknowns of the six components of a node in its own axes, -1 for components
// that are held or follow a body.
func (s *System) NodeUnknowns(v int32) [6]int32 { return s.layout.nodes[v].own }

// Ordering returns the elimination order for K and M, from their graph and the places of unknowns.
func (s *System) Ordering() sparse.Ordering {
	l := s.layout
	place := make([]int32, s.N)
	var coords [][3]float64
	at := map[[2]int32]int32{}
	for u, src := range l.source {
		key := [2]int32{src.node, src.body}
		i, ok := at[key]
		if !ok {
			i = int32(len(coords))
			at[key] = i
			coords = append(coords, l.where[u])
		}
		place[u] = i
	}
	return sparse.Order(s.K.Pattern(), place, coords)
}
