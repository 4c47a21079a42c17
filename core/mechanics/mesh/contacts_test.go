package mesh

import (
	"context"
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
)

// twoPlates are a square of 60 mm with a hole of 20 mm in its middle and, upon it, a strip of 80 by 20 mm turned by 30
// degrees, whose middle lies over that of the square.
func twoPlates() *airframe.Geometry {
	level := airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}
	s, c := math.Sincos(math.Pi / 6)
	turned := airframe.Frame{Origin: airframe.Vec{0, 0, 3e-3}, X: airframe.Vec{c, s, 0}, Y: airframe.Vec{-s, c, 0}, Z: airframe.Vec{0, 0, 1}}
	face := level
	face.Origin[2] = 1e-3
	return &airframe.Geometry{
		Plates: []airframe.Plate{
			{Name: "square", Thickness: 2e-3, Frame: level, Region: outline.Region{Outer: outline.Rectangle(outline.Point{}, 0.06, 0.06, 0),
				Holes: []outline.Loop{{outline.Circle(outline.Point{}, 0.01, false)}}}},
			{Name: "strip", Thickness: 4e-3, Frame: turned, Region: outline.Region{Outer: outline.Rectangle(outline.Point{}, 0.08, 0.02, 0)}},
		},
		Contacts: []airframe.Contact{{Name: "face", Kind: airframe.Pressed, Plates: [2]int{0, 1}, Axes: face}},
	}
}

func area(c Contact) (sum float64, at airframe.Vec) {
	for _, p := range c.Points {
		sum += p.Measure
		for d := range at {
			at[d] += p.Measure * p.At[d]
		}
	}
	for d := range at {
		at[d] /= sum
	}
	return sum, at
}

// The strip covers the square for 60/cos 30° of its length and 20 mm of its width, for its slanted ends make up for each
// other, less the hole, 20 mm wide as the strip. Every point lies at one place in both triangles.
func TestPressedArea(t *testing.T) {
	g := twoPlates()
	m, err := Build(context.Background(), g, Options{Size: 3e-3, Element: "quadratic-triangle"})
	if err != nil {
		t.Fatal(err)
	}
	got, at := area(m.Contacts[0])
	want := 0.06/math.Cos(math.Pi/6)*0.02 - math.Pi*1e-4
	if math.Abs(got/want-1) > 0.01 {
		t.Errorf("the faces share %.2f mm², want %.2f", 1e6*got, 1e6*want)
	}
	if norm(minus(at, airframe.Vec{0, 0, 1e-3})) > 0.1e-3 {
		t.Errorf("their middle is %v", at)
	}
	for _, p := range m.Contacts[0].Points {
		for side, z := range [2]float64{0, 3e-3} {
			var x airframe.Vec
			for i, w := range Weights(p.Local[side]) {
				for d := range x {
					x[d] += w * m.Nodes[m.Triangles[p.Triangle[side]][i]][d]
				}
			}
			if norm(minus(x, airframe.Vec{p.At[0], p.At[1], z})) > 1e-9 {
				t.Fatalf("a point at %v lies at %v in a triangle of %s", p.At, x, m.Parts[m.Contacts[0].Parts[side]].Name)
			}
		}
	}
}

// A declared shape bounds the contact, and a bolt through both plates takes its disc out.
func TestPressedShape(t *testing.T) {
	g := twoPlates()
	s, c := math.Sincos(math.Pi / 6)
	at := outline.Point{X: 0.02 * c, Y: 0.02 * s}
	g.Contacts[0].Shape, g.Contacts[0].Centre, g.Contacts[0].Radius = airframe.Disc, at, 6e-3
	m, err := Build(context.Background(), g, Options{Size: 2e-3, Element: "quadratic-triangle"})
	if err != nil {
		t.Fatal(err)
	}
	got, _ := area(m.Contacts[0])
	if want := math.Pi * 36e-6; math.Abs(got/want-1) > 0.03 {
		t.Errorf("the disc has %.2f mm², want %.2f", 1e6*got, 1e6*want)
	}
	g.Patches = []airframe.Patch{{Name: "a", Plate: 0, Shape: airframe.Disc, Centre: at, Radius: 3e-3}, {Name: "b", Plate: 1, Shape: airframe.Disc, Centre: outline.Point{X: 0.02}, Radius: 3e-3}}
	g.Bolts = []airframe.Bolt{{Name: "b", Patches: []int{0, 1}, Point: airframe.Vec{at.X, at.Y, 2e-3}, Axis: airframe.Vec{0, 0, 1}, HoleRadius: 1.5e-3, ClampRadius: 3e-3}}
	if m, err = Build(context.Background(), g, Options{Size: 2e-3, Element: "quadratic-triangle"}); err != nil {
		t.Fatal(err)
	}
	if got, _ = area(m.Contacts[0]); math.Abs(got/(math.Pi*27e-6)-1) > 0.03 {
		t.Errorf("without the bolt's disc %.2f mm², want %.2f", 1e6*got, 1e6*math.Pi*27e-6)
	}
}

func TestContactsThatCannotBe(t *testing.T) {
	g := twoPlates()
	g.Contacts[0].Shape, g.Contacts[0].Centre, g.Contacts[0].Radius = airframe.Disc, outline.Point{X: -0.02, Y: 0.02}, 3e-3
	_, err := Build(context.Background(), g, Options{Size: 4e-3, Element: "quadratic-triangle"})
	if err == nil || !strings.Contains(err.Error(), "contact face: plates square and strip have no face in common there") {
		t.Errorf("pressed beside the strip: %v", err)
	}
	g = twoPlates()
	g.Contacts[0] = airframe.Contact{Name: "bead", Kind: airframe.Seam, Plates: [2]int{1, 0}, Axes: g.Contacts[0].Axes, Ends: [2]airframe.Vec{{0.02, 0, 1e-3}, {0.05, 0, 1e-3}}}
	_, err = Build(context.Background(), g, Options{Size: 4e-3, Element: "quadratic-triangle"})
	if err == nil || !strings.Contains(err.Error(), "has no material near") {
		t.Errorf("a seam beyond the edge: %v", err)
	}
}
