package kinds

import (
	"math"
	"reflect"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/outline"
)

var upright = airframe.Frame{Origin: airframe.Vec{1, 2, 3}, X: airframe.Vec{0, 1, 0}, Y: airframe.Vec{-1, 0, 0}, Z: airframe.Vec{0, 0, 1}}

func TestGeometryRoundTrip(t *testing.T) {
	ring := outline.Loop{outline.Circle(outline.Point{X: 0.01, Y: 0.02}, 0.0015, false)}
	g := &airframe.Geometry{
		Plates: []airframe.Plate{{Name: "top", Thickness: 0.002, Frame: upright, Region: outline.Region{
			Outer: outline.Loop{
				outline.Line(outline.Point{X: 0, Y: 0}, outline.Point{X: 0.1, Y: 0}),
				outline.ArcBetween(outline.Point{X: 0.1, Y: 0}, outline.Point{X: 0.1, Y: 0.05}, math.Pi/2),
				outline.Cubic(outline.Point{X: 0.1, Y: 0.05}, outline.Point{X: 0.08, Y: 0.07}, outline.Point{X: 0.02, Y: 0.06}, outline.Point{X: 0, Y: 0}),
			}, Holes: []outline.Loop{ring}}}},
		Patches:   []airframe.Patch{{Name: "a", Owner: "bolt b", Shape: airframe.Disc, Radius: 0.003}, {Name: "p", Owner: "battery", Shape: airframe.Rectangle, Width: 0.03, Height: 0.02, Turn: 0.4}},
		Bolts:     []airframe.Bolt{{Name: "b", Group: "arms", Patches: []int{0, 1}, Axis: airframe.Vec{0, 0, 1}, HoleRadius: 0.0016, ClampRadius: 0.003, Inferred: true}},
		Standoffs: []airframe.Standoff{{Name: "s", Patches: [2]int{1, 0}, Ends: [2]airframe.Vec{{0, 0, 1}, {0, 0, 2}}, Outer: 0.005, Inner: 0.003}},
		Contacts: []airframe.Contact{{Name: "c", Kind: airframe.Pressed, Axes: upright, Shape: airframe.Rectangle, Centre: outline.Point{X: 1, Y: 2}, Radius: 3, Width: 4, Height: 5, Turn: 6,
			Ends: [2]airframe.Vec{{7, 8, 9}, {10, 11, 12}}}},
	}
	a := EncodeGeometry(g)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	back, err := DecodeGeometry(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(g, back) {
		t.Errorf("got %+v\nwant %+v", back, g)
	}
	a.Table("curves").Ints("plate")[0] = 7
	if _, err := DecodeGeometry(a); err == nil {
		t.Error("a curve of a plate that does not exist was accepted")
	}
}

func TestPropertiesRoundTrip(t *testing.T) {
	mount := &airframe.Mount{Name: "grommets", Kind: "grommet", Loss: [6]float64{0.1, 0.2, 0.3, 0.4, 0.5, 0.6}, Law: airframe.Law{Kind: airframe.Table, Reference: 3, Frequency: []float64{10, 20}, Storage: []float64{1, 1.5}, Loss: []float64{0.1, 0.2}, Order: 4, LossFactor: 5, Rise: 6, PeakAt: 7}, Preload: 8, Origin: "o", Points: []airframe.MountPoint{{Point: airframe.Vec{1, 2, 3}, Patch: "g1", Stiffness: [6]float64{1, 2, 3, 4, 5, 6}}}}
	p := &airframe.Properties{
		Materials: []airframe.Material{{Name: "m", E1: 1, E2: 2, E3: 10, Nu12: 3, G12: 4, G13: 5, G23: 6, Density: 7, LossFactor: 8, Isotropic: true, Typical: true, Scatter: 9, Origin: "o"}},
		Plates:    []airframe.PlateProperties{{Plate: "top", Fibre: 0.1, Mass: 0.02, Plies: []airframe.Ply{{Material: "m", Thickness: 0.001, Angle: 0.3}, {Material: "m", Thickness: 0.002, Angle: -0.3}}}},
		Standoffs: []airframe.StandoffProperties{{Standoff: "s", Material: "m", Mass: 0.001}},
		Bolts:     []airframe.BoltProperties{{Bolt: "b", Mass: 0.0005, Joint: "j"}, {Bolt: "c", Pairs: [][6]float64{{1, 2, 3, 4, 5, 6}, {7, 8, 9, 10, 11, 12}}}},
		Contacts:  []airframe.ContactProperties{{Contact: "p", Joint: "k"}, {Contact: "q", Joint: "k", Stiffness: &[6]float64{1, 2, 3, 4, 5, 6}}},
		Joints:    []airframe.Joint{{Name: "j", Stiffness: [6]float64{1, 2, math.Inf(1), 4, 5, 6}, LossFactor: 0.05, Low: 0.5, High: 2, Preload: 700, Origin: "o"}, {Name: "k", Measure: airframe.PerArea}},
		Bodies: []airframe.Body{
			{Name: "r", Kind: "rotor", Mass: 0.03, Centre: airframe.Vec{1, 2, 3}, Inertia: [6]float64{1, 2, 3, 4, 5, 6}, Patches: []string{"base"}},
			{Name: "g", Kind: "gyro", Mass: 0.01, Mount: mount},
		},
		Rotors:       []airframe.Rotor{{Name: "r", Body: "r", Axis: airframe.Vec{0, 0, 1}, Blades: 3, Spin: -1, HoverSpeed: 1, MaxSpeed: 2, SpinningMass: 3, PolarInertia: 4, BellInertia: 6, PropellerInertia: 7, Grade: 5}},
		Gyro:         airframe.Gyro{Body: "g", At: airframe.Vec{3, 2, 1}},
		DeclaredMass: 0.5, Floor: 0.001,
	}
	a := EncodeProperties(p)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	back, err := DecodeProperties(a)
	if err != nil {
		t.Fatal(err)
	}
	back.Bodies[1].Patches = nil // an empty list and none are the same here
	if !reflect.DeepEqual(p, back) {
		t.Errorf("got %+v\nwant %+v", back, p)
	}
}

func TestMeshRoundTrip(t *testing.T) {
	m := &mesh.Mesh{
		Nodes:     []airframe.Vec{{0, 0, 0}, {1, 0, 0}, {0, 1, 0}, {0.5, 0, 0}, {0.5, 0.5, 0}, {0, 0.5, 0}, {0, 0, 1}, {0, 0, 2}},
		Parts:     []mesh.Part{{Name: "top", Element: "quadratic-triangle", Thickness: 0.002, Frame: upright}, {Name: "s", Standoff: true, Outer: 0.005, Frame: upright}},
		Triangles: [][6]int32{{0, 1, 2, 3, 4, 5}}, TrianglePart: []int32{0},
		Beams: [][2]int32{{6, 7}}, BeamPart: []int32{1},
		Edges: [][3]int32{{0, 3, 1}}, EdgePart: []int32{0},
		Patches: []mesh.Patch{{Name: "a", Owner: "s", Part: 0, Nodes: []int32{0, 3}, Centre: airframe.Vec{0, 0, 1}}},
		Links:   []mesh.Link{{Name: "s", Kind: "standoff", Patches: []int32{0, 0}, Nodes: []int32{6, 7}, Axis: airframe.Vec{0, 0, 1}}},
		Contacts: []mesh.Contact{{Name: "c", Parts: [2]int32{0, 0}, Area: true, Axes: upright,
			Points: []mesh.ContactPoint{{At: airframe.Vec{1, 2, 3}, Measure: 4, Triangle: [2]int32{0, 0}, Local: [2][2]float64{{0.1, 0.2}, {0.3, 0.4}}}}}},
	}
	a := EncodeMesh(m)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	back, err := DecodeMesh(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(m, back) {
		t.Errorf("got %+v\nwant %+v", back, m)
	}
	a.Table("triangles").Ints("n4")[0] = 8
	if _, err := DecodeMesh(a); err == nil {
		t.Error("a node that does not exist was accepted")
	}
}

func TestVerificationRoundTrip(t *testing.T) {
	v := &Verification{Problems: []VerifiedProblem{
		{ID: "A-1", Family: "bars", Title: "a bar", Mesh: "4 beams", Source: "a book", Known: "closed form", Quantity: "frequency", Unit: "Hz",
			Values: []VerifiedValue{{"mode 1", 10, 10.1, 0.5}, {"mode 2", 20, 19, 3}}},
		{ID: "A-2", Failure: "it has no mass"},
	}}
	a := EncodeVerification(v)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	back, err := DecodeVerification(a)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(v, back) {
		t.Errorf("got %+v\nwant %+v", back, v)
	}
	if w, ok := back.Problems[0].Worst(); !ok || w.Label != "mode 2" {
		t.Errorf("the worst value is %+v", w)
	}
	if _, ok := back.Problems[1].Worst(); ok {
		t.Error("a problem without values has a worst one")
	}
	a.Table("values").Ints("problem")[0] = 2
	if _, err := DecodeVerification(a); err == nil {
		t.Error("a value of a problem that does not exist was accepted")
	}
}
