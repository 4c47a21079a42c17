package assembly

import (
	"slices"

	"hushframe/core/mechanics/element"
	"hushframe/core/numeric/dense"
	"hushframe/core/numeric/sparse"
)

// contribution is one entry of the assembly: an element with nodes, or the small matrices of a spring
// or of a body over its columns.
type contribution struct {
	unknowns []int32
	group    int // whose stiffness it is
	// For elements: full packed matrices over 6·nodes.
	stiffness, mass []float64
	// Each component is the sum of the shares that it follows: those of component i are
	// shares[starts[i]:starts[i+1]]. Without starts the components are the unknowns, in order.
	starts []int32
	shares []share
	// compute, when set, writes the stiffness over the unknowns, those of its first columns, in place of all these; it has
	// no mass.
	compute func(dst []float64)
	columns int // that exist, see sparse.Element; 0: all
}

// share is a part of an unknown, by its place in the list of unknowns.
type share struct {
	at     int32
	factor float64
}

// add assembles K and M.
func (s *System) add(threads int) {
	s.entries = s.contributions(threads)
	elements := make([]sparse.Element, len(s.entries))
	for i := range s.entries {
		elements[i] = sparse.Element{Unknowns: s.entries[i].unknowns, Leading: s.entries[i].columns}
	}
	s.assembler = sparse.NewAssemblerThreads(s.N, elements, threads)
	// One matrix is worked on while the other waits for the last of its batch.
	dense.Parallel(threads, 2, func(which int) {
		a := s.assembler.Fork()
		if which == 0 {
			a.AddAll(threads, func(e int, packed []float64) []float64 { return s.entries[e].stiffnessOver(packed) })
			s.K = a.Matrix()
			return
		}
		a.AddAll(threads, func(e int, packed []float64) []float64 { return s.entries[e].reduce(packed, s.entries[e].mass) })
		s.M = a.Matrix()
	})
}

// stiffnessOver gives the stiffness over the unknowns, in dst or where it stands; nil where there is none.
func (c *contribution) stiffnessOver(dst []float64) []float64 {
	if c.compute != nil {
		c.compute(dst)
		return dst
	}
	return c.reduce(dst, c.stiffness)
}

// reduce gives Tᵀ A T in dst, T being the matrix of the shares, or A where there are none.
func (c *contribution) reduce(dst, a []float64) []float64 {
	if a == nil || c.starts == nil {
		return a
	}
	n, w := len(c.starts)-1, len(c.unknowns)
	var small [2 * 36 * 36]float64
	room := small[:]
	if n*(n+w) > len(room) {
		room = make([]float64, n*(n+w))
	}
	full, product := room[:n*n], room[n*n:][:w*n] // A, and the transpose of A T
	unpack(full, a, n)
	for j := range n {
		row := full[j*n:][:n]
		for _, t := range c.shares[c.starts[j]:c.starts[j+1]] {
			to := product[int(t.at)*n:][:n]
			for i, v := range row {
				to[i] += t.factor * v
			}
		}
	}
	clear(dst)
	for i := range n {
		for _, t := range c.shares[c.starts[i]:c.starts[i+1]] {
			out := dst[element.Packed(int(t.at)):][:t.at+1]
			for q := range out {
				out[q] += t.factor * product[q*n+i]
			}
		}
	}
	return dst
}

// contributions lists all entries: elements, springs, contacts, bodies.
func (s *System) contributions(threads int) []contribution {
	var all []contribution
	columns := s.layout.allColumns(threads)
	for i := range s.plates {
		a := &s.plates[i]
		per, list := a.part.unknowns(), a.part.lists()
		size := element.Packed(per * a.nodes)
		from := len(all)
		all = append(all, make([]contribution, len(a.part.Elements))...)
		const share = 64
		dense.Parallel(threads, (len(all)-from+share-1)/share, func(t int) {
			for e := t * share; e < min(len(all)-from, (t+1)*share); e++ {
				c := &all[from+e]
				s.follow(c, list(e), per, a.part.Axes, columns)
				c.group = a.part.Group
				c.stiffness, c.mass = a.matrices.Stiffness[size*e:size*(e+1)], a.matrices.Mass[size*e:size*(e+1)]
			}
		})
	}
	for i := range s.beams {
		a := &s.beams[i]
		size := element.Packed(12)
		for e, nodes := range a.part.Elements {
			c := contribution{group: a.part.Group}
			s.follow(&c, nodes[:], element.NodeUnknowns, a.axes[e], columns)
			c.stiffness, c.mass = a.matrices.Stiffness[size*e:size*(e+1)], a.matrices.Mass[size*e:size*(e+1)]
			all = append(all, c)
		}
	}
	for i := range s.springs {
		all = append(all, s.springContribution(&s.springs[i]))
	}
	all = s.contactContributions(all, columns, threads)
	for b := range s.layout.bodies {
		all = append(all, s.bodyContribution(b))
	}
	return all
}

// follow expresses the element-frame components of the nodes, the first per of each, through the unknowns; columns are those
// of all nodes.
func (s *System) follow(c *contribution, nodes []int32, per int, axes Axes, columns [][]column) {
	l := s.layout
	plain, count := true, 0
	for _, v := range nodes {
		nd := &l.nodes[v]
		if nd.body >= 0 || nd.axes != axes {
			plain = false
		}
		count += len(columns[v])
	}
	if plain {
		c.unknowns = make([]int32, 0, per*len(nodes))
		for _, v := range nodes {
			c.unknowns = append(c.unknowns, l.nodes[v].own[:per]...)
		}
		return
	}
	c.unknowns = make([]int32, 0, count)
	c.starts = make([]int32, 1, per*len(nodes)+1)
	c.shares = make([]share, 0, 3*count)
	var buffer [16]column
	for _, v := range nodes {
		list := columns[v]
		if nd := &l.nodes[v]; nd.axes != axes {
			list = buffer[:0]
			for _, col := range columns[v] {
				list = append(list, column{col.unknown, axes.in6(nd.axes.out6(col.motion))})
			}
		}
		var buffer [16]int32
		places := buffer[:0]
		for i := range list {
			at := slices.Index(c.unknowns, list[i].unknown)
			if at < 0 {
				at = len(c.unknowns)
				c.unknowns = append(c.unknowns, list[i].unknown)
			}
			places = append(places, int32(at))
		}
		for k := range per {
			for i := range list {
				if f := list[i].motion[k]; f != 0 {
					c.shares = append(c.shares, share{places[i], f})
				}
			}
			c.starts = append(c.starts, int32(len(c.shares)))
		}
	}
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
	c := contribution{group: a.spring.Group, stiffness: make([]float64, element.Packed(6))}
	for k, v := range a.spring.Stiffness {
		c.stiffness[element.Packed(k)+k] = v
	}
	c.fill(set.list)
	return c
}

// bodyContribution is the mass of a merged body over its columns.
func (s *System) bodyContribution(b int) contribution {
	body := &s.layout.bodies[b]
	c := contribution{mass: make([]float64, element.Packed(6))}
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
	for _, col := range columns {
		c.unknowns = append(c.unknowns, col.unknown)
	}
	c.starts = make([]int32, 1, 7)
	for k := range 6 {
		for j, col := range columns {
			if col.motion[k] != 0 {
				c.shares = append(c.shares, share{int32(j), col.motion[k]})
			}
		}
		c.starts = append(c.starts, int32(len(c.shares)))
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
