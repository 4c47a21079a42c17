package assembly_test

import (
	"context"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
)

// convergence returns the relative errors of the first mode of a row of square plates, edges as given,
// over cells per side.
func convergence(t *testing.T, kind element.Type, id, edges string, h float64, cells ...int) (errs []float64) {
	t.Helper()
	row := known.One(t, plates, id)
	section, err := laminate.Homogeneous(laminate.Isotropic(1e9, 0.3, 1000), h, 0)
	if err != nil {
		t.Fatal(err)
	}
	for _, n := range cells {
		p := newPlate(known.Rectangle(1, 1, n, n, 0), kind, section)
		p.everywhere("xyZ")
		p.edges(t, []byte(edges))
		got := elastic(t, &p.Problem, 5, free([]byte(edges)))
		errs = append(errs, math.Abs(got[0]*math.Sqrt(section.Mass/section.D[0][0])/row.Values[0]-1))
		if n == 40 {
			row.Check(t, 1, scaled(got, math.Sqrt(section.Mass/section.D[0][0]))...)
		}
	}
	t.Logf("%s, %s: errors %.2g for %d cells per side", kind.Describe().Name, id, errs, cells)
	return errs
}

// Frequencies of quadratic triangles converge with the fourth power of the element size, those of
// linear ones with the second; at free edges only from where elements are as small as the layer of a
// third of the thickness in which the twisting moment ends.
func TestConvergence(t *testing.T) {
	quadratic, linear := byName(t, "quadratic-triangle"), byName(t, "linear-triangle")
	for _, c := range []struct {
		kind      element.Type
		id, edges string
		h         float64
		cells     []int
		falls     []float64 // least ratio of successive errors
	}{
		{quadratic, "B-THICK-CCCC-h0.1-b1", `"CCCC"`, 0.1, []int{4, 8, 16}, []float64{11, 11}},
		{quadratic, "B-THICK-FFFF-h0.1-b1", `"FFFF"`, 0.1, []int{6, 12, 24}, []float64{4, 9}},
		{linear, "B-THIN-CCCC-1x1", `"CCCC"`, 0.001, []int{10, 20, 40}, []float64{3.8, 3.8}},
		{linear, "B-THICK-FFFF-h0.1-b1", `"FFFF"`, 0.1, []int{20, 40}, []float64{3}},
	} {
		errs := convergence(t, c.kind, c.id, c.edges, c.h, c.cells...)
		for i, least := range c.falls {
			if errs[i+1] > errs[i]/least {
				t.Errorf("%s, %s: the error falls from %.3g to %.3g, less than %g times", c.kind.Describe().Name, c.id, errs[i], errs[i+1], least)
			}
		}
	}
}

// tilted is an unsymmetric laminate plate with a body on a footprint and a beam to another, seen from
// axes turned in space.
func tilted(t *testing.T, turn assembly.Axes) *assembly.Problem {
	t.Helper()
	ud := laminate.Material{E1: 128e9, E2: 8.5e9, G12: 4.5e9, Nu12: 0.3, G13: 4.5e9, G23: 3.2e9, Density: 1580}
	section, err := laminate.Stack([]laminate.Ply{{Material: ud, Thickness: 0.001}, {Material: ud, Thickness: 0.001, Angle: 0.7}})
	if err != nil {
		t.Fatal(err)
	}
	g := known.Rectangle(0.1, 0.06, 8, 6, 0.2)
	out := func(v assembly.Vec) (w assembly.Vec) {
		for k := range 3 {
			w[k] = v[0]*turn[0][k] + v[1]*turn[1][k] + v[2]*turn[2][k]
		}
		return w
	}
	var f frame
	nodes := f.panel("plate", g, turn, assembly.Vec{}, section, t)
	foot := func(x, y float64) (list []int32) {
		for i, q := range g.Points {
			if math.Abs(q[0]-x) < 0.013 && math.Abs(q[1]-y) < 0.011 {
				list = append(list, nodes[i])
			}
		}
		return list
	}
	tensor := func(a, b, c float64) (j [6]float64) { // of principal axes along the turned ones
		d := [3]float64{a, b, c}
		for k := range 3 {
			e := turn[k]
			j[0] += d[k] * e[0] * e[0]
			j[1] += d[k] * e[1] * e[1]
			j[2] += d[k] * e[2] * e[2]
			j[3] += d[k] * e[0] * e[1]
			j[4] += d[k] * e[0] * e[2]
			j[5] += d[k] * e[1] * e[2]
		}
		return j
	}
	f.body("motor", foot(0, 0), assembly.Inertia{Mass: 0.02, Centre: out(assembly.Vec{0, 0, 0.01}), Tensor: tensor(3e-6, 4e-6, 5e-6)})
	end := f.point(0, 0, 0)
	tip := f.point(0, 0, 0)
	f.Nodes[end], f.Nodes[tip] = out(assembly.Vec{0.1, 0.06, 0.001}), out(assembly.Vec{0.1, 0.06, 0.026})
	f.member("post", beam.Tube(0.004, 0, 70e9, 0.33, 2700), turn[1], end, tip, 3)
	f.body("foot", append(foot(0.1, 0.06), end))
	top := f.body("cap", []int32{tip}, assembly.Inertia{Mass: 0.005, Centre: f.Nodes[tip], Tensor: tensor(1e-7, 1e-7, 1e-7)})
	// A body on a joint with rigid, elastic and free components in turned axes.
	hung := f.body("hung", nil, assembly.Inertia{Mass: 0.004, Centre: out(assembly.Vec{0.1, 0.05, 0.04}), Tensor: tensor(2e-7, 3e-7, 4e-7)})
	f.spring("hinge", top, hung, f.Nodes[tip], [6]float64{inf, 1e5, inf, inf, 0.5, inf})
	f.Springs[0].Axes = turn
	return &f.Problem
}

