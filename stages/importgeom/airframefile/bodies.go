package airframefile

import (
	"github.com/hashicorp/hcl/v2"
)

func (b *block) lowerSide() bool { return b.word("side", "upper", "lower") == "lower" }

// inertia reads three or six elements of the tensor about the centre of gravity.
func (b *block) inertia() []float64 {
	v := b.amounts("inertia", []string{"inertia"}, 3, 6)
	for i := 0; i < len(v) && i < 3; i++ {
		// Each principal moment is below the sum of the other two, and so is each diagonal element.
		if rest := v[(i+1)%3] + v[(i+2)%3]; !(v[i] > 0) || v[i] > rest*(1+1e-9) {
			b.fail(b.hcl.Body.Attributes["inertia"].Expr.Range(), "inertia: no body has this; xx, yy, zz are positive and none exceeds the sum of the others")
			return nil
		}
	}
	return v
}

func (b *block) on() string {
	b.need("on", "plate.NAME")
	return b.refer("on", "plate")
}

func (b *block) rotor() Rotor {
	r := Rotor{
		Part:              b.part,
		On:                b.on(),
		Lower:             b.lowerSide(),
		At:                b.point("at"),
		Base:              b.amount("base", "length", positive),
		Mass:              b.must("mass", "mass", positive),
		Height:            b.must("height", "length", notNegative),
		Diameter:          b.amount("diameter", "length", positive),
		Length:            b.amount("length", "length", positive),
		Inertia:           b.inertia(),
		HubHeight:         b.amount("hub_height", "length", notNegative),
		PropellerMass:     b.amount("propeller_mass", "mass", notNegative),
		PropellerDiameter: b.amount("propeller_diameter", "length", positive),
		PolarInertia:      b.amount("polar_inertia", "inertia", positive),
		SpinningMass:      b.amount("spinning_mass", "mass", positive),
		Blades:            b.amount("blades", "number", bound{"must be a whole number from 1 to 12", func(x float64) bool { return x >= 1 && x <= 12 && x == float64(int(x)) }}),
		HoverSpeed:        b.must("hover_speed", "rotational speed", positive),
		MaxSpeed:          b.must("max_speed", "rotational speed", positive),
		Grade:             b.amount("balance_grade", "speed", notNegative),
	}
	b.need("spin", `"counterclockwise"`)
	switch b.word("spin", "counterclockwise", "clockwise") {
	case "counterclockwise":
		r.Spin = 1
	case "clockwise":
		r.Spin = -1
	}
	if r.HoverSpeed > r.MaxSpeed && r.MaxSpeed > 0 {
		b.fail(b.head(), "hover_speed is above max_speed")
	}
	if r.SpinningMass.Value > r.Mass+r.PropellerMass.Value {
		b.fail(b.head(), "spinning_mass is above the mass of motor and propeller")
	}
	return r
}

// lump reads a body; mount is the name of its block of springs.
func (b *block) lump(mount string) Lump {
	l := Lump{
		Part:    b.part,
		On:      b.on(),
		Lower:   b.lowerSide(),
		Mass:    b.must("mass", "mass", positive),
		Turn:    b.amount("turn", "angle", anyNumber).Value,
		Lift:    b.amount("lift", "length", notNegative).Value,
		Height:  b.amount("height", "length", notNegative),
		Inertia: b.inertia(),
	}
	b.need("at", `["-5 mm", "0 mm"]`)
	if p := b.point("at"); p != nil {
		l.At = *p
	}
	b.need("size", `["75 mm", "36 mm", "32 mm"]`)
	l.Size = b.vector("size")
	if b.present("size") && l.Size != [3]float64{} && !(l.Size[0] > 0 && l.Size[1] > 0 && l.Size[2] > 0) {
		b.fail(b.hcl.Body.Attributes["size"].Expr.Range(), "size: all three must be positive")
	}
	if p := b.amounts("pad", length, 2); p != nil {
		if !(p[0] > 0 && p[1] > 0) {
			b.fail(b.hcl.Body.Attributes["pad"].Expr.Range(), "pad: both must be positive")
		}
		l.Pad = &[2]float64{p[0], p[1]}
	}
	if m := b.inside(mount); m != nil {
		if b.present("pad") {
			b.fail(b.hcl.Body.Attributes["pad"].NameRange, "pad and %s are both given: a body on springs is not tied to the plate; pad within %s is the foot of each spring", mount, mount)
		}
		l.Mount = m.mount(mount)
	}
	return l
}

// checkSprings refuses springs that leave the body loose: each direction needs stiffness, and one place without
// rotational stiffness holds no rotation.
func (b *block) checkSprings(k []float64, places int, at hcl.Range) {
	for i, x := range k {
		if x < 0 || i < 3 && x == 0 {
			b.fail(at, "stiffness along x, y, z must be positive, and about them not negative")
			return
		}
	}
	if places == 1 && (len(k) == 3 || k[3] == 0 || k[4] == 0 || k[5] == 0) {
		b.fail(at, "one spring without rotational stiffness lets the body turn freely; give six components or more places")
	}
	if places == 2 && (len(k) == 3 || k[3] == 0 && k[4] == 0) {
		b.fail(at, "two springs without rotational stiffness let the body turn about the line between them; give six components or more places")
	}
}
