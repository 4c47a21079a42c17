package assemble

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/stages/importgeom/airframefile"
)

const frames = "../../../testdata/geometry"

// build reads an airframe file of testdata/geometry, with texts replaced in pairs.
func build(t testing.TB, name string, replace ...string) (*Assembly, error) {
	t.Helper()
	text, err := os.ReadFile(filepath.Join(frames, name))
	if err != nil {
		t.Fatal(err)
	}
	s := string(text)
	for i := 0; i+1 < len(replace); i += 2 {
		if !strings.Contains(s, replace[i]) {
			t.Fatalf("%s does not contain %q", name, replace[i])
		}
		s = strings.ReplaceAll(s, replace[i], replace[i+1])
	}
	f, err := airframefile.Parse(name, []byte(s), nil)
	if err != nil {
		return nil, err
	}
	return Build(f, func(path string) ([]byte, error) { return os.ReadFile(filepath.Join(frames, path)) })
}

func mustBuild(t testing.TB, replace ...string) *Assembly {
	t.Helper()
	a, err := build(t, "frame/airframe.hcl", replace...)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

func near1(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.9g, want %.9g", what, got, want)
	}
}

func near3(t *testing.T, what string, got, want vec) {
	t.Helper()
	if norm(sub(got, want)) > 1e-9 {
		t.Errorf("%s is %v, want %v", what, got, want)
	}
}

// Masses by hand: 1600 kg/m³ is 1.6e-3 g/mm³, aluminium 2.7e-3.
func TestMassesByHand(t *testing.T) {
	a := mustBuild(t)
	const screw = math.Pi * 1.6 * 1.6
	base := (80*40 - 8*screw) * 2 * 1.6e-3
	top := (80*40 - 4*screw) * 1 * 1.6e-3
	// The arm is 12 wide up to the disc of radius 13 about x = 70, less the part of the disc behind the chord where
	// both meet; four holes of radius 1.1, one of 3, two of 1.6.
	corner := math.Asin(6.0 / 13)
	chord := 70 - 13*math.Cos(corner)
	arm := (12*chord + math.Pi*169 - 169*(corner-math.Sin(corner)*math.Cos(corner)) - 4*math.Pi*1.21 - math.Pi*9 - 2*screw) * 4 * 1.6e-3
	post := math.Pi / 4 * (25 - 9) * 20 * 2.7e-3
	want := map[string]float64{
		"plate base": base, "plate top": top, "plate arm_front": arm, "plate arm_rear": arm,
		"bolts base+arm_front": 3, "bolts base+arm_rear": 3.5, "standoff post": 4 * post, "screws of standoff post": 4,
		"rotor front": 34, "rotor rear": 34, "lump battery": 60, "gyro stack": 12,
	}
	sum := 0.0
	for _, m := range a.Masses() {
		near1(t, m.Name, 1e3*m.Mass, want[m.Name], 1e-6)
		sum += want[m.Name]
	}
	if len(a.Masses()) != len(want) {
		t.Errorf("%d lines, want %d", len(a.Masses()), len(want))
	}
	near1(t, "total", 1e3*a.Totals.Mass, sum, 1e-6)
	// Height of the centre of gravity: base at 1 mm, arms at 4, top at 22.5, bolts at 3, posts at 12, screws at 1 and 22.5,
	// the rotors as in TestBodies, battery at 33, gyro at −6.
	front, rear := (30*16+4*30)/34.0, 18.0
	z := (base*1 + top*22.5 + 2*arm*4 + 6.5*3 + 4*post*12 + 2*1 + 2*22.5 + 34*(front+rear) + 60*33 - 12*6) / sum
	near1(t, "centre z", 1e3*a.Totals.Centre[2], z, 1e-6)
	near1(t, "centre y", a.Totals.Centre[1], 0, 1e-12)
}

