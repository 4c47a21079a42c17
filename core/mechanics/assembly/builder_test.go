package assembly_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/laminate"
)

// inf is a rigid component of a spring.
var inf = math.Inf(1)

// frame builds problems of beams and bodies.
type frame struct {
	assembly.Problem
}

// point adds a node.
func (f *frame) point(x, y, z float64) int32 {
	f.Nodes = append(f.Nodes, assembly.Vec{x, y, z})
	return int32(len(f.Nodes) - 1)
}

// member joins nodes a and b by n beams, the section's y axis across near the given direction.
func (f *frame) member(name string, s beam.Section, y assembly.Vec, a, b int32, n int) []int32 {
	f.Groups = append(f.Groups, assembly.Group{Name: name, Kind: assembly.PartGroup})
	part := assembly.BeamPart{Group: len(f.Groups) - 1, Section: s, Y: y}
	list := []int32{a}
	p, q := f.Nodes[a], f.Nodes[b]
	for i := 1; i < n; i++ {
		t := float64(i) / float64(n)
		list = append(list, f.point(p[0]+t*(q[0]-p[0]), p[1]+t*(q[1]-p[1]), p[2]+t*(q[2]-p[2])))
	}
	list = append(list, b)
	for i := range n {
		part.Elements = append(part.Elements, [2]int32{list[i], list[i+1]})
	}
	f.Beams = append(f.Beams, part)
	return list
}

func (f *frame) body(name string, nodes []int32, inertia ...assembly.Inertia) int {
	f.Bodies = append(f.Bodies, assembly.Body{Name: name, Nodes: nodes, Inertia: inertia})
	return len(f.Bodies) - 1
}

func (f *frame) spring(name string, a, b int, at assembly.Vec, k [6]float64) {
	f.Groups = append(f.Groups, assembly.Group{Name: name, Kind: assembly.JointGroup})
	f.Springs = append(f.Springs, assembly.Spring{Group: len(f.Groups) - 1, A: a, B: b, Point: at, Axes: assembly.Global, Stiffness: k})
}

func assemble(t *testing.T, p *assembly.Problem) *assembly.System {
	t.Helper()
	s, err := assembly.Assemble(context.Background(), p, 2)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// aluminium is an isotropic section of the thickness.
func aluminium(t *testing.T, thickness float64) laminate.Section {
	t.Helper()
	s, err := laminate.Homogeneous(laminate.Isotropic(70e9, 0.33, 2700), thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// panel adds a rectangle spanned from a corner by sides along two directions, its nodes merged with
// those at the same place, and returns its grid's nodes in the problem.
func (f *frame) panel(group string, g *known.Grid, axes assembly.Axes, origin assembly.Vec, section laminate.Section, t *testing.T) []int32 {
	f.Groups = append(f.Groups, assembly.Group{Name: group, Kind: assembly.PartGroup})
	part := assembly.PlatePart{Group: len(f.Groups) - 1, Type: byName(t, "quadratic-triangle"), Axes: axes, Section: section}
	number := make([]int32, len(g.Points))
	for i, x := range g.Points {
		var at assembly.Vec
		for k := range 3 {
			at[k] = origin[k] + x[0]*axes[0][k] + x[1]*axes[1][k]
		}
		number[i] = -1
		for v, old := range f.Nodes {
			if math.Abs(old[0]-at[0])+math.Abs(old[1]-at[1])+math.Abs(old[2]-at[2]) < 1e-9 {
				number[i] = int32(v)
			}
		}
		if number[i] < 0 {
			number[i] = f.point(at[0], at[1], at[2])
		}
	}
	for _, e := range g.Triangles {
		for k := range e {
			e[k] = number[e[k]]
		}
		part.Elements = append(part.Elements, e)
	}
	f.Plates = append(f.Plates, part)
	return number
}
