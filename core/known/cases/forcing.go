package cases

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"strings"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/mechanics/modal"
	"hushframe/core/numeric/eigen"
)

// driven is a structure in modal coordinates with one load, read at three outputs.
type driven struct {
	system    *forced.System
	frequency []float64 // Hz
}

// drive takes modes of a supported or free system: load holds generalised forces over the unknowns, each
// output the same for what is read. loss is hysteretic, ratio viscous and the same in every mode.
func drive(t known.T, res *eigen.Result, load []float64, outputs [3][]float64, loss, ratio float64) *driven {
	t.Helper()
	n := len(res.Values)
	b := &modal.Basis{Kinds: make([]modal.VectorKind, n)}
	source, gyro := modal.Site{Name: "load", Kind: "rotor"}, modal.Site{Name: "outputs", Kind: "gyro"}
	k, c := make([]float64, n*n), make([]float64, n*n)
	for v, lambda := range res.Values {
		omega := math.Sqrt(max(lambda, 0))
		b.Kinds[v] = modal.Elastic
		b.Frequency = append(b.Frequency, omega/(2*math.Pi))
		k[v*n+v], c[v*n+v] = omega*omega, 2*ratio*omega
		source.Motion = append(source.Motion, [6]float64{dotted(load, res.Vectors[v])})
		var out [6]float64
		for i, o := range outputs {
			if o != nil {
				out[3+i] = dotted(o, res.Vectors[v])
			}
		}
		gyro.Motion = append(gyro.Motion, out)
	}
	b.Sites = []modal.Site{source, gyro}
	b.Groups = []modal.LossGroup{{Name: "all", Kind: "part", LossFactor: loss, Stiffness: k}}
	s, err := forced.New(b, forced.Options{Rate: c})
	if err != nil {
		t.Fatal(err)
	}
	return &driven{s, b.Frequency}
}

func dotted(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}

// at returns the complex amplitudes of the outputs at a frequency.
func (d *driven) at(t known.T, frequency float64) (out [3]complex128) {
	t.Helper()
	tr, err := d.system.Transfer(context.Background(), []float64{frequency}, 1)
	if err != nil {
		t.Fatal(err)
	}
	for i := range out {
		out[i] = tr.Rate[i][0][0] / complex(0, 2*math.Pi*frequency) // the transfer is to rates
	}
	return out
}

// peak finds the frequency near the first mode where the first output is greatest, by golden sections.
func (d *driven) peak(t known.T) float64 {
	t.Helper()
	const g = 0.3819660112501051
	lo, hi := 0.98*d.frequency[0], 1.02*d.frequency[0]
	for hi-lo > 1e-7*hi {
		a, b := lo+g*(hi-lo), hi-g*(hi-lo)
		if cmplx.Abs(d.at(t, a)[0]) > cmplx.Abs(d.at(t, b)[0]) {
			hi = b
		} else {
			lo = a
		}
	}
	return (lo + hi) / 2
}

// unit returns the generalised force of a unit force on one component of a node, in airframe axes.
func unitForce(s *assembly.System, node, component int) []float64 {
	f := make([]float64, 6*len(s.Problem().Nodes))
	f[6*node+component] = 1
	load := make([]float64, s.N)
	s.LoadNodes(load, f)
	return load
}

// combined returns a·x + b·y.
func combined(a float64, x []float64, b float64, y []float64) []float64 {
	out := make([]float64, len(x))
	for i := range x {
		out[i] = a*x[i] + b*y[i]
	}
	return out
}

// pair is two bodies that slide along x, solved.
type pair struct {
	res   *eigen.Result
	moves [2][2]float64 // of each body in each mode
	setup struct {
		M1      float64 `json:"m1_kg"`
		M2      float64 `json:"m2_kg"`
		K1      float64 `json:"k1_ground_to_1"`
		K2      float64 `json:"k2_between"`
		Alpha   float64
		Beta    float64
		Between float64 `json:"c_between_Ns_per_m"`
	}
}