func TestBoltsAndStandoffs(t *testing.T) {
	a := mustBuild(t)
	g, p := &a.Geometry, &a.Properties
	if len(g.Bolts) != 4 || len(g.Standoffs) != 4 {
		t.Fatalf("%d bolts and %d standoffs", len(g.Bolts), len(g.Standoffs))
	}
	for i, x := range []float64{32, 20, -20, -32} { // from front to back
		b := g.Bolts[i]
		near3(t, b.Name, b.Point, vec{x * 1e-3, 0, 3e-3})
		near3(t, b.Name+" axis", b.Axis, vec{0, 0, 1})
		arm := "arm_front"
		if x < 0 {
			arm = "arm_rear"
		}
		if b.Name != []string{"bolt-1", "bolt-2", "bolt-3", "bolt-4"}[i] || !b.Inferred || b.Group != "base+"+arm || len(b.Patches) != 2 {
			t.Errorf("bolt %+v", b)
		}
		near1(t, "hole", b.HoleRadius, 1.6e-3, 1e-12)
		near1(t, "clamp", b.ClampRadius, 3e-3, 1e-12)
		for k, plate := range []string{"base", arm} {
			q := g.Patches[b.Patches[k]]
			f := g.Plates[q.Plate]
			if f.Name != plate || q.Owner != "bolt "+b.Name || q.Radius != 3e-3 {
				t.Errorf("patch %+v on %s", q, f.Name)
			}
			at := inSpace(f.Frame, q.Centre, 0)
			near1(t, q.Name+" x", at[0], x*1e-3, 1e-9)
		}
		if p.Bolts[i].Joint != "sandwich" {
			t.Errorf("joint %q", p.Bolts[i].Joint)
		}
	}
	near1(t, "bolt-4", p.Bolts[3].Mass, 2e-3, 1e-12)
	near1(t, "bolt-1", p.Bolts[0].Mass, 1.5e-3, 1e-12)
	j := p.Joints[0]
	inf := math.Inf(1)
	if j.Stiffness != [6]float64{8e7, 8e7, inf, inf, inf, 2000} || j.Low != 0.3 || j.High != 3 || j.LossFactor != 0.02 {
		t.Errorf("joint %+v", j)
	}
	s := g.Standoffs[1]
	near3(t, "foot", s.Ends[0], vec{35e-3, -15e-3, 2e-3})
	near3(t, "head", s.Ends[1], vec{35e-3, -15e-3, 22e-3})
	if g.Plates[g.Patches[s.Patches[0]].Plate].Name != "base" || g.Plates[g.Patches[s.Patches[1]].Plate].Name != "top" || s.Outer != 5e-3 || s.Inner != 3e-3 {
		t.Errorf("standoff %+v", s)
	}
	names := map[string]bool{}
	for _, q := range g.Patches {
		if names[q.Name] {
			t.Errorf("two patches are called %s", q.Name)
		}
		names[q.Name] = true
	}
}

