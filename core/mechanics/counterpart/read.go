package counterpart

import (
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
)

// Frame is one side.
type Frame struct {
	Mesh  *mesh.Mesh
	Basis *modal.Basis // of that mesh
	// Masses of the parts by name, kg. Parts without a mass are left out.
	Masses map[string]float64
	Solids []Solid
}

// Solid is a rigid body whose motion Basis.Sites has under its name.
type Solid struct {
	Name   string
	Mass   float64      // kg
	Centre airframe.Vec // centre of gravity, m
	// Inertia is the moments about airframe axes through Centre, kg·m²; zero if not known.
	Inertia [3]float64
}

// Common holds what both sides have, component by component.
type Common struct {
	Weights []float64
	// A and B are the motions of the elastic modes of either side, by rising frequency.
	A, B [][]float64
	// Shared is the part of the mass of either side that is at common points, 0 to 1; 0 when the side has no mass.
	Shared [2]float64
	// Alone names parts and solids with mass that only one side has, sorted.
	Alone [2][]string
}

// Read finds the common points and the motion there of every elastic mode. It panics when a basis does not belong to its
// mesh.
func Read(a, b Frame) *Common {
	sides := [2]*side{newSide(a), newSide(b)}
	c := &Common{A: make([][]float64, len(sides[0].elastic)), B: make([][]float64, len(sides[1].elastic))}
	var shared [2]float64
	names := map[string]bool{}
	for _, s := range sides {
		for name := range s.parts {
			names[name] = true
		}
	}
	for _, name := range sorted(names) {
		p, inA := sides[0].parts[name]
		q, inB := sides[1].parts[name]
		if !inA || !inB || p.standoff != q.standoff {
			c.alone(name, inA, inB)
			continue
		}
		shared[0], shared[1] = shared[0]+p.mass, shared[1]+q.mass
		if p.standoff {
			c.standoff(sides, p, q)
		} else {
			c.plate(sides, p, q)
		}
	}
	clear(names)
	for _, s := range sides {
		for name := range s.solids {
			names[name] = true
		}
	}
	for _, name := range sorted(names) {
		p, inA := sides[0].solids[name]
		q, inB := sides[1].solids[name]
		if !inA || !inB {
			c.alone(name, inA, inB)
			continue
		}
		shared[0], shared[1] = shared[0]+p.Mass, shared[1]+q.Mass
		c.solid(sides, p, q)
	}
	for i, s := range sides {
		sort.Strings(c.Alone[i])
		if s.mass > 0 {
			c.Shared[i] = min(1, shared[i]/s.mass)
		}
	}
	return c
}

func (c *Common) alone(name string, inA, inB bool) {
	if inA {
		c.Alone[0] = append(c.Alone[0], name)
	}
	if inB {
		c.Alone[1] = append(c.Alone[1], name)
	}
}

// add appends one point: its displacement along three directions of either side.
func (c *Common) add(sides [2]*side, weight float64, at [2]place, axes [2][3]airframe.Vec) {
	c.Weights = append(c.Weights, weight, weight, weight)
	for k, s := range sides {
		out := c.A
		if k == 1 {
			out = c.B
		}
		for m, v := range s.elastic {
			u := at[k].of(s.Basis.Shapes[v])
			for _, axis := range axes[k] {
				out[m] = append(out[m], dot(u, axis))
			}
		}
	}
}

var airframeAxes = [3]airframe.Vec{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}

func (c *Common) plate(sides [2]*side, p, q *part) {
	axes := [2][3]airframe.Vec{airframeAxes, airframeAxes}
	own := apart(p, q, true) < apart(p, q, false)
	if own {
		for k, f := range []airframe.Frame{p.frame, q.frame} {
			axes[k] = [3]airframe.Vec{f.X, f.Y, f.Z}
		}
	}
	mass := (p.mass + q.mass) / 2
	for t := range p.triangles {
		here := p.middle(t)
		c.add(sides, mass/2*p.areas[t]/p.area, [2]place{here, q.nearest(p.seen(q, p.centres[t], own))}, axes)
	}
	for t := range q.triangles {
		here := q.middle(t)
		c.add(sides, mass/2*q.areas[t]/q.area, [2]place{p.nearest(q.seen(p, q.centres[t], own)), here}, axes)
	}
}

// alongStandoff is the number of points of a standoff.
const alongStandoff = 5

func (c *Common) standoff(sides [2]*side, p, q *part) {
	mass := (p.mass + q.mass) / 2
	for i := range alongStandoff {
		t := (float64(i) + 0.5) / alongStandoff
		c.add(sides, mass/alongStandoff, [2]place{p.along(t), q.along(t)}, [2][3]airframe.Vec{airframeAxes, airframeAxes})
	}
}

func (c *Common) solid(sides [2]*side, p, q Solid) {
	mass := (p.Mass + q.Mass) / 2
	c.Weights = append(c.Weights, mass, mass, mass)
	for k := range 3 {
		c.Weights = append(c.Weights, (p.Inertia[k]+q.Inertia[k])/2)
	}
	for k, s := range sides {
		out, solid := c.A, p
		if k == 1 {
			out, solid = c.B, q
		}
		site := s.sites[solid.Name]
		var arm airframe.Vec
		for d := range arm {
			arm[d] = solid.Centre[d] - site.Point[d]
		}
		for m, v := range s.elastic {
			x := site.Motion[v]
			turn := cross(airframe.Vec{x[3], x[4], x[5]}, arm)
			out[m] = append(out[m], x[0]+turn[0], x[1]+turn[1], x[2]+turn[2], x[3], x[4], x[5])
		}
	}
}

func sorted(set map[string]bool) []string {
	out := make([]string, 0, len(set))
	for name := range set {
		out = append(out, name)
	}
	sort.Strings(out)
	return out
}

func dot(a, b airframe.Vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func cross(a, b airframe.Vec) airframe.Vec {
	return airframe.Vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}