func newPair(t known.T, row known.Row) *pair {
	t.Helper()
	p := &pair{}
	row.Decode(t, &p.setup)
	c := &p.setup
	var f frame
	a := f.body("one", nil, assembly.Inertia{Mass: c.M1})
	b := f.body("two", nil, assembly.Inertia{Mass: c.M2})
	f.spring("ground", a, assembly.Ground, assembly.Vec{}, [6]float64{c.K1, inf, inf, inf, inf, inf})
	f.spring("between", a, b, assembly.Vec{}, [6]float64{c.K2, inf, inf, inf, inf, inf})
	s := assemble(t, &f.Problem)
	p.res = solve(t, s, eigen.Options{Modes: 2})
	for v, y := range p.res.Vectors {
		p.moves[0][v], p.moves[1][v] = s.Motion(a, assembly.Vec{}, y)[0], s.Motion(b, assembly.Vec{}, y)[0]
	}
	return p
}

// Row D-TWODOF-A-MODES: frequencies, then the modes.
func twoMasses(t known.T, row known.Row) []float64 {
	p := newPair(t, row)
	var got []float64
	for _, v := range p.res.Values {
		got = append(got, math.Sqrt(v)/(2*math.Pi))
	}
	for v := range 2 {
		got = append(got, math.Abs(p.moves[0][v]), math.Abs(p.moves[1][v]))
	}
	return got
}

// Rows D-TWODOF-A-PROPZETA and D-TWODOF-A-NONPROP-EIG: natural motions with dampers.
func dampedMasses(t known.T, row known.Row) []float64 {
	p := newPair(t, row)
	b := &modal.Basis{Groups: []modal.LossGroup{{Name: "all", Kind: "part", Stiffness: make([]float64, 4)}}}
	c := make([]float64, 4)
	for v, lambda := range p.res.Values {
		b.Kinds = append(b.Kinds, modal.Elastic)
		b.Frequency = append(b.Frequency, math.Sqrt(lambda)/(2*math.Pi))
		b.Groups[0].Stiffness[3*v] = lambda
		c[3*v] += p.setup.Alpha + p.setup.Beta*lambda
		for w := range 2 {
			c[2*v+w] += p.setup.Between * (p.moves[1][v] - p.moves[0][v]) * (p.moves[1][w] - p.moves[0][w])
		}
	}
	b.Sites = []modal.Site{{Name: "load", Kind: "rotor", Motion: make([][6]float64, 2)}, {Name: "gyro", Kind: "gyro", Motion: make([][6]float64, 2)}}
	s, err := forced.New(b, forced.Options{Rate: c})
	if err != nil {
		t.Fatal(err)
	}
	core, err := s.Core()
	if err != nil {
		t.Fatal(err)
	}
	poles, err := core.Poles(nil, 0, math.Inf(1))
	if err != nil {
		t.Fatal(err)
	}
	var got []float64
	for _, x := range poles {
		if p.setup.Between > 0 {
			got = append(got, x.Frequency)
		}
		got = append(got, x.Damping)
	}
	return got
}

// Row D-FORCED-DEEP-BEAM: bending in one plane.
func forcedBeam(t known.T, row known.Row) []float64 {
	var c struct {
		bar
		Factor float64 `json:"shear_factor"`
		Load   float64 `json:"load_N_per_m"`
	}
	row.Decode(t, &c)
	const length, side, elements = 10.0, 2.0, 20
	section := beam.Rectangle(side, side, c.E, c.Nu, c.Rho)
	section.GAz = c.Factor * c.E / (2 * (1 + c.Nu)) * side * side
	var f frame
	a, b := f.point(0, 0, 0), f.point(length, 0, 0)
	list := f.member("bar", section, assembly.Vec{0, 1, 0}, a, b, elements)
	f.planar()
	f.hold(a, "z")
	f.hold(b, "z")
	s := assemble(t, &f.Problem)
	forces := make([]float64, 6*len(f.Nodes))
	for i, v := range list {
		share := c.Load * length / elements
		if i == 0 || i == elements {
			share /= 2
		}
		forces[6*v+2] = share
	}
	load := make([]float64, s.N)
	s.LoadNodes(load, forces)
	mid := elements / 2
	deflection := unitForce(s, int(list[mid]), 2)
	stress := make([]float64, s.N) // at mid-span, of each unknown
	for i := range stress {
		y := make([]float64, s.N)
		y[i] = 1
		stress[i] = s.BeamStresses(y)[mid][0].AboutY
	}
	first := solve(t, s, eigen.Options{Modes: 1})
	res := solve(t, s, eigen.Options{Limit: 25 * first.Values[0]})
	d := drive(t, res, load, [3][]float64{deflection, stress}, 0, 0.02)
	top := d.peak(t)
	out := d.at(t, top)
	return []float64{top, cmplx.Abs(out[0]), cmplx.Abs(out[1]), dotted(deflection, static(t, s, load))}
}