func TestBoltRules(t *testing.T) {
	a := mustBuild(t, `change = {`, `remove = ["bolt-2"]
  change = {`)
	if len(a.Geometry.Bolts) != 3 || a.Geometry.Bolts[1].Name != "bolt-3" || strings.Join(a.Removed, " ") != "bolt-2" {
		t.Errorf("after removal: %d bolts, removed %v", len(a.Geometry.Bolts), a.Removed)
	}
	a = mustBuild(t, `standoff "post" {`, `bolt "main" {
  through = [plate.arm_front, plate.base]
  at      = ["20 mm", "0 mm"]
  mass    = "3 g"
}

standoff "post" {`)
	b := a.Geometry.Bolts
	if len(b) != 4 || b[0].Name != "main" || b[0].Inferred || b[1].Name != "bolt-1" || b[2].Name != "bolt-3" {
		t.Errorf("with a declared bolt: %+v", b)
	}
	near1(t, "hole found", b[0].HoleRadius, 1.6e-3, 1e-12)
	near1(t, "default clamp", b[0].ClampRadius, 1.8*1.6e-3, 1e-12)
	if q := a.Geometry.Patches[b[0].Patches[0]]; a.Geometry.Plates[q.Plate].Name != "base" {
		t.Errorf("the stack begins with %s", a.Geometry.Plates[q.Plate].Name)
	}
	// An M3 screw through 6 mm: shank of 9 mm, head 1.8 × 1.8 mm tall, nut 2.4 mm; 7.85e-3 g/mm³.
	a = mustBuild(t, `  mass   = "1.5 g"
`, "")
	disc := math.Pi / 4 * 9
	near1(t, "estimated screw", 1e3*a.Properties.Bolts[0].Mass, 7.85e-3*disc*(9+3.24*1.8+2.24*2.4), 1e-9)
	// Smaller screws only: nothing is inferred, and the arms hang loose.
	if _, err := build(t, "frame/airframe.hcl", `clamp  = "6 mm"
  mass   = "1.5 g"`, `largest = "2.4 mm"`, `  change = { "bolt-4" = { mass = "2 g" } }
`, ""); err == nil || !strings.Contains(err.Error(), `plates "arm_front", "arm_rear" are not connected to the rest`) {
		t.Errorf("without bolts: %v", err)
	}
	// Faces 0.15 mm apart still touch, 0.25 mm do not.
	if _, err := build(t, "frame/airframe.hcl", `["16 mm", "0 mm", "2 mm"]`, `["16 mm", "0 mm", "2.15 mm"]`); err != nil {
		t.Error(err)
	}
	if _, err := build(t, "frame/airframe.hcl", `["16 mm", "0 mm", "2 mm"]`, `["16 mm", "0 mm", "2.25 mm"]`, `  change = { "bolt-4" = { mass = "2 g" } }
`, ""); err == nil || !strings.Contains(err.Error(), "across a gap of 0.25 mm") {
		t.Errorf("plates 0.25 mm apart: %v", err)
	}
}

func TestMissingStandoffIsReported(t *testing.T) {
	a := mustBuild(t, `, ["-35 mm", "-15 mm"]]`, `]`)
	found := false
	for _, w := range a.Warnings {
		if w.ID == "standoff-expected" {
			found = strings.Contains(w.Text, "base and top at x -35 mm, y -15 mm, 20 mm apart") && !strings.Contains(w.Text, ";")
		}
	}
	if !found {
		t.Errorf("warnings %+v", a.Warnings)
	}
	for _, w := range mustBuild(t).Warnings {
		if w.ID == "standoff-expected" {
			t.Errorf("a standoff is missed where there is one: %s", w.Text)
		}
	}
}

