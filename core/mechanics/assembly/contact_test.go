package assembly_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/outline"
	"hushframe/core/numeric/eigen"
)

var level = airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}

// slab is a rectangle a × b from the origin of its frame.
func slab(name string, frame airframe.Frame, a, b, thickness float64) airframe.Plate {
	return airframe.Plate{Name: name, Frame: frame, Thickness: thickness,
		Region: outline.Region{Outer: outline.Rectangle(outline.Point{X: a / 2, Y: b / 2}, a, b, 0)}}
}

func raised(z float64) airframe.Frame {
	f := level
	f.Origin[2] = z
	return f
}

// tied assembles plates of one material that contacts tie, all of one joint.
func tied(t *testing.T, g *airframe.Geometry, o mesh.Options, m airframe.Material, joint airframe.Joint) (*assembly.Frame, *mesh.Mesh) {
	t.Helper()
	me, err := mesh.Build(context.Background(), g, o)
	if err != nil {
		t.Fatal(err)
	}
	p := &airframe.Properties{Materials: []airframe.Material{m}, Joints: []airframe.Joint{joint}}
	for _, x := range g.Plates {
		p.Plates = append(p.Plates, airframe.PlateProperties{Plate: x.Name, Material: m.Name})
	}
	for _, c := range g.Contacts {
		p.Contacts = append(p.Contacts, airframe.ContactProperties{Contact: c.Name, Joint: joint.Name})
	}
	f, err := assembly.FromAirframe(me, p, elementType)
	if err != nil {
		t.Fatal(err)
	}
	return f, me
}

func elementType(name string) element.Type {
	for _, x := range shell.Types() {
		if x.Describe().Name == name {
			return x
		}
	}
	return nil
}

