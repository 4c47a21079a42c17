package assemble

import (
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/fastener"
)

const declared = `joint "sandwich" {
  x           = "80 N/um"
  y           = "80 N/um"
  rz          = "2000 N*m/rad"
  loss_factor = 0.02
  low         = 0.3
  high        = 3
}`

func jointNamed(t *testing.T, a *Assembly, name string) airframe.Joint {
	t.Helper()
	for _, j := range a.Properties.Joints {
		if j.Name == name {
			return j
		}
	}
	t.Fatalf("no joint %s", name)
	return airframe.Joint{}
}

// A joint with a screw has the stiffness that package fastener gives for the stack it clamps; a component that is
// given wins; the group says where its values come from and how far they may lie off.
func TestScrewedJoint(t *testing.T) {
	a := mustBuild(t, declared, `joint "sandwich" {
  screw       = "3 mm"
  rz          = "2000 N*m/rad"
  preload     = "700 N"
  loss_factor = 0.02
}`)
	// Sheet: E1 60, E2 56, G13 = G23 3, through 9 GPa of the table; steel of 205 GPa.
	sheet := func(thickness float64) fastener.Plate {
		return fastener.Plate{Thickness: thickness, E3: 9e9, Shear: 3e9, InPlane: math.Sqrt(60e9 * 56e9), Composite: true}
	}
	want, err := fastener.Pairs([]fastener.Plate{sheet(2e-3), sheet(4e-3)}, fastener.Screw{Diameter: 3e-3, Modulus: 205e9, Hole: 3.2e-3, Head: 6e-3}, fastener.Friction)
	if err != nil {
		t.Fatal(err)
	}
	want[0][5] = 2000
	for _, bolt := range a.Properties.Bolts {
		if len(bolt.Pairs) != 1 {
			t.Fatalf("bolt %s has %d pairs", bolt.Bolt, len(bolt.Pairs))
		}
		for c, k := range bolt.Pairs[0] {
			near1(t, bolt.Bolt, k/want[0][c], 1, 1e-9)
		}
	}
	j := jointNamed(t, a, "sandwich")
	near1(t, "nominal", j.Stiffness[2]/want[0][2], 1, 1e-9)
	if !strings.Contains(j.Origin, "Shigley") || !strings.Contains(j.Origin, "rz as given") || j.Low != likelyLow || j.High != likelyHigh || j.Preload != 700 {
		t.Errorf("joint %+v", j)
	}
}

// Bolts may be changed by the group of plates they clamp, and one by one within it.
func TestJointOfAGroup(t *testing.T) {
	a := mustBuild(t, declared, declared+`
joint "soft" {
  z = "20 kN/mm"
  within_factor = 4
}`, `change = { "bolt-4" = { mass = "2 g" } }`, `change = { "base+arm_rear" = { joint = joint.soft, mass = "1.7 g" }, "bolt-4" = { mass = "2 g" } }`)
	for i, want := range []struct {
		joint string
		mass  float64
	}{{"sandwich", 1.5e-3}, {"sandwich", 1.5e-3}, {"soft", 1.7e-3}, {"soft", 2e-3}} {
		if b := a.Properties.Bolts[i]; b.Joint != want.joint || b.Mass != want.mass {
			t.Errorf("bolt %+v, want %+v", b, want)
		}
	}
	if j := jointNamed(t, a, "soft"); j.Low != 0.25 || j.High != 4 {
		t.Errorf("range %g to %g", j.Low, j.High)
	}
}

