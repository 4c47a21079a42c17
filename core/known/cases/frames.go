package cases

import (
	"math"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
)

// hertz returns the elastic frequencies, above floor, in Hz.
func (f *frame) hertz(t known.T, count int, floor float64) []float64 {
	t.Helper()
	var got []float64
	for _, w := range f.lowest(t, count) {
		if w > 2*math.Pi*floor {
			got = append(got, w/(2*math.Pi))
		}
	}
	return got
}

type bar struct {
	E   float64 `json:"E_Pa"`
	Nu  float64
	Rho float64 `json:"rho_kgm3"`
}

// Rows A-OFFCENTRE-*: test 4 of the published free vibration set.
func offCentreMasses(t known.T, row known.Row) []float64 {
	var c bar
	row.Decode(t, &c)
	s := beam.Tube(0.5, 0, c.E, c.Nu, c.Rho)
	if row.ID == "A-OFFCENTRE-EB" {
		s.GAy, s.GAz, s.Jy, s.Jz = inf, inf, 0, 0
	}
	var f frame
	a, b := f.point(0, 0, 0), f.point(10, 0, 0)
	f.member("bar", s, assembly.Vec{0, 1, 0}, a, b, 20)
	f.hold(a, ends["C"])
	f.body("tip", []int32{b},
		assembly.Inertia{Mass: 10000, Centre: assembly.Vec{10, 2, 0}},
		assembly.Inertia{Mass: 1000, Centre: assembly.Vec{10, -2, 0}})
	return f.hertz(t, len(row.Values), 0.1)
}

// Rows A-DEEP-SS*: test 5 of the published set; torsion by both constants.
func deepBeam(t known.T, row known.Row) []float64 {
	var c struct {
		bar
		Factor float64 `json:"shear_factor"`
	}
	row.Decode(t, &c)
	if c.Factor == 0 {
		t.Fatalf("row %s has no shear factor", row.ID)
	}
	s := beam.Rectangle(2, 2, c.E, c.Nu, c.Rho)
	g := c.E / (2 * (1 + c.Nu))
	s.GAy, s.GAz = c.Factor*g*4, c.Factor*g*4
	// With the kind of each mode known by what is left free, no frequency needs guessing.
	run := func(s beam.Section, held string) []float64 {
		var f frame
		a, b := f.point(0, 0, 0), f.point(10, 0, 0)
		f.member("bar", s, assembly.Vec{0, 1, 0}, a, b, 40)
		for v := range f.Nodes {
			f.hold(int32(v), held)
		}
		f.hold(a, "xyzX")
		f.hold(b, "yz")
		return f.hertz(t, 3, 1)
	}
	polar := s
	polar.GJ = g * 2 * 16.0 / 12
	bending, extension := run(s, "xyXZ"), run(s, "yzXYZ")
	torsion, second := run(s, "xyzYZ"), run(polar, "xyzYZ")
	found := map[string]float64{
		"bending 1 (double)": bending[0], "bending 2 (double)": bending[1], "bending 3 (double)": bending[2],
		"extension 1":               extension[0],
		"torsion 1, J of St Venant": torsion[0], "torsion 2, J of St Venant": torsion[1],
		"torsion 1, J = polar second moment": second[0], "torsion 2, J = polar second moment": second[1],
	}
	var got []float64
	for _, label := range row.Labels {
		v, ok := found[label]
		if !ok {
			v = math.NaN() // left to the reader of the label
		}
		got = append(got, v)
	}
	return got
}

// Row A-DOUBLE-CROSS: test 2 of the published set; many equal frequencies.
func doubleCross(t known.T, row known.Row) []float64 {
	var c bar
	row.Decode(t, &c)
	s := beam.Rectangle(0.125, 0.125, c.E, 0.3, c.Rho)
	s.GAy, s.GAz, s.Jy, s.Jz = inf, inf, 0, 0
	var f frame
	centre := f.point(0, 0, 0)
	var rim []int32
	for i := range 8 {
		sin, cos := math.Sincos(float64(i) * math.Pi / 4)
		end := f.point(5*cos, 5*sin, 0)
		rim = append(rim, end)
		f.member("arm", s, assembly.Vec{0, 0, 1}, centre, end, 10)
	}
	for v := range f.Nodes {
		f.hold(int32(v), "zXY")
	}
	for _, v := range rim {
		f.hold(v, "xy")
	}
	return f.hertz(t, len(row.Values), 1)[:len(row.Values)]
}

