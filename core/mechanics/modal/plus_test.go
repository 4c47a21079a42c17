package modal_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/mechanics/modal"
	"hushframe/core/numeric/sparse"
)

type footprint struct {
	Mass    float64    `json:"mass_kg"`
	Inertia [3]float64 `json:"inertia_cg_kgm2_xyz"`
	Centre  [3]float64 `json:"cg_m"`
}

type plus struct {
	S          float64 `json:"s_m"`
	Width      float64 `json:"wa_m"`
	Length     float64 `json:"La_m"`
	Thickness  float64 `json:"thickness_m"`
	E          float64 `json:"E_Pa"`
	Nu         float64
	Rho        float64 `json:"rho_kgm3"`
	Properties *known.Constants
	Motors     *footprint
	Hub        *footprint `json:"hub_body"`
}

// problem meshes the plus-shaped plate of a row with cells of the given part of the arm width, and ties
// its bodies to their footprints. Places are the motors as rotors and the hub as gyro.
func (c *plus) problem(t *testing.T, part float64) (*assembly.Problem, []modal.Place) {
	t.Helper()
	reach := c.S/2 + c.Length
	g := known.Plus(c.S, c.Width, c.Length, c.Width*part, reach-0.014)
	m := laminate.Isotropic(c.E, c.Nu, c.Rho)
	if c.Properties != nil {
		m = c.Properties.Material()
	}
	section, err := laminate.Homogeneous(m, c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	p := &assembly.Problem{Groups: []assembly.Group{{Name: "plate", Kind: assembly.PartGroup}}}
	for _, x := range g.Points {
		p.Nodes = append(p.Nodes, assembly.Vec{x[0], x[1], 0})
	}
	p.Plates = []assembly.PlatePart{{Type: shell.QuadraticTriangle(), Axes: assembly.Global, Section: section, Elements: g.Triangles}}
	var places []modal.Place
	tie := func(name, kind string, f *footprint, centre assembly.Vec, in func(x, y float64) bool) {
		g.Collect(name, in)
		p.Bodies = append(p.Bodies, assembly.Body{Name: name, Nodes: g.Sets[name], Inertia: []assembly.Inertia{{
			Mass: f.Mass, Centre: centre, Tensor: [6]float64{f.Inertia[0], f.Inertia[1], f.Inertia[2]},
		}}})
		places = append(places, modal.Place{Name: name, Kind: kind, Body: len(p.Bodies) - 1, Point: centre})
	}
	if c.Motors != nil {
		const long, tiny = 0.014, 1e-9
		for _, arm := range []struct {
			name string
			x, y float64
		}{{"front", 1, 0}, {"left", 0, 1}, {"back", -1, 0}, {"right", 0, -1}} {
			mid := reach - long/2
			tie(arm.name, "rotor", c.Motors, assembly.Vec{mid * arm.x, mid * arm.y, 0.01}, func(x, y float64) bool {
				return x*arm.x+y*arm.y > reach-long-tiny
			})
		}
	}
	if c.Hub != nil {
		tie("hub", "gyro", c.Hub, c.Hub.Centre, func(x, y float64) bool {
			return math.Abs(x) < 0.007+1e-9 && math.Abs(y) < 0.007+1e-9
		})
	}
	return p, places
}

// Rows C-PLUS-*: the frequencies, and what every basis must be.
func TestPlusFrames(t *testing.T) {
	for _, row := range known.Rows(t, "C_shells.json", "C-PLUS-") {
		var c plus
		row.Decode(t, &c)
		p, places := c.problem(t, 1.0/4)
		s, err := assembly.Assemble(context.Background(), p, 2)
		if err != nil {
			t.Fatal(err)
		}
		st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: 1.02 * row.Values[len(row.Values)-1], Threads: 2})
		if err != nil {
			t.Fatal(err)
		}
		var got []float64
		for v, kind := range st.Basis.Kinds {
			if kind == modal.Elastic {
				got = append(got, st.Basis.Frequency[v])
			}
		}
		t.Logf("%s: %d unknowns, %d vectors, rigid ratio %.1g, %.6g Hz, notes %q", row.ID, s.N, len(st.Basis.Kinds), st.RigidRatio, got, st.Notes)
		row.Check(t, 0.5, got[:len(row.Values)]...)
		if !st.Proved {
			t.Errorf("row %s: no proof that all modes were found", row.ID)
		}
		checkBasis(t, row.ID, st, s)
	}
}

