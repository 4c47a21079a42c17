package laminate_test

// The stiffness of the laminates of testdata/known is checked with the rows, in core/known/cases.

import (
	"errors"
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/laminate"
)

// One ply at any angle is a homogeneous plate: equilibrium must give exactly 5/6, both ways.
func TestOnePlyHasFiveSixths(t *testing.T) {
	m := laminate.Material{E1: 128e9, E2: 8.5e9, G12: 4.5e9, Nu12: 0.3, G13: 4.5e9, G23: 3.2e9, Density: 1580}
	for _, angle := range []float64{0, 0.3, math.Pi / 2, -1} {
		plies := []laminate.Ply{{Material: m, Thickness: 0.002, Angle: angle}}
		got, err := laminate.Stack(plies)
		if err != nil {
			t.Fatal(err)
		}
		want, _ := laminate.Homogeneous(m, 0.002, angle)
		for i := range 2 {
			for j := range 2 {
				if math.Abs(got.Shear[i][j]-want.Shear[i][j]) > 1e-9*want.Shear[0][0] {
					t.Errorf("angle %g: shear[%d][%d] = %g, want %g", angle, i, j, got.Shear[i][j], want.Shear[i][j])
				}
			}
		}
	}
}

// Turning the axes of the section is turning every ply the other way; slicing a ply changes nothing.
func TestTurnAndSlice(t *testing.T) {
	ud := laminate.Material{E1: 128e9, E2: 8.5e9, G12: 4.5e9, Nu12: 0.3, G13: 4.5e9, G23: 3.2e9, Density: 1580}
	weave := laminate.Material{E1: 62e9, E2: 60e9, G12: 4.2e9, Nu12: 0.06, G13: 3.2e9, G23: 3.1e9, Density: 1550}
	plies := []laminate.Ply{{ud, 0.0003, 0.2}, {weave, 0.0005, 0.9}, {ud, 0.0002, -1.1}}
	base, err := laminate.FactoredStack(plies, 5.0/6)
	if err != nil {
		t.Fatal(err)
	}
	const angle = 0.7
	var turned, flipped, sliced []laminate.Ply
	for _, p := range plies {
		turned = append(turned, laminate.Ply{Material: p.Material, Thickness: p.Thickness, Angle: p.Angle - angle})
		flipped = append([]laminate.Ply{{Material: p.Material, Thickness: p.Thickness, Angle: -p.Angle}}, flipped...)
		half := laminate.Ply{Material: p.Material, Thickness: p.Thickness / 2, Angle: p.Angle}
		sliced = append(sliced, half, half)
	}
	compare := func(name string, got, want laminate.Section) {
		t.Helper()
		pairs := [][2]float64{{got.Mass, want.Mass}, {got.Coupling, want.Coupling}, {got.Rotary, want.Rotary}}
		scale := []float64{want.Mass, want.Mass * want.Thickness, want.Rotary}
		for i := range 3 {
			for j := range 3 {
				pairs = append(pairs, [2]float64{got.A[i][j], want.A[i][j]}, [2]float64{got.B[i][j], want.B[i][j]}, [2]float64{got.D[i][j], want.D[i][j]})
				scale = append(scale, want.A[0][0], want.A[0][0]*want.Thickness, want.D[0][0])
			}
		}
		for i := range 2 {
			for j := range 2 {
				pairs = append(pairs, [2]float64{got.Shear[i][j], want.Shear[i][j]})
				scale = append(scale, want.Shear[0][0])
			}
		}
		for i, p := range pairs {
			if math.Abs(p[0]-p[1]) > 1e-12*scale[i] {
				t.Errorf("%s: entry %d is %g, want %g", name, i, p[0], p[1])
			}
		}
	}
	want, _ := laminate.FactoredStack(turned, 5.0/6)
	compare("turn", base.Turn(angle), want)
	want, _ = laminate.FactoredStack(flipped, 5.0/6)
	compare("flip", base.Flip(), want)
	full, _ := laminate.Stack(plies)
	want, _ = laminate.Stack(sliced)
	compare("slice", full, want)
	want, _ = laminate.Stack(flipped)
	compare("flip with equilibrium shear", full.Flip(), want)
}

func TestImpossibleConstants(t *testing.T) {
	good := laminate.Material{E1: 62e9, E2: 60e9, G12: 4.2e9, Nu12: 0.06, G13: 3.2e9, G23: 3.2e9, Density: 1550}
	for _, c := range []struct {
		constant, bound string
		spoil           func(*laminate.Material)
	}{
		{"E1", "positive", func(m *laminate.Material) { m.E1 = 0 }},
		{"E2", "positive", func(m *laminate.Material) { m.E2 = -1 }},
		{"G12", "positive", func(m *laminate.Material) { m.G12 = math.NaN() }},
		{"G13", "positive", func(m *laminate.Material) { m.G13 = math.Inf(1) }},
		{"G23", "positive", func(m *laminate.Material) { m.G23 = 0 }},
		{"density", "positive", func(m *laminate.Material) { m.Density = 0 }},
		{"nu12", "1.017", func(m *laminate.Material) { m.Nu12 = 1.02 }}, // sqrt(62/60) = 1.0165
		{"nu12", "1.017", func(m *laminate.Material) { m.Nu12 = -1.02 }},
	} {
		m := good
		c.spoil(&m)
		_, err := laminate.Homogeneous(m, 0.002, 0)
		var ce *laminate.ConstantError
		if !errors.As(err, &ce) || ce.Constant != c.constant || !strings.Contains(ce.Error(), c.bound) {
			t.Errorf("%s: got %v, want a message naming it and its bound %s", c.constant, err, c.bound)
		}
	}
	if _, err := laminate.Homogeneous(good, 0, 0); err == nil || !strings.Contains(err.Error(), "thickness") {
		t.Errorf("zero thickness: got %v", err)
	}
	bad := good
	bad.G13 = 0
	_, err := laminate.Stack([]laminate.Ply{{good, 0.001, 0}, {bad, 0.001, 0}})
	if err == nil || !strings.Contains(err.Error(), "ply 2 of 2") {
		t.Errorf("bad second ply: got %v", err)
	}
	if err := laminate.CheckIsotropic(70e9, 0.5, 2700); err == nil || !strings.Contains(err.Error(), "0.5") {
		t.Errorf("nu = 0.5: got %v", err)
	}
	if _, err := laminate.Stack(nil); err == nil {
		t.Error("an empty stack is accepted")
	}
}

func BenchmarkStack(b *testing.B) {
	ud := laminate.Material{E1: 128e9, E2: 8.5e9, G12: 4.5e9, Nu12: 0.3, G13: 4.5e9, G23: 3.2e9, Density: 1580}
	var plies []laminate.Ply
	for i := range 16 {
		plies = append(plies, laminate.Ply{Material: ud, Thickness: 0.000125, Angle: float64(i%4) * math.Pi / 4})
	}
	for b.Loop() {
		if _, err := laminate.Stack(plies); err != nil {
			b.Fatal(err)
		}
	}
}