// hertz solves a problem for its lowest frequencies.
func hertz(t *testing.T, p *assembly.Problem, count int) ([]float64, *assembly.System, *eigen.Result) {
	t.Helper()
	s, err := assembly.Assemble(context.Background(), p, 2)
	if err != nil {
		t.Fatal(err)
	}
	res, err := eigen.Lowest(context.Background(), s.K, s.M, s.Ordering(), eigen.Options{Modes: count, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	var f []float64
	for _, v := range res.Values {
		f = append(f, math.Sqrt(max(0, v))/(2*math.Pi))
	}
	return f, s, res
}

// noPoisson bends as a beam does, with the shear modulus of the isotropic metal.
func noPoisson(e, nu, density float64) airframe.Material {
	g := e / (2 * (1 + nu))
	return airframe.Material{Name: "metal", E1: e, E2: e, G12: g, G13: g, G23: g, Density: density}
}

// sandwich is two layers of half the height, pressed all over; their meshes differ.
func sandwich(l, b, h float64) (*airframe.Geometry, mesh.Options) {
	g := &airframe.Geometry{Plates: []airframe.Plate{slab("lower", raised(-h/4), l, b, h/2), slab("upper", raised(h/4), l, b, h/2)},
		Contacts: []airframe.Contact{{Name: "face", Kind: airframe.Pressed, Plates: [2]int{0, 1}, Axes: level}}}
	return g, mesh.Options{Size: 0.01, Sizes: map[string]float64{"upper": 0.012}, Element: "quadratic-triangle"}
}

// Two layers bonded all over are one bar (row A-BEAM-SLENDER-FF-TIM).
func TestBondedLayersAreOneBar(t *testing.T) {
	row := known.One(t, "A_beams.json", "A-BEAM-SLENDER-FF-TIM")
	g, o := sandwich(0.3, 0.02, 0.005)
	f, me := tied(t, g, o, noPoisson(70e9, 0.33, 2700), airframe.Joint{Name: "glue", Measure: airframe.PerArea, Stiffness: [6]float64{1e14, 1e14, 1e14}})
	area := 0.0
	for _, p := range me.Contacts[0].Points {
		area += p.Measure
	}
	if math.Abs(area/(0.3*0.02)-1) > 1e-9 {
		t.Errorf("the points stand for %g m² of %g", area, 0.3*0.02)
	}
	got, s, res := hertz(t, &f.Problem, 8)
	row.Check(t, 2, got[6], got[7])

	// Rigid motion strains no contact, and the energies of the groups add up to that of K.
	for k, y := range s.Rigid() {
		e, err := s.Energies(context.Background(), [][]float64{y}, 2)
		if err != nil {
			t.Fatal(err)
		}
		if strain := e.Strain[0][2][4]; strain > 1e-9 {
			t.Errorf("rigid motion %d strains the contact by %g J", k, strain)
		}
	}
	ys := res.Vectors[6:8]
	e, err := s.Energies(context.Background(), ys, 2)
	if err != nil {
		t.Fatal(err)
	}
	groups, err := s.GroupStiffness(context.Background(), ys, 2)
	if err != nil {
		t.Fatal(err)
	}
	for m := range ys {
		sum, work := 0.0, 0.0
		for g := range groups {
			work += groups[g][m*2+m]
			for _, v := range e.Strain[m][g] {
				sum += v
			}
		}
		if math.Abs(2*sum/res.Values[6+m]-1) > 1e-5 || math.Abs(work/res.Values[6+m]-1) > 1e-5 {
			t.Errorf("mode %d: energies add up to %g, group stiffness to %g, λ is %g", m+1, 2*sum, work, res.Values[6+m])
		}
		if joint := e.Strain[m][2][4]; math.Abs(2*joint-groups[2][m*2+m]) > 1e-9*groups[2][m*2+m] || !(joint > 0) {
			t.Errorf("mode %d: the contact has the energy %g and does the work %g", m+1, joint, groups[2][m*2+m])
		}
	}
	// The stiffness of the contact alone, and its share of K, do the same work.
	only, ky := s.Weighted([]float64{0, 0, 1}, 2), make([]float64, s.N)
	only.MulVec(ky, ys[0])
	work := 0.0
	for i, v := range ys[0] {
		work += v * ky[i]
	}
	if math.Abs(work/groups[2][0]-1) > 1e-6 {
		t.Errorf("the matrix of the contact does the work %g, the group %g", work, groups[2][0])
	}
	// A refined mesh has the points at the same places.
	fine := assembly.Refine(me)
	for k, p := range fine.Contacts[0].Points {
		for side, t3 := range p.Triangle {
			old, now := me.Contacts[0].Points[k], airframe.Vec{}
			was := airframe.Vec{}
			for i, w := range mesh.Weights(p.Local[side]) {
				for d := range 3 {
					now[d] += w * fine.Nodes[fine.Triangles[t3][i]][d]
					was[d] += mesh.Weights(old.Local[side])[i] * me.Nodes[me.Triangles[old.Triangle[side]][i]][d]
				}
			}
			if math.Hypot(math.Hypot(now[0]-was[0], now[1]-was[1]), now[2]-was[2]) > 1e-12 {
				t.Fatalf("point %d of side %d moves from %v to %v", k, side, was, now)
			}
		}
	}
}

// Two equal layers of stiffness EI₀ and EA each, r between their middles, with a shear stiffness K per length
// between them, bend in the mode sin βx of a pinned bar with
//
//	EI = 2 EI₀ + r² EA/2 / (1 + EA β²/(2K)),
//
// the partial interaction of N. M. Newmark, C. P. Siess and I. M. Viest, Tests and analysis of composite beams with
// incomplete interaction, Proc. Soc. Exp. Stress Anal. 9, 1951; here from the least energy of u ~ cos βx, w ~ sin βx.
func TestSlidingLayers(t *testing.T) {
	const l, b, h, e, density = 0.3, 0.02, 0.005, 70e9, 2700.0
	for _, k := range []float64{0, 5e9, 1e13} { // N/m³ along the face
		g, o := sandwich(l, b, h)
		f, me := tied(t, g, o, noPoisson(e, 0.33, density), airframe.Joint{Name: "grip", Measure: airframe.PerArea, Stiffness: [6]float64{k, k, 1e14}})
		for v, x := range me.Nodes {
			if math.Abs(x[0]) < 1e-9 || math.Abs(x[0]-l) < 1e-9 {
				f.Supports = append(f.Supports, assembly.Support{Node: int32(v), Fixed: components("z")})
			}
		}
		free := 3 // rigid motion in the plane, of each layer where nothing holds them together
		if k == 0 {
			free = 6
		}
		got, _, _ := hertz(t, &f.Problem, free+1)
		half, beta := h/2, math.Pi/l
		bending, axial := e*b*half*half*half/12, e*b*half
		stiff := 2 * bending
		if k > 0 {
			stiff += half * half * axial / 2 / (1 + axial*beta*beta/(2*k*b))
		}
		want := beta * beta * math.Sqrt(stiff/(density*b*h)) / (2 * math.Pi)
		// Shear and rotary inertia are left out of the formula: below 0.1 % at L/h = 60.
		if math.Abs(got[free]/want-1) > 0.003 {
			t.Errorf("shear stiffness %g N/m³: %.3f Hz, want %.3f Hz", k, got[free], want)
		}
	}
}

// Two plates glued along the fold are the folded plate (row C-FOLD-90-CANT).
func TestGluedFold(t *testing.T) {
	row := known.One(t, "C_shells.json", "C-FOLD-90-CANT")
	wall := airframe.Frame{Origin: airframe.Vec{0, 0.05, 0}, X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 0, 1}, Z: airframe.Vec{0, -1, 0}}
	g := &airframe.Geometry{Plates: []airframe.Plate{slab("floor", level, 0.1, 0.05, 0.002), slab("wall", wall, 0.1, 0.05, 0.002)},
		Contacts: []airframe.Contact{{Name: "fold", Kind: airframe.Seam, Plates: [2]int{1, 0}, Axes: level, Ends: [2]airframe.Vec{{0, 0.05, 0}, {0.1, 0.05, 0}}}}}
	m := airframe.Material{Name: "metal", E1: 70e9, E2: 70e9, Nu12: 0.33, G12: 70e9 / 2.66, G13: 70e9 / 2.66, G23: 70e9 / 2.66, Density: 2700, Isotropic: true}
	f, me := tied(t, g, mesh.Options{Size: 0.006, Element: "quadratic-triangle"}, m,
		airframe.Joint{Name: "glue", Measure: airframe.PerLength, Stiffness: [6]float64{1e12, 1e12, 1e12, 1e7, 0, 0}})
	for v, x := range me.Nodes {
		if math.Abs(x[0]) < 1e-9 {
			f.Supports = append(f.Supports, assembly.Support{Node: int32(v), Fixed: components("xyzXYZ")})
		}
	}
	got, _, _ := hertz(t, &f.Problem, 8)
	row.Check(t, 1, got...)
}

// A key between two stiff squares stops them along x alone: they swing with k(1/m+1/m) and, about z, with
// k L²/12 (1/J+1/J) of the flank's length L; ten motions stay free.
func TestKey(t *testing.T) {
	const side, thickness, density, flank, k = 0.04, 0.004, 2000.0, 0.03, 3e7 // k in N/m per m
	left := level
	left.Origin = airframe.Vec{-side, -side / 2, 0}
	right := level
	right.Origin = airframe.Vec{0, -side / 2, 0}
	g := &airframe.Geometry{Plates: []airframe.Plate{slab("left", left, side, side, thickness), slab("right", right, side, side, thickness)},
		Contacts: []airframe.Contact{{Name: "key", Kind: airframe.Key, Plates: [2]int{0, 1}, Ends: [2]airframe.Vec{{0, -flank / 2, 0}, {0, flank / 2, 0}},
			Axes: airframe.Frame{X: airframe.Vec{0, 1, 0}, Y: airframe.Vec{-1, 0, 0}, Z: airframe.Vec{0, 0, 1}}}}}
	f, _ := tied(t, g, mesh.Options{Size: 0.01, Element: "quadratic-triangle"}, noPoisson(7e14, 0.3, density),
		airframe.Joint{Name: "stop", Measure: airframe.PerLength, Stiffness: [6]float64{0, k, 0}})
	got, _, _ := hertz(t, &f.Problem, 12)
	mass := density * side * side * thickness
	inertia := mass * side * side / 6
	along := math.Sqrt(k*flank*2/mass) / (2 * math.Pi)
	about := math.Sqrt(k*flank*flank*flank/12*2/inertia) / (2 * math.Pi)
	if got[9] > 1e-2*about {
		t.Errorf("the tenth frequency is %g Hz: a key stops more than it should", got[9])
	}
	if math.Abs(got[10]/about-1) > 0.01 || math.Abs(got[11]/along-1) > 0.001 {
		t.Errorf("%.2f and %.2f Hz, want %.2f about z and %.2f along x", got[10], got[11], about, along)
	}
}

// Three-node elements are tied by their corners: bonded layers of them agree with those of six-node ones. The layers are of
// two lengths, so that their meshes differ and a wrong interpolation on both does not cancel.
func TestContactsOfLinearTriangles(t *testing.T) {
	g := &airframe.Geometry{Plates: []airframe.Plate{slab("lower", raised(-1e-3), 0.09, 0.06, 0.002), slab("upper", raised(1e-3), 0.07, 0.06, 0.002)},
		Contacts: []airframe.Contact{{Name: "face", Kind: airframe.Pressed, Plates: [2]int{0, 1}, Axes: level}}}
	var first []float64
	for _, o := range []mesh.Options{{Size: 8e-3, Element: "quadratic-triangle"}, {Size: 2.5e-3, Element: "linear-triangle"}} {
		f, _ := tied(t, g, o, noPoisson(70e9, 0.33, 2700), airframe.Joint{Name: "glue", Measure: airframe.PerArea, Stiffness: [6]float64{1e14, 1e14, 1e14}})
		got, s, _ := hertz(t, &f.Problem, 8)
		first = append(first, got[6])
		for k, y := range s.Rigid() {
			e, err := s.Energies(context.Background(), [][]float64{y}, 2)
			if err != nil {
				t.Fatal(err)
			}
			if strain := e.Strain[0][2][4]; strain > 1e-9 {
				t.Errorf("%s: rigid motion %d strains the contact by %g J", o.Element, k, strain)
			}
		}
	}
	if math.Abs(first[1]/first[0]-1) > 0.02 {
		t.Errorf("%.2f Hz of linear triangles, %.2f Hz of quadratic ones", first[1], first[0])
	}
}
