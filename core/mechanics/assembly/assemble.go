package assembly

import (
	"hushframe/core/mechanics/element"
	"hushframe/core/numeric/sparse"
)

// contribution is one entry of the assembly: an element with nodes, or the small matrices of a spring
// or of a body over its columns.
type contribution struct {
	unknowns []int32
	// For elements: full packed matrices over 6·nodes, and how nodes follow the unknowns; transform
	// is nil when they are the unknowns, in order.
	stiffness, mass []float64
	order           int
	transform       []float64 // order × len(unknowns), row-major
}

// add assembles K and M.
func (s *System) add(threads int) {
	all := s.contributions()
	lists := make([][]int32, len(all))
	for i := range all {
		lists[i] = all[i].unknowns
	}
	k := sparse.NewAssembler(s.N, lists)
	m := k.Fork()
	k.AddAll(threads, func(e int, packed []float64) { all[e].reduce(packed, all[e].stiffness) })
	m.AddAll(threads, func(e int, packed []float64) { all[e].reduce(packed, all[e].mass) })
	s.K, s.M = k.Matrix(), m.Matrix()
}

// reduce writes Tᵀ A T, or A where there is no T. A nil A leaves dst zero.
func (c *contribution) reduce(dst, a []float64) {
	if a == nil {
		return
	}
	if c.transform == nil {
		copy(dst, a)
		return
	}
	n, w := c.order, len(c.unknowns)
	at := make([]float64, n*w) // A T
	for i := range n {
		row := at[i*w : (i+1)*w]
		for j := range n {
			v := a[element.Packed(max(i, j))+min(i, j)]
			if v == 0 {
				continue
			}
			t := c.transform[j*w : (j+1)*w]
			for q, x := range t {
				row[q] += v * x
			}
		}
	}
	for i := range n {
		t, row := c.transform[i*w:(i+1)*w], at[i*w:(i+1)*w]
		for p, x := range t {
			if x == 0 {
				continue
			}
			out := dst[element.Packed(p) : element.Packed(p)+p+1]
			for q := range out {
				out[q] += x * row[q]
			}
		}
	}
}

func (s *System) contributions() []contribution {
	var all []contribution
	for i := range s.plates {
		a := &s.plates[i]
		per, list := a.part.unknowns(), a.part.lists()
		size := element.Packed(per * a.nodes)
		for e := range a.part.Elements {
			c := s.follow(list(e), per, a.part.Axes)
			c.stiffness, c.mass = a.matrices.Stiffness[size*e:size*(e+1)], a.matrices.Mass[size*e:size*(e+1)]
			all = append(all, c)
		}
	}
	for i := range s.beams {
		a := &s.beams[i]
		size := element.Packed(12)
		for e, nodes := range a.part.Elements {
			c := s.follow(nodes[:], element.NodeUnknowns, a.axes[e])
			c.stiffness, c.mass = a.matrices.Stiffness[size*e:size*(e+1)], a.matrices.Mass[size*e:size*(e+1)]
			all = append(all, c)
		}
	}
	for i := range s.springs {
		all = append(all, s.springContribution(&s.springs[i]))
	}
	for b := range s.layout.bodies {
		all = append(all, s.bodyContribution(b))
	}
	return all
}

// follow expresses the element-frame components of the nodes, the first per of each, through the unknowns.
func (s *System) follow(nodes []int32, per int, axes Axes) contribution {
	l := s.layout
	c := contribution{order: per * len(nodes)}
	plain := true
	for _, v := range nodes {
		nd := &l.nodes[v]
		if nd.body >= 0 || nd.axes != axes {
			plain = false
		}
	}
	if plain {
		for _, v := range nodes {
			c.unknowns = append(c.unknowns, l.nodes[v].own[:per]...)
		}
		return c
	}
	place := map[int32]int{}
	var columns []column
	starts := make([]int, len(nodes)+1)
	for i, v := range nodes {
		columns = l.nodeColumns(columns, v)
		starts[i+1] = len(columns)
	}
	for _, col := range columns {
		if _, ok := place[col.unknown]; !ok {
			place[col.unknown] = len(c.unknowns)
			c.unknowns = append(c.unknowns, col.unknown)
		}
	}
	w := len(c.unknowns)
	c.transform = make([]float64, c.order*w)
	for i, v := range nodes {
		for _, col := range columns[starts[i]:starts[i+1]] {
			m := col.motion
			if l.nodes[v].axes != axes {
				m = axes.in6(l.nodes[v].axes.out6(m))
			}
			for k := range per {
				c.transform[(per*i+k)*w+place[col.unknown]] += m[k]
			}
		}
	}
	return c
}

// springContribution is the stiffness over the columns of both bodies.
func (s *System) springContribution(a *assembledSpring) contribution {
	var set columnSet
	for side, b := range []int{a.spring.A, a.spring.B} {
		if b == Ground {
			continue
		}
		for _, col := range s.layout.columns[b] {
			m := a.spring.Axes.in6(carried(col.motion, sub(a.spring.Point, a.reference[side])))
			set.add(col.unknown, m, float64(2*side-1))
		}
	}
	c := contribution{order: 6, stiffness: make([]float64, element.Packed(6))}
	for k, v := range a.spring.Stiffness {
		c.stiffness[element.Packed(k)+k] = v
	}
	c.fill(set.list)
	return c
}

// bodyContribution is the mass of a merged body over its columns.
func (s *System) bodyContribution(b int) contribution {
	body := &s.layout.bodies[b]
	c := contribution{order: 6, mass: make([]float64, element.Packed(6))}
	for _, i := range body.members {
		for _, in := range s.layout.problem.Bodies[i].Inertia {
			m := in.about(body.reference)
			for r := range 6 {
				for q := range r + 1 {
					c.mass[element.Packed(r)+q] += m[r][q]
				}
			}
		}
	}
	c.fill(s.layout.columns[b])
	return c
}

func (c *contribution) fill(columns []column) {
	w := len(columns)
	c.transform = make([]float64, c.order*w)
	for j, col := range columns {
		c.unknowns = append(c.unknowns, col.unknown)
		for k := range 6 {
			c.transform[k*w+j] = col.motion[k]
		}
	}
}

// about returns the 6×6 mass matrix for motions of the point at.
func (in Inertia) about(at Vec) (m [6][6]float64) {
	// Centre velocity of each unit motion; the kinetic energy is that of the mass there plus θᵀJθ.
	t := in.Tensor
	tensor := [3][3]float64{{t[0], t[3], t[4]}, {t[3], t[1], t[5]}, {t[4], t[5], t[2]}}
	var moved [6]Vec
	for k := range 6 {
		var unit [6]float64
		unit[k] = 1
		u := carried(unit, sub(in.Centre, at))
		moved[k] = Vec(u[:3])
	}
	for r := range 6 {
		for q := range 6 {
			m[r][q] = in.Mass * dot(moved[r], moved[q])
			if r >= 3 && q >= 3 {
				m[r][q] += tensor[r-3][q-3]
			}
		}
	}
	return m
}