// Turning the whole structure in space changes no frequency, no energy and no mass.
func TestObjectivity(t *testing.T) {
	s3 := math.Sqrt(3)
	skew := assembly.Axes{{1 / s3, 1 / s3, 1 / s3}, {-1 / math.Sqrt2, 1 / math.Sqrt2, 0}, {-1 / math.Sqrt(6), -1 / math.Sqrt(6), 2 / math.Sqrt(6)}}
	var systems [2]*assembly.System
	var omega [2][]float64
	for i, axes := range []assembly.Axes{assembly.Global, skew} {
		p := tilted(t, axes)
		systems[i] = assemble(t, p)
		omega[i] = elastic(t, p, 12, 6)
	}
	for k := range omega[0] {
		if math.Abs(omega[1][k]/omega[0][k]-1) > 1e-7 {
			t.Errorf("mode %d: %.10g rad/s turned, %.10g as it was", k+1, omega[1][k], omega[0][k])
		}
	}
	if a, b := systems[0].Mass, systems[1].Mass; math.Abs(a-b) > 1e-12*a {
		t.Errorf("mass %g turned, %g as it was", b, a)
	}
}

// Energies by part and kind add up to ½ yᵀKy, kinetic ones to ½ yᵀMy, and group matrices to yᵀKy'; the
// number of threads changes no bit.
func TestEnergiesAndGroups(t *testing.T) {
	p := tilted(t, assembly.Global)
	s := assemble(t, p)
	var ys [][]float64
	for m := range 3 {
		y := make([]float64, s.N)
		for i := range y {
			y[i] = math.Sin(float64(i * (m + 1))) // no symmetry
		}
		ys = append(ys, y)
	}
	e, err := s.Energies(context.Background(), ys, 2)
	if err != nil {
		t.Fatal(err)
	}
	one, err := s.GroupStiffness(context.Background(), ys, 1)
	if err != nil {
		t.Fatal(err)
	}
	many, err := s.GroupStiffness(context.Background(), ys, 5)
	if err != nil {
		t.Fatal(err)
	}
	ky, my := make([]float64, s.N), make([]float64, s.N)
	for m, y := range ys {
		s.K.MulVec(ky, y)
		s.M.MulVec(my, y)
		for q := range ys {
			want, got := 0.0, 0.0
			for i := range ky {
				want += ky[i] * ys[q][i]
			}
			for g := range one {
				got += one[g][m*len(ys)+q]
			}
			if math.Abs(got-want) > 1e-9*math.Abs(one[0][m*len(ys)+m]) {
				t.Errorf("groups give y%d K y%d = %.12g, want %.12g", m, q, got, want)
			}
		}
		// Element by element the plates of a group hold what the group does, less its beams.
		at := 0
		for i := range p.Plates {
			own := 0.0
			for range p.Plates[i].Elements {
				own += e.Plates[m][at]
				at++
			}
			whole := 0.0
			for _, v := range e.Strain[m][p.Plates[i].Group] {
				whole += v
			}
			alone := true
			for j := range p.Plates {
				alone = alone && (j == i || p.Plates[j].Group != p.Plates[i].Group)
			}
			for j := range p.Beams {
				alone = alone && p.Beams[j].Group != p.Plates[i].Group
			}
			if !(own > 0) || alone && math.Abs(own-whole) > 1e-9*whole || own > whole*(1+1e-9) {
				t.Errorf("motion %d: the elements of plate %d hold %g of the %g of its group", m, i, own, whole)
			}
		}
		if at != len(e.Plates[m]) || at == 0 {
			t.Errorf("energies of %d elements, the plates have %d", len(e.Plates[m]), at)
		}
		strain, kinetic, k, mm := 0.0, 0.0, 0.0, 0.0
		for g := range e.Strain[m] {
			for _, v := range e.Strain[m][g] {
				strain += v
			}
			kinetic += e.Kinetic[m][g]
		}
		for _, v := range e.Body[m] {
			kinetic += v
		}
		for i := range y {
			k += ky[i] * y[i] / 2
			mm += my[i] * y[i] / 2
		}
		if math.Abs(strain-k) > 1e-9*k || math.Abs(kinetic-mm) > 1e-9*mm {
			t.Errorf("motion %d: energies %.12g and %.12g, want %.12g and %.12g", m, strain, kinetic, k, mm)
		}
	}
	for g := range one {
		if !slices.Equal(one[g], many[g]) {
			t.Errorf("group %s depends on the number of threads", p.Groups[g].Name)
		}
	}
	other, err := assembly.Assemble(context.Background(), tilted(t, assembly.Global), 7)
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(s.K.Val, other.K.Val) || !slices.Equal(s.M.Val, other.M.Val) {
		t.Error("K or M depends on the number of threads")
	}
}

