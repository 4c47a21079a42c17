package cases

import (
	"math"
	"strings"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/numeric/eigen"
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

// lowest returns count natural frequencies in rad/s, rigid motions included.
func (f *frame) lowest(t known.T, count int) []float64 {
	t.Helper()
	return elastic(t, &f.Problem, count, 0)
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

// Rows A-EB-*: constants of Euler and Bernoulli.
func bars(t known.T, row known.Row) []float64 {
	boundary := row.ID[len("A-EB-"):]
	f, _ := unitBar(boundary[:1], boundary[1:2])
	var got []float64
	for _, w := range f.lowest(t, len(row.Values)+2) {
		if w > 1e-2 {
			got = append(got, math.Sqrt(w))
		}
	}
	return got[:len(row.Values)]
}

// unitBar is a bar of unit length held at its ends.
func unitBar(left, right string) (*frame, []int32) {
	var f frame
	a, b := f.point(0, 0, 0), f.point(1, 0, 0)
	list := f.member("bar", unit(), assembly.Vec{0, 1, 0}, a, b, 40)
	f.planar()
	f.hold(a, ends[left])
	f.hold(b, ends[right])
	return &f, list
}

// Rows A-EB-FF-NODES-*: where a free bar stands still, by the linear interpolation of the mode shape.
func barNodes(t known.T, row known.Row) []float64 {
	f, list := unitBar("F", "F")
	s := assemble(t, &f.Problem)
	mode := int(row.ID[len(row.ID)-1] - '0')
	res := solve(t, s, eigen.Options{Modes: 2 + mode})
	nodes := make([]float64, 6*len(f.Nodes))
	s.Expand(nodes, res.Vectors[1+mode])
	var got []float64
	for i := 1; i < len(list); i++ {
		w0, w1 := nodes[6*list[i-1]+2], nodes[6*list[i]+2]
		if w0*w1 < 0 {
			x0, x1 := f.Nodes[list[i-1]][0], f.Nodes[list[i]][0]
			got = append(got, x0+(x1-x0)*w0/(w0-w1))
		}
	}
	return got
}

// Rows A-TIM-*: stocky cantilevers, in ω L² √(ρA/EI).
func timoshenko(t known.T, row known.Row) []float64 {
	var c struct {
		Ratio  float64 `json:"L_over_h"`
		Nu     float64
		Factor float64 `json:"shear_factor"`
	}
	row.Decode(t, &c)
	h := 1 / c.Ratio
	s := beam.Rectangle(h, h, 1e9, c.Nu, 1000)
	s.GAz = c.Factor * 1e9 / (2 * (1 + c.Nu)) * h * h
	var f frame
	a, b := f.point(0, 0, 0), f.point(1, 0, 0)
	f.member("bar", s, assembly.Vec{0, 1, 0}, a, b, 80)
	f.planar()
	f.hold(a, ends["C"])
	return scaled(f.lowest(t, len(row.Values)), math.Sqrt(s.M/s.EIy))
}

// Rows A-BEAM-*: bars of real sections by both theories. The interpolation is that of the unloaded beam,
// so inertia leaves an error of ω²h²/(24 c_s²) with c_s the speed of shear waves: 0.2 % at the fourth
// mode of the stockiest bar with the row's 40 elements, a quarter of that with 80.
func sections(t known.T, row known.Row) []float64 {
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
	for _, w := range f.lowest(t, len(row.Values)+3) {
		if w > 1 {
			got = append(got, w/(2*math.Pi))
		}
	}
	return got[:len(row.Values)]
}

// Rows A-TIPMASS-*: a rigid body beyond the tip, in the plane of bending.
func tipBodies(t known.T, row known.Row) []float64 {
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
	return f.lowest(t, len(row.Values))
}

// equals reads the number after the equals sign: "M/(rho*A*L) = 0.25".
func equals(t known.T, text string) float64 {
	t.Helper()
	_, after, _ := strings.Cut(text, "= ")
	return number(t, strings.Fields(after)[0])
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
func arms(t known.T, row known.Row) []float64 {
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
	for _, w := range f.lowest(t, len(row.Values)) {
		got = append(got, w/(2*math.Pi))
	}
	return got[:len(row.Values)]
}

// Rows A-TIPSPRING-*, A-FF-*: springs to the ground and bodies at both ends.
func endSprings(t known.T, row known.Row) []float64 {
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
	for _, w := range f.lowest(t, len(row.Values)+3) {
		if w > 1e-2 {
			got = append(got, w)
		}
	}
	return got[:len(row.Values)]
}

// Rows A-ROD-TIP-*: torsion and stretching against an end inertia.
func rods(t known.T, row known.Row) []float64 {
	ratio := number(t, strings.TrimPrefix(row.ID, "A-ROD-TIP-"))
	axis, other := 0, "yzXYZ"
	if strings.HasPrefix(row.Title, "torsional") {
		axis, other = 3, "xyzYZ"
	}
	s := beam.Section{EA: 1, GJ: 1, EIy: 1e6, EIz: 1e6, GAy: inf, GAz: inf, M: 1, Jx: 1}
	var f frame
	a, b := f.point(0, 0, 0), f.point(1, 0, 0)
	list := f.member("bar", s, assembly.Vec{0, 1, 0}, a, b, 40)
	f.hold(a, ends["C"])
	held := [6]float64{inf, inf, inf, inf, inf, inf}
	held[axis] = 0
	for _, v := range list[1:40] {
		f.hold(v, other)
	}
	body := f.body("end", []int32{b}, assembly.Inertia{Mass: ratio, Centre: f.Nodes[b], Tensor: [6]float64{ratio, ratio, ratio}})
	f.spring("guide", body, assembly.Ground, f.Nodes[b], held)
	return f.lowest(t, len(row.Values))
}

// Rows A-MOUNTS-*: a body on springs, without any element.
func mounts(t known.T, row known.Row) []float64 {
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
	for _, w := range f.lowest(t, len(row.Values)) {
		got = append(got, w/(2*math.Pi))
	}
	return got
}