// Rows D-FORCED-*-PLATE: a quarter of the plate, x = 0 and y = 0 its middle lines.
func forcedPlate(t known.T, row known.Row) []float64 {
	var c struct {
		A         float64 `json:"a_m"`
		Thickness float64 `json:"thickness_m"`
		E         float64 `json:"E_Pa"`
		Nu        float64
		Rho       float64 `json:"rho_kgm3"`
		Pressure  float64 `json:"pressure_Pa"`
	}
	row.Decode(t, &c)
	section, err := laminate.Homogeneous(laminate.Isotropic(c.E, c.Nu, c.Rho), c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	const cells = 12
	p := newPlate(known.Rectangle(c.A/2, c.A/2, cells, cells, 0), byName(t, "quadratic-triangle"), section)
	p.everywhere("xyZ")
	for _, v := range p.grid.Sets["x=0"] {
		p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components("Y")})
	}
	for _, v := range p.grid.Sets["y=0"] {
		p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components("X")})
	}
	p.support(t, "x=a", "simply supported", "X")
	p.support(t, "y=b", "simply supported", "Y")
	s := assemble(t, &p.Problem)
	forces := make([]float64, 6*len(p.Nodes))
	for _, e := range p.grid.Triangles {
		area := size(crossed(minus(p.Nodes[e[1]], p.Nodes[e[0]]), minus(p.Nodes[e[2]], p.Nodes[e[0]]))) / 2
		for _, v := range e[3:] {
			forces[6*int(v)+2] += c.Pressure * area / 3
		}
	}
	load := make([]float64, s.N)
	s.LoadNodes(load, forces)
	// Curvatures in the middle from the turns at the nodes next to it, half a cell away; by symmetry the turns
	// are odd about the middle lines.
	h := c.A / 2 / cells / 2
	near := func(x, y float64) int {
		for v, q := range p.grid.Points {
			if math.Abs(q[0]-x)+math.Abs(q[1]-y) < 1e-9 {
				return v
			}
		}
		t.Fatalf("row %s: no node at (%g, %g)", row.ID, x, y)
		return 0
	}
	e := c.E / (1 - c.Nu*c.Nu) * c.Thickness / 2 / h
	deflection := unitForce(s, near(0, 0), 2)
	stress := combined(e, unitForce(s, near(h, 0), 4), -e*c.Nu, unitForce(s, near(0, h), 3))
	first := solve(t, s, eigen.Options{Modes: 1})
	res := solve(t, s, eigen.Options{Limit: 100 * first.Values[0]})
	d := drive(t, res, load, [3][]float64{deflection, stress}, 0, 0.02)
	top := d.peak(t)
	out := d.at(t, top)
	u := static(t, s, load)
	return []float64{top, cmplx.Abs(out[0]), cmplx.Abs(out[1]), dotted(deflection, u), math.Abs(dotted(stress, u))}
}

// parts appends the real or imaginary part that each label of a row asks for, "w(0.3L) 200 Hz re", of what
// is read at the place at the frequency.
func parts(t known.T, row known.Row, read func(place string, frequency float64) complex128) (got []float64) {
	t.Helper()
	for _, label := range row.Labels {
		words := strings.Fields(label)
		place, part := "", words[len(words)-1]
		if len(words) == 4 {
			place = words[0][strings.Index(words[0], "(")+1 : len(words[0])-1]
		}
		var f float64
		if _, err := fmt.Sscan(words[len(words)-3], &f); err != nil {
			t.Fatalf("row %s: label %q: %v", row.ID, label, err)
		}
		h := read(place, f)
		if part == "re" {
			got = append(got, real(h))
		} else {
			got = append(got, imag(h))
		}
	}
	return got
}