// Rigid motions are exact null vectors whatever is tied to what, loads do the work they should, and
// bodies carry their members.
func TestRigidMotionsAndLoads(t *testing.T) {
	p := tilted(t, assembly.Axes{{0, 1, 0}, {0, 0, 1}, {1, 0, 0}})
	s := assemble(t, p)
	ky := make([]float64, s.N)
	for k, y := range s.Rigid() {
		s.K.MulVec(ky, y)
		for i, v := range ky {
			if math.Abs(v) > 1e-8*s.K.At(i, i) {
				t.Fatalf("rigid motion %d is resisted by %g at unknown %d (diagonal %g)", k, v, i, s.K.At(i, i))
			}
		}
		// A force at the motor does the work of its point: direction k alone for displacements.
		at := assembly.Vec{0.03, -0.01, 0.05}
		m := s.Motion(0, at, y)
		load := make([]float64, s.N)
		force := [6]float64{1, -2, 3, 0.1, 0.2, -0.3}
		s.Load(load, 0, at, force)
		work, want := 0.0, 0.0
		for i := range y {
			work += load[i] * y[i]
		}
		for c := range 6 {
			want += force[c] * m[c]
		}
		if math.Abs(work-want) > 1e-12 {
			t.Errorf("work %g, want %g", work, want)
		}
		nodes := make([]float64, 6*len(p.Nodes))
		s.Expand(nodes, y)
		for v := range p.Nodes {
			want := [6]float64{}
			want[k] = 1
			if k >= 3 {
				r := [3]float64{p.Nodes[v][0] - s.Centre[0], p.Nodes[v][1] - s.Centre[1], p.Nodes[v][2] - s.Centre[2]}
				a, b := (k-2)%3, (k-1)%3
				want[a], want[b] = -r[b], r[a]
			}
			for c := range 6 {
				if math.Abs(nodes[6*v+c]-want[c]) > 1e-12 {
					t.Fatalf("node %d in rigid motion %d moves by %v, want %v", v, k, nodes[6*v:6*v+6], want)
				}
			}
		}
	}
}

