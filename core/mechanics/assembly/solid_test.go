package assembly_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/mechanics/mesh"
)

// prism is a solid over three corners, with points on both faces and in the middle. Its matrices are no plate's: a point
// resists the relative displacement to the others of its element, and the mass lies in the points.
type prism struct{}

func (prism) Describe() element.Description {
	d := element.Description{Name: "prism", Nodes: 3}
	for _, h := range []float64{-1, 0, 1} {
		for n := range 3 {
			d.Points = append(d.Points, element.Point{Node: n, Height: h})
		}
	}
	return d
}

func (p prism) Matrices(_ context.Context, in *element.Batch, out *element.Matrices) error {
	d := p.Describe()
	packed := element.Packed(d.Unknowns())
	for e := range in.Count() {
		for i := range len(d.Points) {
			for j := range i + 1 {
				for k := range 3 {
					at := e*packed + element.Packed(3*i+k) + 3*j + k
					out.Stiffness[at] = -1
					if i == j {
						out.Stiffness[at] = float64(len(d.Points) - 1)
						out.Mass[at] = 0.001
					}
				}
			}
		}
	}
	return nil
}

func (prism) Energies(context.Context, *element.Batch, []float64, []float64) error { return nil }

// leaning is a square of two prisms in axes of its own.
func leaning(t *testing.T) (*assembly.Problem, assembly.Axes) {
	t.Helper()
	s, c := math.Sincos(0.3)
	axes := assembly.Axes{{c, 0, -s}, {0, 1, 0}, {s, 0, c}}
	section, err := laminate.Homogeneous(laminate.Isotropic(70e9, 0.3, 2700), 4e-3, 0)
	if err != nil {
		t.Fatal(err)
	}
	p := &assembly.Problem{Groups: []assembly.Group{{Name: "square", Kind: assembly.PartGroup}}}
	for _, xy := range [][2]float64{{0, 0}, {0.01, 0}, {0.01, 0.01}, {0, 0.01}, {0.005, 0}, {0.01, 0.005}, {0.005, 0.005}, {0.005, 0.01}, {0, 0.005}} {
		var at assembly.Vec
		for k := range 3 {
			at[k] = 0.1 + xy[0]*axes[0][k] + xy[1]*axes[1][k]
		}
		p.Nodes = append(p.Nodes, at)
	}
	part := assembly.PlatePart{Type: prism{}, Axes: axes, Section: section, Elements: [][6]int32{{0, 1, 2, 4, 5, 6}, {0, 2, 3, 6, 7, 8}}}
	p.Extrude(&part)
	p.Plates = []assembly.PlatePart{part}
	return p, axes
}

// Neighbours share points, which lie on the normal at their heights; a node moves with the line through its fibre.
func TestSolids(t *testing.T) {
	p, axes := leaning(t)
	if p.Own != 12 || len(p.Nodes) != 21 || len(p.Plates[0].Fibres) != 4 {
		t.Fatalf("%d points among %d nodes, %d fibres", p.Own, len(p.Nodes), len(p.Plates[0].Fibres))
	}
	for _, f := range p.Plates[0].Fibres {
		for i, v := range f.Points {
			want := []float64{-2e-3, 0, 2e-3}[i]
			for k := range 3 {
				if d := p.Nodes[v][k] - p.Nodes[f.Node][k] - want*axes[2][k]; math.Abs(d) > 1e-15 {
					t.Errorf("point %d of node %d lies %g off", i, f.Node, d)
				}
			}
		}
	}
	check := func(p *assembly.Problem, unknowns int) {
		t.Helper()
		s, err := assembly.Assemble(context.Background(), p, 2)
		if err != nil {
			t.Fatal(err)
		}
		if s.N != unknowns {
			t.Errorf("%d unknowns, want %d", s.N, unknowns)
		}
		// Rigid motions come out at the nodes of the mesh as they went in: displacement, and rotation but for that about the normal.
		for k, y := range s.Rigid() {
			full := make([]float64, 6*len(p.Nodes))
			s.Expand(full, y)
			var unit [6]float64
			unit[k] = 1
			for v := range 9 { // mid-side nodes get the mean of their corners
				var r [3]float64
				for i := range 3 {
					r[i] = p.Nodes[v][i] - s.Centre[i]
				}
				want := [6]float64{
					unit[0] + unit[4]*r[2] - unit[5]*r[1], unit[1] + unit[5]*r[0] - unit[3]*r[2], unit[2] + unit[3]*r[1] - unit[4]*r[0],
				}
				about := unit[3]*axes[2][0] + unit[4]*axes[2][1] + unit[5]*axes[2][2]
				for i := range 3 {
					want[3+i] = unit[3+i] - about*axes[2][i]
				}
				for i := range want {
					if d := full[6*v+i] - want[i]; math.Abs(d) > 1e-9 {
						t.Errorf("rigid motion %d, node %d, component %d: %g off", k, v, i, d)
					}
				}
			}
		}
	}
	check(p, 36)
	// 18 points of two elements of a gram each.
	if s, err := assembly.Assemble(context.Background(), p, 1); err != nil || math.Abs(s.Mass-0.018) > 1e-12 {
		t.Errorf("mass %g kg, %v", s.Mass, err)
	}
	// Clamped through the thickness at one node, its three points follow the body.
	p, _ = leaning(t)
	p.Bodies = []assembly.Body{{Name: "bolt", Nodes: p.Plates[0].Fibres[0].Points, Inertia: []assembly.Inertia{{Mass: 0.1, Centre: p.Nodes[0], Tensor: [6]float64{1e-6, 1e-6, 1e-6}}}}}
	check(p, 36-9+6)
}

// Faces of solids cannot be pressed yet, and this is said.
func TestSolidsAndContacts(t *testing.T) {
	g := &airframe.Geometry{Plates: []airframe.Plate{slab("lower", raised(-1e-3), 0.03, 0.02, 0.002), slab("upper", raised(1e-3), 0.03, 0.02, 0.002)},
		Contacts: []airframe.Contact{{Name: "face", Kind: airframe.Pressed, Plates: [2]int{0, 1}, Axes: level}}}
	m, err := mesh.Build(context.Background(), g, mesh.Options{Size: 8e-3, Element: "quadratic-triangle"})
	if err != nil {
		t.Fatal(err)
	}
	metal := noPoisson(70e9, 0.33, 2700)
	p := &airframe.Properties{Materials: []airframe.Material{metal}, Joints: []airframe.Joint{{Name: "glue", Measure: airframe.PerArea, Stiffness: [6]float64{1e12, 1e12, 1e12}}},
		Plates:   []airframe.PlateProperties{{Plate: "lower", Material: metal.Name}, {Plate: "upper", Material: metal.Name}},
		Contacts: []airframe.ContactProperties{{Contact: "face", Joint: "glue"}}}
	_, err = assembly.FromAirframe(m, p, func(string) element.Type { return prism{} })
	var input *assembly.InputError
	if !errors.As(err, &input) || !strings.Contains(err.Error(), "is of solid elements") {
		t.Errorf("%v", err)
	}
}
