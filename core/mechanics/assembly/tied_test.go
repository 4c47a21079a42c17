package assembly_test

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
)

// The matrix of a contact does the work of its springs under motion of any kind, as summed point by point by GroupStiffness:
// with points that lie over, above and beside one another, nodes in one body and in another that a third follows, nodes held
// in axes of their own, and springs of all six components.
func TestContactMatrixDoesTheWorkOfItsSprings(t *testing.T) {
	g, o := sandwich(0.12, 0.02, 0.005)
	joint := airframe.Joint{Name: "glue", Measure: airframe.PerArea, Stiffness: [6]float64{3e10, 5e10, 7e10, 2e4, 3e4, 4e4}}
	f, me := tied(t, g, o, noPoisson(70e9, 0.33, 2700), joint)
	r := rand.New(rand.NewPCG(8, 1))
	points := f.Contacts[0].Points
	for i := range points {
		if i%3 != 0 { // the others keep the arms of the face
			for d := range 3 {
				points[i].At[d] += 1e-3 * (r.Float64() - 0.5)
			}
		}
	}
	axes := f.Plates[0].Axes
	turned := assembly.Axes{{0.6, 0.8, 0}, {-0.8, 0.6, 0}, {0, 0, 1}}
	bodies := [3]assembly.Body{{Name: "left"}, {Name: "right"}, {Name: "far"}}
	for v, x := range me.Nodes {
		switch upper := x[2] > 0; {
		case x[0] < 0.03:
			bodies[0].Nodes = append(bodies[0].Nodes, int32(v))
		case x[0] > 0.10:
			bodies[1].Nodes = append(bodies[1].Nodes, int32(v))
		case x[0] > 0.05 && x[0] < 0.06 && upper:
			f.Supports = append(f.Supports, assembly.Support{Node: int32(v), Axes: &turned, Fixed: [6]bool{x[1] < 0.01}})
		}
	}
	bodies[2].Inertia = []assembly.Inertia{{Mass: 0.1, Centre: assembly.Vec{0.2, 0.01, 0.01}, Tensor: [6]float64{1e-5, 1e-5, 1e-5}}}
	f.Bodies = append(f.Bodies, bodies[:]...)
	rigid := math.Inf(1)
	f.Springs = append(f.Springs, assembly.Spring{A: 1, B: 2, Point: assembly.Vec{0.12, 0.01, 0}, Axes: axes,
		Stiffness: [6]float64{rigid, rigid, rigid, 100, rigid, rigid}})
	s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
	if err != nil {
		t.Fatal(err)
	}
	ys := make([][]float64, 4)
	for i := range ys {
		ys[i] = make([]float64, s.N)
		for k := range ys[i] {
			ys[i][k] = r.NormFloat64()
		}
	}
	groups, err := s.GroupStiffness(context.Background(), ys, 2)
	if err != nil {
		t.Fatal(err)
	}
	only := make([]float64, len(f.Groups))
	contact := f.Contacts[0].Group
	only[contact] = 1
	k, ky := s.Weighted(only, 2), make([]float64, s.N)
	for i := range ys {
		k.MulVec(ky, ys[i])
		for j := range ys {
			work := 0.0
			for u, v := range ys[j] {
				work += v * ky[u]
			}
			scale := math.Sqrt(groups[contact][i*len(ys)+i] * groups[contact][j*len(ys)+j])
			if want := groups[contact][i*len(ys)+j]; math.Abs(work-want) > 1e-11*scale {
				t.Errorf("motions %d and %d: the matrix does the work %.12g, the springs %.12g", i, j, work, want)
			}
		}
	}
	only[contact] = 2
	for p, v := range s.Weighted(only, 3).Val {
		if v != 2*k.Val[p] {
			t.Fatalf("entry %d of twice the stiffness is %g, of once %g", p, v, k.Val[p])
		}
	}
}

// Nodes of a plate are coupled with those of the other plate that a point of the contact sees together with them, and with
// no others: not with all that lie over the same element, which are many where the other plate is meshed finely.
func TestContactCouplesOnlyWhatItTies(t *testing.T) {
	g, o := sandwich(0.08, 0.04, 0.005)
	o.Sizes = map[string]float64{"lower": 0.03, "upper": 0.006}
	f, _ := tied(t, g, o, noPoisson(70e9, 0.33, 2700), airframe.Joint{Name: "glue", Measure: airframe.PerArea, Stiffness: [6]float64{1e10, 1e10, 1e10}})
	s, err := assembly.Assemble(context.Background(), &f.Problem, 1)
	if err != nil {
		t.Fatal(err)
	}
	pairs := map[[2]int32]bool{}
	meet := func(nodes ...int32) {
		for _, v := range nodes {
			for _, w := range nodes {
				pairs[[2]int32{min(v, w), max(v, w)}] = true
			}
		}
	}
	for i := range f.Plates {
		for _, e := range f.Plates[i].Elements {
			meet(e[:]...)
		}
	}
	for _, p := range f.Contacts[0].Points {
		meet(append(append([]int32(nil), p.Sides[0].Nodes[:]...), p.Sides[1].Nodes[:]...)...)
	}
	want := 0
	for p := range pairs {
		if want += 36; p[0] == p[1] {
			want -= 15
		}
	}
	if len(s.K.Row) != want {
		t.Errorf("%d entries, want %d", len(s.K.Row), want)
	}
}