func TestBodies(t *testing.T) {
	a := mustBuild(t)
	p := &a.Properties
	bodies := map[string]airframe.Body{}
	for _, b := range p.Bodies {
		bodies[b.Name] = b
	}
	// The arm's upper face is at 6 mm, the shaft at 16 + 70 mm.
	front := bodies["front"]
	near3(t, "front", front.Centre, vec{86e-3, 0, (30*16 + 4*30) / 34.0 * 1e-3})
	r := p.Rotors[0]
	near3(t, "hub", r.Hub, vec{86e-3, 0, 30e-3})
	near3(t, "axis", r.Axis, vec{0, 0, 1})
	near1(t, "max speed", r.MaxSpeed, 30000*2*math.Pi/60, 1e-9)
	near1(t, "grade", r.Grade, 6.3e-3, 1e-15)
	if r.Blades != 3 || r.Spin != 1 || p.Rotors[1].Spin != -1 || p.Rotors[1].Blades != 2 || r.Body != "front" {
		t.Errorf("rotors %+v", p.Rotors)
	}
	// Motor: cylinder of 26 by 18 mm; propeller: radius of gyration 0.42 of 60 mm; both about their common centre of
	// gravity, 14 mm apart (reduced mass 30·4/34 g). In g·mm².
	disc := 4 * math.Pow(0.42*60, 2)
	apart := 30.0 * 4 / 34 * 14 * 14
	near1(t, "front xx", 1e9*front.Inertia[0], 30*(13.0*13/4+18.0*18/12)+disc/2+apart, 1e-6)
	near1(t, "front zz", 1e9*front.Inertia[2], 30*13.0*13/2+disc, 1e-6)
	near1(t, "polar", 1e9*r.PolarInertia, 15*math.Pow(0.8*13, 2)+disc, 1e-6)
	near1(t, "spinning mass", r.SpinningMass, 19e-3, 1e-12)
	base := a.Geometry.Patches[patchNamed(t, a, "rotor rear/base")]
	near1(t, "footprint from the pattern", 2*base.Radius, 12e-3+2*2.2e-3, 1e-9)
	near3(t, "rear", inSpace(a.Geometry.Plates[base.Plate].Frame, base.Centre, 0), vec{-86e-3, 0, 4e-3})
	// Battery turned by a quarter: 30 along x, 50 along y.
	b := bodies["battery"]
	near3(t, "battery", b.Centre, vec{0, 0, 33e-3})
	near1(t, "battery xx", 1e9*b.Inertia[0], 60.0/12*(50*50+20*20), 1e-6)
	near1(t, "battery yy", 1e9*b.Inertia[1], 60.0/12*(30*30+20*20), 1e-6)
	pad := a.Geometry.Patches[patchNamed(t, a, "lump battery/pad")]
	near1(t, "pad turn", pad.Turn, math.Pi/2, 1e-12)
	if pad.Width != 50e-3 || pad.Height != 30e-3 || b.Mount != nil || len(b.Patches) != 1 {
		t.Errorf("pad %+v of %+v", pad, b)
	}
	// The gyro hangs below the base: face at 0, 3 mm of lift, half of 6 mm.
	s := bodies["stack"]
	near3(t, "gyro", s.Centre, vec{0, 0, -6e-3})
	near3(t, "gyro", p.Gyro.At, s.Centre)
	if p.Gyro.Body != "stack" || s.Kind != "gyro" || len(s.Mount.Points) != 4 || s.Mount.Kind != "grommet" || s.Mount.Loss[2] != 0.2 || len(s.Patches) != 0 {
		t.Errorf("gyro %+v on %+v", s, s.Mount)
	}
	near3(t, "spring", s.Mount.Points[1].Point, vec{12e-3, -12e-3, 0})
	if s.Mount.Points[1].Stiffness != [6]float64{3e4, 3e4, 5e4} {
		t.Errorf("spring %+v", s.Mount.Points[1])
	}
}

func patchNamed(t *testing.T, a *Assembly, name string) int {
	t.Helper()
	for i, p := range a.Geometry.Patches {
		if p.Name == name {
			return i
		}
	}
	t.Fatalf("there is no patch %s", name)
	return 0
}

// Every value that the file leaves open is noted, and nothing is noted that the file gives.
func TestAssumptionsAreNoted(t *testing.T) {
	notes := strings.Join(mustBuild(t).Notes, "\n")
	for _, want := range []string{
		"rotor rear: 2 blades", "rotor rear: motor diameter of", "rotor rear: propeller disc at twice", "rotor rear: no propeller_mass",
		"rotor front, rear: balance grade G 6.3", "typical values from the built-in table, not measured: aluminium",
		"gyro stack: springs stand on footprints of 6 mm", "rotor front: shaft at x 86 mm, y 0 mm, the middle of the motor hole pattern",
	} {
		if !strings.Contains(notes, want) {
			t.Errorf("no note %q in\n%s", want, notes)
		}
	}
	for _, not := range []string{"front: 2 blades", "front: motor diameter", "sheet", "battery/pad"} {
		if strings.Contains(notes, not) {
			t.Errorf("a needless note %q in\n%s", not, notes)
		}
	}
}