// Of the plates named those that touch are pressed together: both arms on the base, none on the top.
func TestPressedPlates(t *testing.T) {
	a := mustBuild(t, declared, declared+`
pressed "faces" {
  plates      = [plate.base, plate.arm_front, plate.arm_rear, plate.top]
  loss_factor = 0.03
}
pressed "root" {
  plates = [plate.base, plate.arm_front]
  at     = ["25 mm", "0 mm"]
  size   = ["6 mm", "8 mm"]
  faces  = "normal-only"
  normal = "2000 N/mm3"
  within_factor = 3
}`)
	g, p := &a.Geometry, &a.Properties
	if len(g.Contacts) != 3 || len(p.Contacts) != 3 {
		t.Fatalf("%d contacts: %+v", len(g.Contacts), g.Contacts)
	}
	// Halves of 2 and 4 mm in a row: 1/(1 mm/9 GPa + 2 mm/9 GPa) and with 3 GPa of shear.
	for i, arm := range []string{"arm_front", "arm_rear"} {
		c, k := g.Contacts[i], p.Contacts[i]
		if g.Plates[c.Plates[0]].Name != "base" || g.Plates[c.Plates[1]].Name != arm || c.Kind != airframe.Pressed || k.Joint != "faces" || c.Shape != "" {
			t.Errorf("contact %+v, %+v", c, k)
		}
		near1(t, "normal", k.Stiffness[2], 9e9/3e-3, 1)
		near1(t, "shear", k.Stiffness[0], 3e9/3e-3, 1)
		near1(t, "face", c.Axes.Origin[2], 2e-3, 1e-12)
	}
	j := jointNamed(t, a, "faces")
	if j.Measure != airframe.PerArea || j.Low != pressedLow || j.High != 1 || j.LossFactor != 0.03 {
		t.Errorf("group %+v", j)
	}
	c, k := g.Contacts[2], p.Contacts[2]
	if k.Stiffness[0] != 0 || k.Stiffness[1] != 0 || math.Abs(k.Stiffness[2]/2e12-1) > 1e-12 || c.Shape != airframe.Rectangle || c.Width != 6e-3 || c.Height != 8e-3 {
		t.Errorf("root %+v with %v", c, *k.Stiffness)
	}
	at := inSpace(g.Plates[0].Frame, c.Centre, 0)
	near1(t, "root x", at[0], 25e-3, 1e-12)
}

// Plates that lie on each other with screws alone are told with the area, those pressed together are not.
func TestBareFacesAreTold(t *testing.T) {
	told := func(a *Assembly) string {
		for _, w := range a.Warnings {
			if w.ID == "faces-bare" {
				return w.Text
			}
		}
		return ""
	}
	bare := told(mustBuild(t, declared, declared))
	for _, want := range []string{"base and arm_front over 2.9 cm²", "base and arm_rear over 2.7 cm²"} {
		if !strings.Contains(bare, want) {
			t.Errorf("%q lacks %q", bare, want)
		}
	}
	one := told(mustBuild(t, declared, declared+`
pressed "faces" {
  plates = [plate.arm_front, plate.base]
}`))
	if strings.Contains(one, "arm_front") || !strings.Contains(one, "arm_rear") {
		t.Errorf("with one arm pressed: %q", one)
	}
	all := told(mustBuild(t, declared, declared+`
pressed "faces" {
  plates = [plate.base, plate.arm_front, plate.arm_rear]
}`))
	if all != "" {
		t.Errorf("with both pressed: %q", all)
	}
}

// A key stops square to its flank in the plane; a glued seam has the bed of its glue.
func TestKeyAndSeam(t *testing.T) {
	a := mustBuild(t, declared, declared+`
key "slot" {
  between   = [plate.arm_front, plate.base]
  from      = ["20 mm", "6 mm"]
  to        = ["40 mm", "6 mm"]
  stiffness = "40 kN/mm"
}
seam "bead" {
  between = [plate.arm_rear, plate.base]
  from    = ["-20 mm", "-6 mm", "2 mm"]
  to      = ["-30 mm", "-6 mm", "2 mm"]
  glue {
    modulus   = "2 GPa"
    nu        = 0.25
    thickness = "0.1 mm"
    width     = "2 mm"
  }
}`)
	seam, key := a.Geometry.Contacts[0], a.Geometry.Contacts[1]
	near3(t, "flank", key.Ends[1], vec{40e-3, 6e-3, 2e-3}) // the face between 0 to 2 and 2 to 6 mm
	near3(t, "square to it", key.Axes.Y, vec{0, 1, 0})
	if k := jointNamed(t, a, "slot"); k.Stiffness != [6]float64{0, 4e7 / 20e-3} || k.Measure != airframe.PerLength {
		t.Errorf("key %+v", k)
	}
	near3(t, "along the bead", seam.Axes.X, vec{-1, 0, 0})
	k := jointNamed(t, a, "bead").Stiffness
	near1(t, "normal", k[2], 4e10, 1e-3)
	near1(t, "shear", k[1], 4e10/2.5, 1e-3)
	near1(t, "about it", k[3], 4e10*4e-6/12, 1e-9)
}

