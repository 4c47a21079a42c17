package fastener

import (
	"math"
	"testing"
)

func steel(t float64) Plate {
	return Plate{Thickness: t, E3: 207e9, Shear: 80e9, InPlane: 207e9}
}

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got/want-1) <= tol) {
		t.Errorf("%s is %.6g, want %.6g", what, got, want)
	}
}

// One material, a head of 1.5 d in a hole of d: the members of the whole stack are Shigley's
// 0.5774 π E d / (2 ln[5 (0.5774 l + 0.5 d)/(0.5774 l + 2.5 d)]) (Mechanical Engineering Design, 5th ed., from memory).
// With four equal plates the pairs hold all but the outer halves of the outer plates, which are closed by their frusta.
func TestMembersAsShigley(t *testing.T) {
	const d, l = 0.012, 0.040
	s := Screw{Diameter: d, Modulus: 1, Hole: d, Head: 1.5 * d} // a screw of no stiffness to speak of
	want := 0.5774 * math.Pi * 207e9 * d / (2 * math.Log(5*(0.5774*l+0.5*d)/(0.5774*l+2.5*d)))
	pairs, err := Pairs([]Plate{steel(l / 4), steel(l / 4), steel(l / 4), steel(l / 4)}, s, Friction)
	if err != nil {
		t.Fatal(err)
	}
	all := series{}
	for _, p := range pairs {
		all.add(p[2])
	}
	outer := frustum{l / 8, 1.5 * d, s.cone(l/8, l)}
	all.add(outer.axial(207e9, d))
	all.add(outer.axial(207e9, d))
	near(t, "the stiffness of the members", all.stiffness(), want, 1e-4)
}

// A head so wide that the cone is a column: E A / h between the middles of the plates, G A / h across, and the second
// moments of the annulus for the rotations.
func TestColumn(t *testing.T) {
	const head, hole = 0.2, 0.02
	s := Screw{Diameter: 0.019, Modulus: 210e9, Hole: hole, Head: head}
	a, b := steel(1e-4), Plate{Thickness: 3e-4, E3: 8e9, Shear: 3e9, InPlane: 50e9, Composite: true}
	pairs, err := Pairs([]Plate{a, b}, s, Friction)
	if err != nil {
		t.Fatal(err)
	}
	k := pairs[0]
	area := math.Pi / 4 * (head*head - hole*hole)
	members := area / (a.Thickness/2/a.E3 + b.Thickness/2/b.E3)
	screw := 210e9 * 0.75 * math.Pi / 4 * s.Diameter * s.Diameter / (4e-4 + 0.8*s.Diameter)
	near(t, "axial", k[2], members+screw, 3e-3)
	across := area / (a.Thickness/2/a.Shear + b.Thickness/2/b.Shear)
	near(t, "across", k[0], across, 3e-3)
	near(t, "across y", k[1], k[0], 0)
	second := math.Pi / 4 * (math.Pow(head/2, 4) - math.Pow(hole/2, 4))
	near(t, "rocking", k[3], members*second/area, 5e-3)
	near(t, "turning", k[5], across*2*second/area, 5e-3)
	n, sh := Faces(a, b)
	near(t, "faces, normal", n*area, members, 1e-12)
	near(t, "faces, shear", sh*area, across, 1e-12)
}

// A hand calculation of Huth's formula: a steel screw of 3 mm in 2 and 5 mm of carbon with 55 GPa.
// ((2+5)/(2·3))^(2/3) · 4.2 · (1/(2·55) + 1/(5·55) + 1/(2·2·205) + 1/(2·5·205)) m/GN·10³, that is
// 1.10823 · 4.2 · (9.0909 + 3.6364 + 1.2195 + 0.4878)·10⁻⁹ m/N = 6.7182·10⁻⁸ m/N.
func TestBearing(t *testing.T) {
	carbon := func(x float64) Plate {
		return Plate{Thickness: x, E3: 8e9, Shear: 3e9, InPlane: 55e9, Composite: true}
	}
	pairs, err := Pairs([]Plate{carbon(2e-3), carbon(5e-3)}, Screw{Diameter: 3e-3, Modulus: 205e9, Hole: 3.2e-3, Head: 6e-3}, Bearing)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "bearing", pairs[0][0], 1/6.7182e-8, 1e-4)
}

func TestSeam(t *testing.T) {
	k, err := Glue{Modulus: 2e9, Poisson: 0.35, Thickness: 2e-4, Width: 3e-3}.Seam()
	if err != nil {
		t.Fatal(err)
	}
	near(t, "normal", k[2], 3e10, 1e-12)
	near(t, "shear", k[0], 3e10/2.7, 1e-12)
	near(t, "about the line", k[3], 3e10*9e-6/12, 1e-12)
}

func TestRefused(t *testing.T) {
	s := Screw{Diameter: 3e-3, Modulus: 205e9, Hole: 3.2e-3, Head: 6e-3}
	two := []Plate{steel(1e-3), steel(1e-3)}
	for name, f := range map[string]func() error{
		"one plate":   func() error { _, err := Pairs(two[:1], s, Friction); return err },
		"small head":  func() error { s := s; s.Head = 3e-3; _, err := Pairs(two, s, Friction); return err },
		"thick screw": func() error { s := s; s.Diameter = 4e-3; _, err := Pairs(two, s, Friction); return err },
		"no modulus": func() error {
			_, err := Pairs([]Plate{steel(1e-3), {Thickness: 1e-3, Shear: 1, InPlane: 1}}, s, Friction)
			return err
		},
		"no grip": func() error { _, err := Pairs(two, s, "luck"); return err },
		"no glue": func() error { _, err := Glue{Modulus: 2e9, Width: 1e-3}.Seam(); return err },
	} {
		if f() == nil {
			t.Errorf("%s: passes", name)
		}
	}
}