func TestOverlappingFootprintsAreNoted(t *testing.T) {
	notes := strings.Join(mustBuild(t, `["0 mm", "0 mm"]
  mass = "60 g"`, `["20 mm", "0 mm"]
  mass = "60 g"`).Notes, "\n")
	if !strings.Contains(notes, "standoff post-1 and lump battery on top overlap") {
		t.Errorf("notes\n%s", notes)
	}
	if notes := strings.Join(mustBuild(t).Notes, "\n"); strings.Contains(notes, "overlap") {
		t.Errorf("notes\n%s", notes)
	}
}

func TestPlainRectangleMoments(t *testing.T) {
	// 60 by 20 by 4 mm, 10 g, turned by 30 degrees about z and tilted by 90 about x.
	pl := airframe.Plate{Region: outline.NewRegion(outline.Rectangle(outline.Point{X: 5e-3, Y: -2e-3}, 60e-3, 20e-3, 0)), Thickness: 4e-3}
	pl.Frame = place3(&airframefile.Plate{Thickness: 4e-3})
	it := plateItem(pl, 10e-3)
	near3(t, "centre", it.centre, vec{5e-3, -2e-3, 2e-3})
	x, y, z := 10.0/12*(20*20+4*4), 10.0/12*(60*60+4*4), 10.0/12*(60*60+20*20)
	for i, want := range []float64{x, y, z, 0, 0, 0} {
		near1(t, "level", 1e9*it.inertia[i], want, 1e-3)
	}
	pl.Frame = place3(&airframefile.Plate{Thickness: 4e-3, Turn: math.Pi / 6, Tilt: [2]float64{math.Pi / 2, 0}})
	it = plateItem(pl, 10e-3)
	// After the turn the tensor in x, y is rotated by 30 degrees; the tilt then sends y to z.
	c, s := math.Cos(math.Pi/6), math.Sin(math.Pi/6)
	xx, yy, xy := c*c*x+s*s*y, s*s*x+c*c*y, c*s*(x-y)
	for i, want := range []float64{xx, z, yy, 0, xy, 0} {
		near1(t, "tilted", 1e9*it.inertia[i], want, 1e-3)
	}
}

