package shell_test

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
)

// patchGrid is the distorted mesh of R. H. MacNeal and R. L. Harder, A proposed standard set of
// problems to test finite element accuracy, 1985, its quadrilaterals cut in two.
func patchGrid(t *testing.T) *known.Grid {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "..", "..", "testdata", "known", "C-PATCH.mesh.json"))
	if err != nil {
		t.Fatal(err)
	}
	var m struct {
		Nodes     [][2]float64
		Triangles [][3]int32
	}
	if err := json.Unmarshal(text, &m); err != nil {
		t.Fatal(err)
	}
	g := known.FromCorners(m.Nodes, m.Triangles)
	const a, b = 0.24, 0.12
	g.Collect("edge", func(x, y float64) bool { return x == 0 || x == a || y == 0 || y == b })
	return g
}

const patchArea = 0.24 * 0.12

// state is a constant strain state: mid-plane strains and curvatures (order x, y, xy).
type state struct{ eps, kap [3]float64 }

// motion is the displacement field of the state at a point: six components.
func (s state) motion(x, y float64) [6]float64 {
	bx, by := s.kap[0]*x+s.kap[2]*y/2, s.kap[1]*y+s.kap[2]*x/2
	return [6]float64{
		s.eps[0]*x + s.eps[2]*y/2,
		s.eps[1]*y + s.eps[2]*x/2,
		-(s.kap[0]*x*x + s.kap[1]*y*y + s.kap[2]*x*y) / 2,
		-by, bx, 0,
	}
}

// prescribe holds the named set to the state.
func (md *model) prescribe(s state, set string) {
	for _, n := range md.grid.Sets[set] {
		if int(n) >= md.grid.Nodes(md.nodes) {
			continue
		}
		p := md.grid.Points[n]
		for c, v := range s.motion(p[0], p[1]) {
			md.fix(n, c, v)
		}
	}
}

// worst is the largest error of component group [from, to) over all nodes, relative to the largest
// such component of the state.
func (md *model) worst(u []float64, s state, from, to int) float64 {
	err, size := 0.0, 0.0
	for n := range md.grid.Nodes(md.nodes) {
		p := md.grid.Points[n]
		want := s.motion(p[0], p[1])
		for c := from; c < to; c++ {
			err = max(err, math.Abs(u[6*n+c]-want[c]))
			size = max(size, math.Abs(want[c]))
		}
	}
	if size == 0 {
		return err
	}
	return err / size
}

func patchSection(t *testing.T) laminate.Section {
	// E, nu and thickness of rows C-PATCH-MEMBRANE and C-PATCH-BENDING.
	return isotropic(t, 1e6, 0.25, 0.001)
}

func TestMembranePatch(t *testing.T) {
	row := known.One(t, "C_shells.json", "C-PATCH-MEMBRANE")
	const c = 0.001
	s := state{eps: [3]float64{c, c, c}}
	eachType(t, func(t *testing.T, kind element.Type) {
		md := newModel(t, kind, patchGrid(t), patchSection(t))
		md.prescribe(s, "edge")
		u := md.solve(nil)
		if w := md.worst(u, s, 0, 2); !(w < 1e-9) {
			t.Errorf("in-plane displacement is off by %.2g", w)
		}
		for i, node := range []int{4, 5, 6, 7} {
			for c, name := range []string{"u", "v"} {
				label := name + string(rune('1'+i))
				want := row.Value(t, label)
				if got := u[6*node+c]; math.Abs(got-want) > 1e-8*want {
					t.Errorf("%s = %.10g, want %.10g", label, got, want)
				}
			}
		}
		sx, sy, txy := row.Value(t, "sigma_x"), row.Value(t, "sigma_y"), row.Value(t, "tau_xy")
		want := patchArea * md.section.Thickness * c * (sx + sy + txy) / 2
		got := md.energies(u, nil)
		if math.Abs(got[element.InPlane]-want) > 1e-8*want || got[element.Bending]+got[element.Twist]+got[element.Shear] > 1e-9*want {
			t.Errorf("energies %v, want %g in-plane only", got, want)
		}
	})
}