// Rows A-AIRFRAME-*: four arms from a rigid hub, motors above the tips, free in space.
func airframesOfBeams(t known.T, row known.Row) []float64 {
	var c struct {
		bar
		Angles  []float64  `json:"arm_angles_deg"`
		Radius  float64    `json:"hub_radius_m"`
		Mass    float64    `json:"hub_mass_kg"`
		Inertia [3]float64 `json:"hub_inertia_cg_kgm2"`
		Centre  [3]float64 `json:"hub_cg_m"`
		Length  float64    `json:"arm_length_m"`
		Width   float64    `json:"arm_width_m"`
		Height  float64    `json:"arm_height_z_m"`
		Motor   float64    `json:"motor_mass_kg"`
		Above   float64    `json:"motor_cg_above_tip_m"`
		MotorJ  [3]float64 `json:"motor_inertia_cg_kgm2"`
	}
	row.Decode(t, &c)
	diagonal := func(v [3]float64) [6]float64 { return [6]float64{v[0], v[1], v[2]} }
	var f frame
	var roots []int32
	for _, angle := range c.Angles {
		sin, cos := math.Sincos(angle * math.Pi / 180)
		root := f.point(c.Radius*cos, c.Radius*sin, 0)
		tip := f.point((c.Radius+c.Length)*cos, (c.Radius+c.Length)*sin, 0)
		f.member("arm", beam.Rectangle(c.Width, c.Height, c.E, c.Nu, c.Rho), assembly.Vec{-sin, cos, 0}, root, tip, 10)
		roots = append(roots, root)
		at := f.Nodes[tip]
		at[2] += c.Above
		f.body("motor", []int32{tip}, assembly.Inertia{Mass: c.Motor, Centre: at, Tensor: diagonal(c.MotorJ)})
	}
	f.body("hub", roots, assembly.Inertia{Mass: c.Mass, Centre: c.Centre, Tensor: diagonal(c.Inertia)})
	s := assemble(t, &f.Problem)
	want := c.Mass + 4*(c.Motor+c.Length*c.Width*c.Height*c.Rho)
	if math.Abs(s.Mass-want) > 1e-12*want {
		t.Errorf("row %s: mass %g kg, want %g", row.ID, s.Mass, want)
	}
	rigid := s.Rigid()
	motion := make([]float64, s.N)
	for k, y := range rigid {
		s.K.MulVec(motion, y)
		for i, v := range motion {
			if math.Abs(v) > 1e-9*s.K.At(i, i) {
				t.Fatalf("row %s: rigid motion %d is resisted by %g at unknown %d", row.ID, k, v, i)
			}
		}
	}
	return f.hertz(t, len(row.Values)+6, 1)[:len(row.Values)]
}

// Row A-RING-FRAME: beams along all directions, nodes shared at corners.
func ringFrame(t known.T, row known.Row) []float64 {
	var c bar
	row.Decode(t, &c)
	var f frame
	corners := []int32{f.point(0, 0, 0), f.point(0.2, 0, 0), f.point(0.2, 0.12, 0), f.point(0, 0.12, 0)}
	for i := range 4 {
		f.member("side", beam.Tube(0.008, 0, c.E, c.Nu, c.Rho), assembly.Vec{0, 0, 1}, corners[i], corners[(i+1)%4], 14)
	}
	return f.hertz(t, len(row.Values)+6, 10)[:len(row.Values)]
}

// Rows A-PORTAL*: a space frame with rigid corners and with a rotational joint in each upper corner.
func portal(t known.T, row known.Row) []float64 {
	var c struct {
		bar
		Height float64 `json:"height_m"`
		Span   float64 `json:"span_m"`
		Out    float64 `json:"width_out_of_plane_m"`
		In     float64 `json:"depth_in_plane_m"`
	}
	row.Decode(t, &c)
	// The frame stands in x-z; sections are Out along y and In across.
	s := beam.Rectangle(c.Out, c.In, c.E, c.Nu, c.Rho)
	var f frame
	feet := []int32{f.point(0, 0, 0), f.point(c.Span, 0, 0)}
	tops := []int32{f.point(0, 0, c.Height), f.point(c.Span, 0, c.Height)}
	ends2 := tops
	if row.ID == "A-PORTAL-JOINT" {
		ends2 = []int32{f.point(0, 0, c.Height), f.point(c.Span, 0, c.Height)}
		for i := range 2 {
			a := f.body("post", []int32{tops[i]})
			b := f.body("beam", []int32{ends2[i]})
			f.spring("corner", a, b, f.Nodes[tops[i]], [6]float64{inf, inf, inf, inf, 20, inf})
		}
	}
	for i := range 2 {
		f.member("post", s, assembly.Vec{0, 1, 0}, feet[i], tops[i], 20)
		f.hold(feet[i], ends["C"])
	}
	f.member("beam", s, assembly.Vec{0, 1, 0}, ends2[0], ends2[1], 20)
	got := f.hertz(t, len(row.Values), 10)
	// The row's own stiff springs (1e9 N/m, 1e6 N·m/rad) are rigid here.
	return got[:len(row.Values)]
}