// Copies are the images of their plates: outline, faces, fibre and plies.
func TestCopies(t *testing.T) {
	sheet := airframefile.Plate{Thickness: 3e-3, Turn: 0.4, At: vec{0.03, 0.02, 0.005}, Fibre: 0.3,
		Plies: []airframe.Ply{{Material: "a", Thickness: 1e-3, Angle: 0.2}, {Material: "b", Thickness: 2e-3, Angle: -0.7}}}
	region := outline.NewRegion(outline.Polygon(outline.Point{}, outline.Point{X: 0.04}, outline.Point{X: 0.03, Y: 0.02}, outline.Point{X: 0.01, Y: 0.025}))
	for _, tilt := range [][2]float64{{0, 0}, {0.2, -0.1}} {
		for _, c := range []airframefile.Copy{
			{Mirror: [3]bool{false, true, false}},
			{Mirror: [3]bool{true, false, false}},
			{Mirror: [3]bool{false, false, true}},
			{Mirror: [3]bool{true, true, false}},
			{Mirror: [3]bool{true, true, true}, Turn: 1.1, Move: vec{0.01, 0.02, 0.03}},
			{Turn: math.Pi / 3, Centre: outline.Point{X: 0.01, Y: -0.02}},
		} {
			sheet.Tilt = tilt
			p := built{region: region, frame: place3(&sheet), thickness: sheet.Thickness, fibre: sheet.Fibre, plies: sheet.Plies}
			q := copied(p, &c)
			if f := q.frame; norm(sub(cross(f.X, f.Y), f.Z)) > 1e-12 || math.Abs(norm(f.X)-1) > 1e-12 || f.Z[2] < 0 {
				t.Fatalf("%+v: frame %+v is not right-handed with z up", c, f)
			}
			image := func(v vec, point bool) vec {
				for i, m := range c.Mirror {
					if m {
						v[i] = -v[i]
					}
				}
				o := vec{c.Centre.X, c.Centre.Y, 0}
				if point {
					v = sub(v, o)
				}
				s, co := math.Sincos(c.Turn)
				v = vec{co*v[0] - s*v[1], s*v[0] + co*v[1], v[2]}
				if point {
					v = add(add(v, o), c.Move)
				}
				return v
			}
			if a := q.region.Area(); math.Abs(a-region.Area()) > 1e-15 || q.region.Outer.Area() < 0 {
				t.Fatalf("area %g", a)
			}
			for _, corner := range region.Outer {
				want := image(inSpace(p.frame, corner.P0, 0), true)
				best := math.Inf(1)
				for _, other := range q.region.Outer {
					best = math.Min(best, norm(sub(inSpace(q.frame, other.P0, 0), want)))
				}
				if best > 1e-12 {
					t.Fatalf("%+v: no corner at %v", c, want)
				}
			}
			direction := func(p built, angle float64) vec {
				s, co := math.Sincos(angle)
				return add(scale(p.frame.X, co), scale(p.frame.Y, s))
			}
			// A direction and its opposite are the same fibre.
			along := func(a, b vec) bool { return norm(cross(a, b)) < 1e-12 }
			if !along(direction(q, q.fibre), image(direction(p, p.fibre), false)) {
				t.Errorf("%+v: fibre at %g", c, q.fibre)
			}
			// Heights of the plies' middles over the mid-surface: −1 and +0.5 mm.
			for i, ply := range p.plies {
				up := image(scale(p.frame.Z, []float64{-1e-3, 0.5e-3}[i]), false)
				found := false
				z := -q.thickness / 2
				for _, other := range q.plies {
					middle := scale(q.frame.Z, z+other.Thickness/2)
					z += other.Thickness
					if other.Material == ply.Material && norm(sub(middle, up)) < 1e-12 {
						found = along(direction(q, q.fibre+other.Angle), image(direction(p, p.fibre+ply.Angle), false))
					}
				}
				if !found {
					t.Errorf("%+v: ply %s is not where its image is: %+v", c, ply.Material, q.plies)
				}
			}
		}
	}
	if sheet.Plies[0].Angle != 0.2 || sheet.Plies[0].Material != "a" {
		t.Error("copying changed the plate copied")
	}
}

// A flipped plate is the plate turned over about its outline's x axis, with its lower face where it was said.
func TestFlip(t *testing.T) {
	a := mustBuild(t, `  at        = ["16 mm", "0 mm", "2 mm"]`, `  at        = ["16 mm", "0 mm", "2 mm"]
  flip      = true
  fibre     = "20 deg"`)
	i := 1
	p := a.Geometry.Plates[i]
	if p.Name != "arm_front" || p.Frame.Origin[2] != 4e-3 || p.Frame.Z != (vec{0, 0, 1}) {
		t.Errorf("%s at %+v", p.Name, p.Frame)
	}
	near1(t, "fibre", a.Properties.Plates[i].Fibre, -20*math.Pi/180, 1e-12)
	near1(t, "fibre of the copy", a.Properties.Plates[2].Fibre, 20*math.Pi/180, 1e-12)
}

func TestSameInputSameResult(t *testing.T) {
	a, b := mustBuild(t), mustBuild(t)
	if a.Totals != b.Totals || strings.Join(a.Notes, "\n") != strings.Join(b.Notes, "\n") {
		t.Error("two runs differ")
	}
}

func BenchmarkBuild(b *testing.B) {
	for b.Loop() {
		if _, err := build(b, "frame/airframe.hcl"); err != nil {
			b.Fatal(err)
		}
	}
}