func TestBendingPatch(t *testing.T) {
	row := known.One(t, "C_shells.json", "C-PATCH-BENDING")
	const c = 0.001
	s := state{kap: [3]float64{-c, -c, -c}} // w = c(x²+xy+y²)/2
	eachType(t, func(t *testing.T, kind element.Type) {
		md := newModel(t, kind, patchGrid(t), patchSection(t))
		md.prescribe(s, "edge")
		u := md.solve(nil)
		for i, label := range []string{"w1", "w2", "w3", "w4"} {
			want := row.Value(t, label)
			if got := u[6*(4+i)+2]; math.Abs(got-want) > 1e-8*want {
				t.Errorf("%s = %.10g, want %.10g", label, got, want)
			}
		}
		if w := md.worst(u, s, 3, 5); !(w < 1e-8) {
			t.Errorf("rotation is off by %.2g", w)
		}
		bending := patchArea * c * (row.Value(t, "|Mx|") + row.Value(t, "|My|")) / 2
		twist := patchArea * c * row.Value(t, "|Mxy|") / 2
		got := md.energies(u, nil)
		if math.Abs(got[element.Bending]-bending) > 1e-8*bending || math.Abs(got[element.Twist]-twist) > 1e-8*twist || got[element.Shear] > 1e-9*bending {
			t.Errorf("energies %v, want bending %g, twist %g, no shear", got, bending, twist)
		}
	})
}

func TestLaminatePatch(t *testing.T) {
	row := known.One(t, "C_shells.json", "C-PATCH-LAM")
	var setup struct {
		Strains    struct{ Ex, Ey, Gxy float64 }
		Curvatures struct{ Kx, Ky, Kxy float64 }
	}
	row.Decode(t, &setup)
	section, err := laminate.Stack(row.Plies(t))
	if err != nil {
		t.Fatal(err)
	}
	e, k := setup.Strains, setup.Curvatures
	s := state{[3]float64{e.Ex, e.Ey, e.Gxy}, [3]float64{k.Kx, k.Ky, k.Kxy}}
	eachType(t, func(t *testing.T, kind element.Type) {
		md := newModel(t, kind, patchGrid(t), section)
		md.prescribe(s, "edge")
		u := md.solve(nil)
		for _, group := range [][2]int{{0, 2}, {2, 3}, {3, 5}} {
			if w := md.worst(u, s, group[0], group[1]); !(w < 1e-8) {
				t.Errorf("components %v are off by %.2g", group, w)
			}
		}
		v := func(label string) float64 { return row.Value(t, label) }
		want := [element.Kinds]float64{
			element.InPlane: patchArea / 2 * (v("Nx")*e.Ex + v("Ny")*e.Ey + v("Nxy")*e.Gxy),
			element.Bending: patchArea / 2 * (v("Mx")*k.Kx + v("My")*k.Ky),
			element.Twist:   patchArea / 2 * v("Mxy") * k.Kxy,
		}
		got := md.energies(u, nil)
		for i := range want {
			if math.Abs(got[i]-want[i]) > 1e-7*math.Abs(want[element.InPlane]) {
				t.Errorf("%s energy %g, want %g", element.KindNames[i], got[i], want[i])
			}
		}
	})
}

// A strip that bends hardly at all, held at one end and pushed along the other: w grows linearly by
// Q/S and the shear is the same everywhere. S is 5/6 G h with E, nu, h of the patch rows.
func TestShearPatch(t *testing.T) {
	eachType(t, func(t *testing.T, kind element.Type) {
		section := patchSection(t)
		for i := range 3 {
			for j := range 3 {
				section.D[i][j] *= 1e12
			}
		}
		md := newModel(t, kind, patchGrid(t), section)
		const force = 1e-3 // N/m
		load := make([]float64, 6*md.grid.Nodes(md.nodes))
		const width = 0.12
		for n, p := range md.grid.Points[:md.grid.Nodes(md.nodes)] {
			md.fix(int32(n), 0, 0)
			md.fix(int32(n), 1, 0)
			md.fix(int32(n), 5, 0)
			if p[0] == 0 {
				for c := 2; c < 5; c++ {
					md.fix(int32(n), c, 0)
				}
			}
			if p[0] == 0.24 { // consistent forces of the only side on that edge
				share := 0.5
				if md.nodes == 6 {
					share = 1.0 / 6
					if p[1] != 0 && p[1] != width {
						share = 4.0 / 6
					}
				}
				load[6*n+2] = share * force * width
			}
		}
		u := md.solve(load)
		slope := force / (5.0 / 6 * 1e6 / 2.5 * 0.001)
		for n, p := range md.grid.Points[:md.grid.Nodes(md.nodes)] {
			if got, want := u[6*n+2], slope*p[0]; math.Abs(got-want) > 1e-7*slope*0.24 {
				t.Errorf("w at %v = %.10g, want %.10g", p, got, want)
			}
		}
		got, want := md.energies(u, nil), force*slope*0.24*width/2
		if math.Abs(got[element.Shear]-want) > 1e-7*want {
			t.Errorf("shear energy %g, want %g", got[element.Shear], want)
		}
	})
}
