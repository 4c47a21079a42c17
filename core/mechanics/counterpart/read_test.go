package counterpart

import (
	"context"
	"math"
	"reflect"
	"slices"
	"testing"

	"hushframe/core/known"
	"hushframe/core/match"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/outline"
)

var steel = airframe.Material{Name: "steel", E1: 200e9, E2: 200e9, Nu12: 0.3, G12: 200e9 / 2.6, G13: 200e9 / 2.6, G23: 200e9 / 2.6, Density: 7800, Isotropic: true}

// solved is a free frame on its mesh.
func solved(t *testing.T, m *mesh.Mesh, p *airframe.Properties, upTo float64) Frame {
	t.Helper()
	f, err := assembly.FromAirframe(m, p, func(name string) element.Type { return shell.QuadraticTriangle() })
	if err != nil {
		t.Fatal(err)
	}
	s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
	if err != nil {
		t.Fatal(err)
	}
	var places []modal.Place
	out := Frame{Mesh: m, Masses: map[string]float64{}}
	for i, b := range p.Bodies {
		places = append(places, modal.Place{Name: b.Name, Kind: "body", Body: f.BodyOf[i], Point: airframe.Vec{b.Centre[0] + 0.01, b.Centre[1], b.Centre[2]}})
		out.Solids = append(out.Solids, Solid{b.Name, b.Mass, b.Centre, [3]float64(b.Inertia[:3])})
	}
	st, err := modal.Build(context.Background(), s, places, modal.Options{UpTo: upTo, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	out.Basis = st.Basis
	for g, group := range f.Groups {
		if slices.ContainsFunc(m.Parts, func(p mesh.Part) bool { return p.Name == group.Name }) {
			out.Masses[group.Name] = s.GroupMass[g]
		}
	}
	return out
}

// plate is a free steel plate in a frame of its own.
func plate(t *testing.T, length, thickness, size, upTo float64, frame airframe.Frame) Frame {
	t.Helper()
	g := &airframe.Geometry{Plates: []airframe.Plate{{Name: "plate", Thickness: thickness, Frame: frame,
		Region: outline.NewRegion(outline.Rectangle(outline.Point{X: length / 2}, length, 0.07, 0))}}}
	m, err := mesh.Build(context.Background(), g, mesh.Options{Size: size, Element: "quadratic-triangle"})
	if err != nil {
		t.Fatal(err)
	}
	return solved(t, m, &airframe.Properties{Materials: []airframe.Material{steel}, Plates: []airframe.PlateProperties{{Plate: "plate", Material: "steel"}}}, upTo)
}

func track(a, b Frame) (match.Tracking, [2]match.Shapes, *Common) {
	c := Read(a, b)
	shapes := [2]match.Shapes{{Motion: c.A}, {Motion: c.B}}
	for k, f := range []Frame{a, b} {
		for v, kind := range f.Basis.Kinds {
			if kind == modal.Elastic {
				shapes[k].Frequency = append(shapes[k].Frequency, f.Basis.Frequency[v])
			}
		}
	}
	return match.Track(shapes[0], shapes[1], c.Weights, match.TrackOptions{}), shapes, c
}

var level = airframe.Frame{X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}

// A thin plate of half as much thickness again has the same shapes at frequencies half as high again: f is in proportion
// to √(D/ρh), which is to h, and the shape depends on the sides and ν alone (A. W. Leissa, Vibration of Plates, NASA
// SP-160, 1969). The meshes have nothing in common, and the second plate is turned and moved.
func TestThickerPlate(t *testing.T) {
	s, c := math.Sincos(0.7)
	turned := airframe.Frame{Origin: airframe.Vec{0.03, -0.02, 0.01}, X: airframe.Vec{c, s, 0}, Y: airframe.Vec{-s, c, 0}, Z: airframe.Vec{0, 0, 1}}
	thin := plate(t, 0.1, 0.5e-3, 6e-3, 1500, level)
	for _, other := range []Frame{plate(t, 0.1, 0.75e-3, 5e-3, 2250, level), plate(t, 0.1, 0.75e-3, 4.4e-3, 2250, turned)} {
		got, shapes, common := track(thin, other)
		if len(got.Pairs) < 5 || len(got.Lost) > 0 || len(got.New) > 0 {
			t.Fatalf("%d pairs, lost %v, new %v", len(got.Pairs), got.Lost, got.New)
		}
		for _, p := range got.Pairs {
			ratio := shapes[1].Frequency[p.After] / shapes[0].Frequency[p.Before]
			if p.Before != p.After || p.MAC < 0.9995 || math.Abs(ratio/1.5-1) > 0.004 {
				t.Errorf("mode %d is %d with MAC %.5f and %.4f times the frequency", p.Before, p.After, p.MAC, ratio)
			}
		}
		for i := range shapes[0].Motion {
			for j := range shapes[1].Motion {
				if mac := got.MAC[i*len(shapes[1].Motion)+j]; i != j && mac > 1e-3 { // orthogonal over the mass
					t.Errorf("modes %d and %d have %.5f", i, j, mac)
				}
			}
		}
		if math.Abs(common.Shared[0]-1) > 1e-12 || math.Abs(common.Shared[1]-1) > 1e-12 {
			t.Errorf("shared %v", common.Shared)
		}
		sum := 0.0
		for k := 0; k < len(common.Weights); k += 3 {
			sum += common.Weights[k]
		}
		if want := 7800 * 0.1 * 0.07 * 0.625e-3; math.Abs(sum/want-1) > 1e-6 {
			t.Errorf("weights add up to %g kg, want the mean %g", sum, want)
		}
	}
}

// Either order gives the same, also where one plate is longer.
func TestSwapped(t *testing.T) {
	a, b := plate(t, 0.1, 1e-3, 6e-3, 2000, level), plate(t, 0.11, 1e-3, 5e-3, 2000, level)
	there, _, one := track(a, b)
	back, _, other := track(b, a)
	if len(there.Pairs) == 0 || len(there.Pairs) != len(back.Pairs) || one.Shared[0] != other.Shared[1] {
		t.Fatalf("%v, %v", there.Pairs, back.Pairs)
	}
	for i, p := range there.Pairs {
		q := back.Pairs[i]
		if p.Before != q.After || p.After != q.Before || math.Abs(p.MAC-q.MAC) > 1e-9 {
			t.Errorf("%+v back %+v", p, q)
		}
	}
}

// A whole frame: parts, standoffs, bodies on mounts. Modes of one frame are orthogonal over its mass, so each is like
// itself on another mesh and unlike all others. What is only in one frame is named.
func TestFrameOnTwoMeshes(t *testing.T) {
	frame := func(size float64) Frame {
		m, p := known.Airframe(size)
		return solved(t, m, p, 900)
	}
	a, b := frame(0.004), frame(0.003)
	got, shapes, common := track(a, b)
	if len(got.Pairs) < 10 || len(got.Pairs) < len(shapes[0].Motion)-1 {
		t.Fatalf("%d of %d and %d", len(got.Pairs), len(shapes[0].Motion), len(shapes[1].Motion))
	}
	for _, p := range got.Pairs {
		if p.MAC < 0.97 {
			t.Errorf("mode %d is %d with MAC %.4f", p.Before, p.After, p.MAC)
		}
		for j := range shapes[1].Motion {
			if mac := got.MAC[p.Before*len(shapes[1].Motion)+j]; j != p.After && mac > 0.03 {
				t.Errorf("mode %d is like %d too, %.4f", p.Before, j, mac)
			}
		}
	}
	if math.Abs(common.Shared[0]-1) > 1e-12 || common.Alone[0] != nil {
		t.Errorf("shared %v, alone %v", common.Shared, common.Alone)
	}
	lump := slices.IndexFunc(b.Solids, func(s Solid) bool { return s.Name == "battery" })
	without := b.Solids[lump].Mass
	b.Solids = slices.Delete(slices.Clone(b.Solids), lump, lump+1)
	delete(b.Masses, "roof")
	common = Read(a, b)
	if !reflect.DeepEqual(common.Alone, [2][]string{{"battery", "roof"}, nil}) {
		t.Errorf("alone %v", common.Alone)
	}
	total, roof := 0.0, a.Masses["roof"]
	for _, m := range a.Masses {
		total += m
	}
	for _, s := range a.Solids {
		total += s.Mass
	}
	if want := 1 - (without+roof)/total; math.Abs(common.Shared[0]-want) > 1e-12 || math.Abs(common.Shared[1]-1) > 1e-12 {
		t.Errorf("shared %v, want %g and 1", common.Shared, want)
	}
}

// The nearest point of a triangle by the definition, over a grid of points.
func TestClosest(t *testing.T) {
	c := [3][2]float64{{0, 0}, {2, 0.5}, {0.4, 1.5}}
	for i := -10; i <= 30; i++ {
		for j := -10; j <= 25; j++ {
			p := [2]float64{float64(i) / 10, float64(j) / 10}
			least := math.Inf(1)
			const n = 60
			for k := 0; k <= n; k++ {
				for l := 0; k+l <= n; l++ {
					x, y := p[0], p[1]
					for d, w := range []float64{float64(k) / n, float64(l) / n, float64(n-k-l) / n} {
						x, y = x-w*c[d][0], y-w*c[d][1]
					}
					least = math.Min(least, x*x+y*y)
				}
			}
			got := distance(c, p)
			if l := closest(c, p); math.Abs(l[0]+l[1]+l[2]-1) > 1e-12 || math.Min(l[0], math.Min(l[1], l[2])) < 0 {
				t.Fatalf("%v: coordinates %v", p, l)
			}
			if got > least+1e-12 || math.Sqrt(least)-math.Sqrt(got) > 0.03 {
				t.Fatalf("%v: distance² %g, want %g", p, got, least)
			}
		}
	}
}