// Rows D-FFBEAM-FRF* and D-FFBEAM-ROT*: displacement and rotation along a free beam pushed at one end.
func freeBeam(t known.T, row known.Row) []float64 {
	var c struct {
		bar
		Length float64 `json:"L_m"`
		Width  float64 `json:"width_m"`
		Height float64 `json:"height_m"`
		Loss   float64 `json:"loss_factor"`
	}
	row.Decode(t, &c)
	s := beam.Rectangle(c.Width, c.Height, c.E, c.Nu, c.Rho)
	if !strings.HasSuffix(row.ID, "-TIM") {
		s.GAz, s.Jy = inf, 0
	}
	const elements = 60
	var f frame
	a, b := f.point(0, 0, 0), f.point(c.Length, 0, 0)
	list := f.member("bar", s, assembly.Vec{0, 1, 0}, a, b, elements)
	f.planar()
	system := assemble(t, &f.Problem)
	res := solve(t, system, eigen.Options{Modes: 40})
	component, sign := 2, 1.0
	if strings.Contains(row.ID, "-ROT") { // w' = -θ_y
		component, sign = 4, -1
	}
	systems := map[string]*driven{}
	return parts(t, row, func(place string, frequency float64) complex128 {
		if systems[place] == nil {
			at := map[string]int{"0": 0, "0.3L": 3 * elements / 10, "L/2": elements / 2, "L": elements}[place]
			systems[place] = drive(t, res, unitForce(system, int(a), 2), [3][]float64{unitForce(system, int(list[at]), component)}, c.Loss, 0)
		}
		return complex(sign, 0) * systems[place].at(t, frequency)[0]
	})
}

// Rows D-SSPLATE-GYRO-*: deflection and slopes of a supported plate pushed at another point.
func gyroPlate(t known.T, row known.Row) []float64 {
	var c struct {
		A         float64 `json:"a_m"`
		B         float64 `json:"b_m"`
		Thickness float64 `json:"thickness_m"`
		E         float64 `json:"E_Pa"`
		Nu        float64
		Rho       float64    `json:"rho_kgm3"`
		Loss      float64    `json:"loss_factor"`
		Force     [2]float64 `json:"force_at_m"`
		Gyro      [2]float64 `json:"response_at_m"`
	}
	row.Decode(t, &c)
	section, err := laminate.Homogeneous(laminate.Isotropic(c.E, c.Nu, c.Rho), c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	for i := range 2 { // thin-plate theory
		section.Shear[i][i] *= 1e3
	}
	section.Rotary = 0
	p := newPlate(known.Rectangle(c.A, c.B, 20, 20, 0), byName(t, "quadratic-triangle"), section)
	p.everywhere("xyZ")
	for i, side := range []string{"x=0", "y=0", "x=a", "y=b"} {
		p.support(t, side, "simply supported", string("XY"[i%2]))
	}
	s := assemble(t, &p.Problem)
	res := solve(t, s, eigen.Options{Modes: 60})
	node := func(at [2]float64) int {
		for v, x := range p.grid.Points {
			if math.Hypot(x[0]-at[0], x[1]-at[1]) < 1e-9 {
				return v
			}
		}
		t.Fatalf("row %s: no node at %g", row.ID, at)
		return 0
	}
	component, sign := 2, 1.0
	switch {
	case strings.HasSuffix(row.ID, "dwdx"): // θ_y = -dw/dx
		component, sign = 4, -1
	case strings.HasSuffix(row.ID, "dwdy"): // θ_x = dw/dy
		component = 3
	}
	d := drive(t, res, unitForce(s, node(c.Force), 2), [3][]float64{unitForce(s, node(c.Gyro), component)}, c.Loss, 0)
	return parts(t, row, func(_ string, frequency float64) complex128 {
		return complex(sign, 0) * d.at(t, frequency)[0]
	})
}
