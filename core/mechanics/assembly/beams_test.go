package assembly_test

import (
	"context"
	"math"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
)

const beams = "A_beams.json"

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

// hold fixes components of a node: "xyz" displacements, "XYZ" rotations.
func (f *frame) hold(node int32, components string) {
	s := assembly.Support{Node: node}
	for _, c := range components {
		switch {
		case c >= 'x':
			s.Fixed[c-'x'] = true
		default:
			s.Fixed[c-'X'+3] = true
		}
	}
	f.Supports = append(f.Supports, s)
}

func (f *frame) body(name string, nodes []int32, inertia ...assembly.Inertia) int {
	f.Bodies = append(f.Bodies, assembly.Body{Name: name, Nodes: nodes, Inertia: inertia})
	return len(f.Bodies) - 1
}

func (f *frame) spring(name string, a, b int, at assembly.Vec, k [6]float64) {
	f.Groups = append(f.Groups, assembly.Group{Name: name, Kind: assembly.JointGroup})
	f.Springs = append(f.Springs, assembly.Spring{Group: len(f.Groups) - 1, A: a, B: b, Point: at, Axes: assembly.Global, Stiffness: k})
}

// solve returns the lowest natural frequencies in rad/s, by dense algebra: with a shift that makes
// K + σM definite, its Cholesky factor L gives the symmetric matrix L⁻¹ML⁻ᵀ, of eigenvalues 1/(ω²+σ).
func (f *frame) solve(t *testing.T, shift float64) []float64 {
	t.Helper()
	s := assemble(t, &f.Problem)
	return frequencies(t, s, shift)
}