// checkBasis holds M-orthonormality, K-orthogonality by groups, and shares that add up.
func checkBasis(t *testing.T, id string, st *modal.Structure, s *assembly.System) {
	t.Helper()
	n := len(st.Basis.Kinds)
	sum := make([]float64, n*n)
	for _, g := range st.Basis.Groups {
		for i, v := range g.Stiffness {
			sum[i] += v
		}
	}
	for i := range n {
		wi := 2 * math.Pi * st.Basis.Frequency[i]
		for j := range n {
			wj := 2 * math.Pi * st.Basis.Frequency[j]
			want := 0.0
			if i == j {
				want = wi * wi
			}
			if math.Abs(sum[i*n+j]-want) > 1e-6*max(wi*wj, 1) {
				t.Fatalf("row %s: φ_%d K φ_%d = %g, want %g (%s, %s)", id, i, j, sum[i*n+j], want, st.Basis.Kinds[i], st.Basis.Kinds[j])
			}
		}
	}
	for m := range st.Strain {
		strain, kinetic := 0.0, 0.0
		for _, g := range st.Strain[m] {
			for _, v := range g {
				strain += v
			}
		}
		for _, v := range st.Kinetic[m] {
			kinetic += v
		}
		if math.Abs(strain-1) > 1e-12 || math.Abs(kinetic-1) > 1e-12 {
			t.Errorf("row %s: mode %d: shares add up to %g and %g", id, m+1, strain, kinetic)
		}
	}
}

// The basis answers forces at the rotors as the full matrices do, between the modes of the band and
// close to zero, though it holds few modes: residual vectors stand in for the others. Compared with a
// direct solve of (K - ω²M) x = f at the hub that carries the gyro, and at the driven motor itself.
func TestResidualVectors(t *testing.T) {
	row := known.One(t, "C_shells.json", "C-PLUS-MOTORS-CARBON")
	var c plus
	row.Decode(t, &c)
	p, places := c.problem(t, 1.0/2)
	// The hub hangs on a soft mount instead, so that the mount's own flexibility matters.
	const hub = 4
	p.Bodies = append(p.Bodies, assembly.Body{Name: "pad", Nodes: p.Bodies[hub].Nodes})
	p.Bodies[hub].Nodes = nil
	p.Groups = append(p.Groups, assembly.Group{Name: "grommets", Kind: assembly.MountGroup})
	for _, q := range [][2]float64{{1, 1}, {-1, 1}, {-1, -1}, {1, -1}} {
		p.Springs = append(p.Springs, assembly.Spring{Group: 1, A: len(p.Bodies) - 1, B: hub,
			Point: assembly.Vec{0.015 * q[0], 0.015 * q[1], 0.004}, Axes: assembly.Global, Stiffness: [6]float64{1e5, 1e5, 2e5}})
	}
	s, err := assembly.Assemble(context.Background(), p, 2)
	if err != nil {
		t.Fatal(err)
	}
	st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: 450, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	checkBasis(t, row.ID, st, s)
	order := s.Ordering()
	worst, without := 0.0, 0.0
	for _, f := range []float64{3, 130, 270, 299} {
		w2 := 4 * math.Pi * math.Pi * f * f
		factor, err := sparse.Factorise(sparse.Combine(1, s.K, -w2, s.M), order, 2)
		if err != nil {
			t.Fatal(err)
		}
		for comp := range 6 {
			x := make([]float64, s.N)
			var force [6]float64
			force[comp] = 1
			s.Load(x, places[0].Body, places[0].Point, force)
			factor.Solve(x, 1)
			for _, at := range []int{0, hub} {
				want := s.Motion(places[at].Body, places[at].Point, x)
				var got, few [6]float64
				for v, kind := range st.Basis.Kinds {
					wv := 2 * math.Pi * st.Basis.Frequency[v]
					q := st.Basis.Sites[0].Motion[v][comp] / (wv*wv - w2)
					for k := range 6 {
						got[k] += q * st.Basis.Sites[at].Motion[v][k]
						if kind != modal.Residual {
							few[k] += q * st.Basis.Sites[at].Motion[v][k]
						}
					}
				}
				for _, half := range [][2]int{{0, 3}, {3, 6}} {
					size, err, plain := 0.0, 0.0, 0.0
					for k := half[0]; k < half[1]; k++ {
						size = max(size, math.Abs(want[k]))
						err = max(err, math.Abs(got[k]-want[k]))
						plain = max(plain, math.Abs(few[k]-want[k]))
					}
					worst, without = max(worst, err/size), max(without, plain/size)
				}
			}
		}
	}
	t.Logf("worst error %.2g with residual vectors, %.2g without", worst, without)
	if !(worst < 0.01) {
		t.Errorf("the basis is off by %.2g of the direct solution", worst)
	}
	if !(without > 5*worst) {
		t.Errorf("residual vectors make no difference: %.2g without", without)
	}
}