// Bodies that share a node become one, and this is told; those that are welded become one quietly.
func TestMerges(t *testing.T) {
	p := newPlate(known.Rectangle(0.1, 0.1, 6, 6, 0), byName(t, "quadratic-triangle"), aluminium(t, 0.002))
	disc := func(x float64) (nodes []int32) {
		for i, q := range p.grid.Points {
			if math.Hypot(q[0]-x, q[1]-0.05) < 0.018 {
				nodes = append(nodes, int32(i))
			}
		}
		return nodes
	}
	p.Bodies = []assembly.Body{{Name: "a", Nodes: disc(0.02)}, {Name: "b", Nodes: disc(0.05)}, {Name: "c", Nodes: disc(0.09)},
		{Name: "d", Inertia: []assembly.Inertia{{Mass: 0.1, Centre: assembly.Vec{0.09, 0.05, 0.02}, Tensor: [6]float64{1e-5, 1e-5, 1e-5}}}}}
	p.Welds = [][2]int{{2, 3}}
	s := assemble(t, &p.Problem)
	want := []assembly.Merge{{Bodies: []string{"a", "b"}, Shared: true}, {Bodies: []string{"c", "d"}}}
	if len(s.Merges) != 2 || !slices.Equal(s.Merges[0].Bodies, want[0].Bodies) || !slices.Equal(s.Merges[1].Bodies, want[1].Bodies) ||
		!s.Merges[0].Shared || s.Merges[1].Shared {
		t.Errorf("merges are %+v, want %+v", s.Merges, want)
	}
	// One body: the motion of a point of a equals that of the same point of b.
	y := make([]float64, s.N)
	for i := range y {
		y[i] = math.Cos(float64(i))
	}
	at := assembly.Vec{0.3, 0.2, 0.1}
	if s.Motion(0, at, y) != s.Motion(1, at, y) {
		t.Error("merged bodies move apart")
	}
}

// What cannot be solved is refused by name.
func TestRefusals(t *testing.T) {
	good := func() *plate {
		return newPlate(known.Rectangle(0.1, 0.1, 4, 4, 0), byName(t, "quadratic-triangle"), aluminium(t, 0.002))
	}
	solid := assembly.Inertia{Mass: 0.1, Tensor: [6]float64{1e-5, 1e-5, 1e-5}}
	refused := func(p *plate, want string) error {
		t.Helper()
		_, err := assembly.Assemble(context.Background(), &p.Problem, 1)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want a message with %q", err, want)
		}
		return err
	}
	p := good()
	p.Bodies = []assembly.Body{{Name: "camera", Inertia: []assembly.Inertia{solid}}}
	var loose *assembly.Loose
	if err := refused(p, `"camera" is not connected to the rest`); !errors.As(err, &loose) || len(loose.Pieces) != 2 {
		t.Errorf("got %v", err)
	}

	p = good()
	p.Bodies = []assembly.Body{{Name: "pad", Nodes: p.grid.Sets["x=0"]}, {Name: "camera", Inertia: []assembly.Inertia{solid}}}
	p.Groups = append(p.Groups, assembly.Group{Name: "strap", Kind: assembly.MountGroup})
	p.Springs = []assembly.Spring{{Group: 1, A: 0, B: 1, Axes: assembly.Global, Stiffness: [6]float64{1e4, 1e4, 1e4}}}
	var hinged *assembly.Free
	if err := refused(p, "move freely"); !errors.As(err, &hinged) || hinged.Body != "camera" {
		t.Errorf("got %v", err)
	}
	// Two points in a line leave one rotation; a third off it none.
	p.Springs = append(p.Springs, p.Springs[0])
	p.Springs[1].Point = assembly.Vec{0.01, 0, 0}
	refused(p, "move freely")
	p.Springs = append(p.Springs, p.Springs[0])
	p.Springs[2].Point = assembly.Vec{0, 0.01, 0}
	if _, err := assembly.Assemble(context.Background(), &p.Problem, 1); err != nil {
		t.Errorf("three points: %v", err)
	}

	p = good()
	p.Bodies = []assembly.Body{{Name: "motor", Nodes: p.grid.Sets["x=0"], Inertia: []assembly.Inertia{{Mass: 0.1, Tensor: [6]float64{1e-5, 1e-5, 3e-5}}}}}
	refused(p, "impossible")

	p = good()
	p.Plates[0].Elements = slices.Clone(p.Plates[0].Elements)
	e := &p.Plates[0].Elements[7]
	e[0], e[1] = e[1], e[0]
	e[4], e[5] = e[5], e[4]
	var part *assembly.PartError
	if err := refused(p, "element 7"); !errors.As(err, &part) || part.Part != "plate" {
		t.Errorf("got %v", err)
	}
}

func BenchmarkAssemble(b *testing.B) {
	g := known.Rectangle(0.2, 0.2, 40, 40, 0.15)
	section, err := laminate.Homogeneous(laminate.Isotropic(70e9, 0.33, 2700), 0.002, 0)
	if err != nil {
		b.Fatal(err)
	}
	p := newPlate(g, shell.QuadraticTriangle(), section)
	for b.Loop() {
		if _, err := assembly.Assemble(context.Background(), &p.Problem, 2); err != nil {
			b.Fatal(err)
		}
	}
}