func assemble(t *testing.T, p *assembly.Problem) *assembly.System {
	t.Helper()
	s, err := assembly.Assemble(context.Background(), p, 2)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func frequencies(t *testing.T, s *assembly.System, shift float64) []float64 {
	t.Helper()
	a, m := mat.NewSymDense(s.N, nil), mat.NewSymDense(s.N, nil)
	for i := range s.N {
		for j := range i + 1 {
			m.SetSym(i, j, s.M.At(i, j))
			a.SetSym(i, j, s.K.At(i, j)+shift*s.M.At(i, j))
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(a) {
		t.Fatal("K + σM is not positive definite")
	}
	var l mat.TriDense
	chol.LTo(&l)
	var half, full mat.Dense
	if err := half.Solve(&l, m); err != nil {
		if _, ok := err.(mat.Condition); !ok {
			t.Fatal(err)
		}
	}
	if err := full.Solve(&l, half.T()); err != nil {
		if _, ok := err.(mat.Condition); !ok {
			t.Fatal(err)
		}
	}
	sym := mat.NewSymDense(s.N, nil)
	for i := range s.N {
		for j := range i + 1 {
			sym.SetSym(i, j, (full.At(i, j)+full.At(j, i))/2)
		}
	}
	var eig mat.EigenSym
	if !eig.Factorize(sym, false) {
		t.Fatal("no eigenvalues")
	}
	values := eig.Values(nil)
	var omega []float64
	for i := len(values) - 1; i >= 0 && values[i] > 1e-14*values[len(values)-1]; i-- {
		omega = append(omega, math.Sqrt(max(0, 1/values[i]-shift)))
	}
	return omega
}

// unit is a beam of unit length, bending stiffness about y and mass, with nothing else worth noting.
func unit() beam.Section {
	return beam.Section{EA: 1e6, EIy: 1, EIz: 1e6, GJ: 1e6, GAy: inf, GAz: inf, M: 1, Jx: 1e-3}
}

// planar holds all but bending in the x-z plane.
func (f *frame) planar() {
	for v := range f.Nodes {
		f.hold(int32(v), "xyXZ")
	}
}

var ends = map[string]string{"C": "xyzXYZ", "S": "xyzXZ", "F": ""}

func TestEulerBernoulliConstants(t *testing.T) {
	for _, c := range []struct{ id, left, right string }{
		{"A-EB-CF", "C", "F"}, {"A-EB-FF", "F", "F"}, {"A-EB-SS", "S", "S"}, {"A-EB-CS", "C", "S"},
	} {
		row := known.One(t, beams, c.id)
		var f frame
		a, b := f.point(0, 0, 0), f.point(1, 0, 0)
		f.member("bar", unit(), assembly.Vec{0, 1, 0}, a, b, 40)
		f.planar()
		f.hold(a, ends[c.left])
		f.hold(b, ends[c.right])
		var got []float64
		for _, w := range f.solve(t, 1) {
			if w > 1e-3 {
				got = append(got, math.Sqrt(w))
			}
		}
		row.Check(t, 1, got[:len(row.Values)]...)
	}
}

// Rows A-BEAM-*: bars of real sections by both theories. The interpolation is that of the unloaded beam,
// so inertia leaves an error of ω²h²/(24 c_s²) with c_s the speed of shear waves: 0.2 % at the fourth
// mode of the stockiest bar with the row's 40 elements, a quarter of that with 80.
func TestBars(t *testing.T) {
	for _, row := range known.Rows(t, beams, "A-BEAM-") {
		var c struct {
			Boundary string
			L        float64 `json:"L_m"`
			Width    float64 `json:"width_m"`
			Height   float64 `json:"height_m"`
			E        float64 `json:"E_Pa"`
			Nu       float64
			Rho      float64 `json:"rho_kgm3"`
			Theory   string
		}
		row.Decode(t, &c)
		s := beam.Rectangle(c.Width, c.Height, c.E, c.Nu, c.Rho)
		if c.Theory == "Euler-Bernoulli" {
			s.GAz, s.Jy = inf, 0
		}
		var f frame
		a, b := f.point(0, 0, 0), f.point(c.L, 0, 0)
		f.member("bar", s, assembly.Vec{0, 1, 0}, a, b, 80)
		f.planar()
		f.hold(a, ends[c.Boundary[:1]])
		f.hold(b, ends[c.Boundary[1:2]])
		var got []float64
		for _, w := range f.solve(t, 1e6) {
			if w > 1 {
				got = append(got, w/(2*math.Pi))
			}
		}
		row.Check(t, 1, got[:len(row.Values)]...)
	}
}

// Rows A-TIPMASS-*: a rigid body beyond the tip, in the plane of bending.
func TestTipBodies(t *testing.T) {
	for _, row := range known.Rows(t, beams, "A-TIPMASS-") {
		var c struct{ Alpha, Beta, Epsilon string }
		row.Decode(t, &c)
		alpha, beta, eps := equals(t, c.Alpha), equals(t, c.Beta), equals(t, c.Epsilon)
		var f frame
		a, b := f.point(0, 0, 0), f.point(1, 0, 0)
		list := f.member("bar", unit(), assembly.Vec{0, 1, 0}, a, b, 20)
		f.hold(a, ends["C"])
		for _, v := range list[1:20] {
			f.hold(v, "xyXZ")
		}
		f.body("tip", []int32{b}, assembly.Inertia{Mass: alpha, Centre: assembly.Vec{1 + eps, 0, 0}, Tensor: [6]float64{beta, beta, beta}})
		// The tip moves out of the plane too; only bending about y is as soft as the row's modes.
		row.Check(t, 1, f.solve(t, 1)[:len(row.Values)]...)
	}
}

// equals reads the number after the equals sign: "M/(rho*A*L) = 0.25".
func equals(t *testing.T, text string) float64 {
	t.Helper()
	_, after, _ := strings.Cut(text, "= ")
	v, err := strconv.ParseFloat(strings.Fields(after)[0], 64)
	if err != nil {
		t.Fatalf("%q: %v", text, err)
	}
	return v
}

type arm struct {
	L     float64 `json:"L_m"`
	Width float64 `json:"width_m"`
	High  float64 `json:"height_m"`
	E     float64 `json:"E_Pa"`
	Nu    float64
	Rho   float64 `json:"rho_kgm3"`
	Mass  float64 `json:"tip_mass_kg"`
	J     float64 `json:"tip_J_kgm2"`
	Axial float64 `json:"e_axial_m"`

	WidthY  float64                         `json:"width_y_m"`
	HeightZ float64                         `json:"height_z_m"`
	Offset  [3]float64                      `json:"cg_offset_from_tip_m"`
	Inertia struct{ Ixx, Iyy, Izz float64 } `json:"inertia_about_cg_kgm2"`
}

// Rows A-ARM-*: arms with motor bodies, in the plane and in space.
func TestArms(t *testing.T) {
	for _, row := range known.Rows(t, beams, "A-ARM-") {
		var c arm
		row.Decode(t, &c)
		space := c.WidthY > 0
		offset, tensor := assembly.Vec{c.Axial, 0, 0}, [6]float64{c.J, c.J, c.J}
		if space {
			c.Width, c.High, offset = c.WidthY, c.HeightZ, c.Offset
			tensor = [6]float64{c.Inertia.Ixx, c.Inertia.Iyy, c.Inertia.Izz}
		}
		var f frame
		a, b := f.point(0, 0, 0), f.point(c.L, 0, 0)
		f.member("arm", beam.Rectangle(c.Width, c.High, c.E, c.Nu, c.Rho), assembly.Vec{0, 1, 0}, a, b, 20)
		f.hold(a, ends["C"])
		tip := f.body("motor", []int32{b}, assembly.Inertia{Mass: c.Mass, Centre: assembly.Vec{c.L + offset[0], offset[1], offset[2]}, Tensor: tensor})
		if !space { // bending along the height only
			f.planar()
			f.Supports = f.Supports[:len(f.Supports)-len(f.Nodes)]
			for v := range f.Nodes {
				if int32(v) != b {
					f.hold(int32(v), "xyXZ")
				}
			}
			f.spring("plane", tip, assembly.Ground, assembly.Vec{c.L, 0, 0}, [6]float64{inf, inf, 0, inf, 0, inf})
		}
		var got []float64
		for _, w := range f.solve(t, 1e4) {
			got = append(got, w/(2*math.Pi))
		}
		row.Check(t, 1, got[:len(row.Values)]...)
	}
}

// Rows A-TIPSPRING-*, A-FF-*: springs to the ground and bodies at both ends.
func TestEndSprings(t *testing.T) {
	for _, row := range known.Rows(t, beams, "A-TIPSPRING-", "A-FF-") {
		var c struct {
			Theory string
			K      float64 `json:"k_L3_over_EI"`
			Kr     float64 `json:"kr_L_over_EI"`
			M0     float64 `json:"M0_over_mL"`
			J0     float64 `json:"J0_over_mL3"`
			M1     float64 `json:"M1_over_mL"`
			J1     float64 `json:"J1_over_mL3"`
		}
		row.Decode(t, &c)
		var f frame
		a, b := f.point(0, 0, 0), f.point(1, 0, 0)
		list := f.member("bar", unit(), assembly.Vec{0, 1, 0}, a, b, 20)
		for _, v := range list[1:20] {
			f.hold(v, "xyXZ")
		}
		end := func(v int32, m, j, k, kr float64) {
			body := f.body("end", []int32{v}, assembly.Inertia{Mass: m, Centre: f.Nodes[v], Tensor: [6]float64{j, j, j}})
			f.spring("spring", body, assembly.Ground, f.Nodes[v], [6]float64{inf, inf, k, inf, kr, inf})
		}
		free := strings.HasPrefix(row.ID, "A-FF-")
		if free && c.K > 0 {
			end(a, 0, 0, c.K, 0)
		} else if free {
			end(a, c.M0, c.J0, 0, 0)
		} else {
			f.hold(a, ends["C"])
		}
		end(b, c.M1, c.J1, c.K, c.Kr)
		var got []float64
		for _, w := range f.solve(t, 1) {
			if w > 1e-3 {
				got = append(got, w)
			}
		}
		row.Check(t, 1, got[:len(row.Values)]...)
	}
}

// Rows A-ROD-TIP-*: torsion and stretching against an end inertia.
func TestRods(t *testing.T) {
	for _, id := range []string{"A-ROD-TIP-0.5", "A-ROD-TIP-4"} {
		row := known.One(t, beams, id)
		ratio, err := strconv.ParseFloat(strings.TrimPrefix(id, "A-ROD-TIP-"), 64)
		if err != nil {
			t.Fatal(err)
		}
		for _, axis := range []int{0, 3} { // displacement along x, rotation about x
			s := beam.Section{EA: 1, GJ: 1, EIy: 1e6, EIz: 1e6, GAy: inf, GAz: inf, M: 1, Jx: 1}
			var f frame
			a, b := f.point(0, 0, 0), f.point(1, 0, 0)
			list := f.member("bar", s, assembly.Vec{0, 1, 0}, a, b, 40)
			f.hold(a, ends["C"])
			held := [6]float64{inf, inf, inf, inf, inf, inf}
			held[axis] = 0
			other := map[int]string{0: "yzXYZ", 3: "xyzYZ"}[axis]
			for _, v := range list[1:40] {
				f.hold(v, other)
			}
			body := f.body("end", []int32{b}, assembly.Inertia{Mass: ratio, Centre: f.Nodes[b], Tensor: [6]float64{ratio, ratio, ratio}})
			f.spring("guide", body, assembly.Ground, f.Nodes[b], held)
			row.Check(t, 1, f.solve(t, 1)[:len(row.Values)]...)
		}
	}
}

// Rows A-MOUNTS-*: a body on springs, without any element.
func TestMounts(t *testing.T) {
	for _, row := range known.Rows(t, beams, "A-MOUNTS-") {
		var c struct {
			Mass    float64      `json:"mass_kg"`
			Inertia [3]float64   `json:"inertia_cg_kgm2"`
			Centre  [3]float64   `json:"cg_m"`
			Points  [][3]float64 `json:"mount_points_m"`
			K       [3]float64   `json:"spring_stiffness_xyz_N_per_m"`
		}
		row.Decode(t, &c)
		var f frame
		b := f.body("board", nil, assembly.Inertia{Mass: c.Mass, Centre: c.Centre, Tensor: [6]float64{c.Inertia[0], c.Inertia[1], c.Inertia[2]}})
		for _, p := range c.Points {
			f.spring("mount", b, assembly.Ground, p, [6]float64{c.K[0], c.K[1], c.K[2]})
		}
		var got []float64
		for _, w := range f.solve(t, 0) {
			got = append(got, w/(2*math.Pi))
		}
		row.Check(t, 1, got...)
	}
}