// A typical mount brings stiffness, losses, law and where they come from; what is given goes before.
func TestMountLike(t *testing.T) {
	stiffness := `    stiffness   = ["30 N/mm", "30 N/mm", "50 N/mm"]
    loss_factor = 0.2
`
	mount := func(text string) *airframe.Mount {
		a := mustBuild(t, stiffness, text)
		for _, b := range a.Properties.Bodies {
			if b.Name == "stack" {
				return b.Mount
			}
		}
		return nil
	}
	m := mount(`    like = "grommet-silicone-firm"
    preload = "2 N"
`)
	if m.Points[0].Stiffness != [6]float64{32e3, 32e3, 48e3} || m.Law.Kind != airframe.Fractional || m.Kind != "grommet" || m.Preload != 2 || !strings.Contains(m.Origin, "no source") {
		t.Errorf("%+v", m)
	}
	m = mount(`    like = "grommet-silicone-firm"
    stiffness = ["10 N/mm", "10 N/mm", "20 N/mm"]
    loss_factor = [0.1, 0.1, 0.3]
    fractional {
      at    = "80 Hz"
      order = 0.5
    }
`)
	if m.Points[2].Stiffness != [6]float64{1e4, 1e4, 2e4} || m.Law.Order != 0.5 || m.Law.Reference != 80 {
		t.Errorf("%+v", m)
	}
	if _, law := m.Component(2); law.LossFactor != 0.3 || imag(law.At(80)) < 0.3-1e-12 || imag(law.At(80)) > 0.3+1e-12 {
		t.Errorf("along z the law is %+v", law)
	}
	m = mount(`    stiffness = ["10 N/mm", "10 N/mm", "20 N/mm"]
    table {
      frequency   = ["50 Hz", "500 Hz"]
      storage     = [1, 1.6]
      loss_factor = [0.1, 0.2]
    }
`)
	if m.Law.Kind != airframe.Table || m.Law.Storage[1] != 1.6 || m.Law.Loss[0] != 0.1 {
		t.Errorf("%+v", m.Law)
	}
}

// Bell, stator and propeller by hand, in g and mm: hollow cylinders, heights above the arm's face.
func TestBellAndStator(t *testing.T) {
	whole := `  mass               = "30 g"
  height             = "10 mm"
  diameter           = "26 mm"
  length             = "18 mm"
`
	a := mustBuild(t, whole, `  stator {
    mass     = "14 g"
    height   = "6 mm"
    diameter = "22 mm"
    length   = "8 mm"
  }
  bell {
    mass     = "16 g"
    height   = "12 mm"
    diameter = "26 mm"
    inner    = "22 mm"
    length   = "14 mm"
  }
`)
	body, r := a.Properties.Bodies[len(a.Properties.Bodies)-4], a.Properties.Rotors[0]
	if body.Name != "front" {
		t.Fatalf("body %s", body.Name)
	}
	near1(t, "mass", body.Mass, 34e-3, 1e-12)
	centre := (14*6 + 16*12 + 4*24) / 34.0
	near3(t, "centre", body.Centre, vec{86e-3, 0, (6 + centre) * 1e-3})
	disc := 4 * math.Pow(0.42*60, 2)
	bell := 16 * (13.0*13 + 11*11) / 2
	near1(t, "bell's polar inertia", 1e9*r.BellInertia, bell, 1e-6)
	near1(t, "propeller's", 1e9*r.PropellerInertia, disc, 1e-6)
	near1(t, "both", 1e9*r.PolarInertia, bell+disc, 1e-6)
	near1(t, "spinning mass", r.SpinningMass, 20e-3, 1e-12)
	across := 14*(11.0*11/4+8.0*8/12) + 14*math.Pow(6-centre, 2) +
		16*((13.0*13+11*11)/4+14.0*14/12) + 16*math.Pow(12-centre, 2) + disc/2 + 4*math.Pow(24-centre, 2)
	near1(t, "about x", 1e9*body.Inertia[0], across, 1e-6)
	near1(t, "about z", 1e9*body.Inertia[2], 14*11.0*11/2+bell+disc, 1e-6)
}

// A cylinder lying along y, its centre of gravity off its middle.
func TestCylinder(t *testing.T) {
	a := mustBuild(t, `  size = ["50 mm", "30 mm", "20 mm"]
  turn = "90 deg"`, `  diameter = "24 mm"
  length   = "40 mm"
  axis     = "y"
  offset   = ["2 mm", "-3 mm"]`)
	for _, b := range a.Properties.Bodies {
		if b.Name != "battery" {
			continue
		}
		near3(t, "centre", b.Centre, vec{2e-3, -3e-3, (23 + 12) * 1e-3})
		near1(t, "about y", 1e9*b.Inertia[1], 60*12.0*12/2, 1e-6)
		near1(t, "about x", 1e9*b.Inertia[0], 60*(12.0*12/4+40.0*40/12), 1e-6)
		near1(t, "about z", b.Inertia[2], b.Inertia[0], 1e-15)
		pad := a.Geometry.Patches[patchNamed(t, a, "lump battery/pad")]
		if pad.Width != 24e-3 || pad.Height != 40e-3 {
			t.Errorf("pad %+v", pad)
		}
	}
}
