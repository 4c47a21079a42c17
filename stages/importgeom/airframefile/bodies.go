package airframefile

import (
	"github.com/hashicorp/hcl/v2"

	"hushframe/core/mechanics/airframe"
)

func (b *block) lowerSide() bool { return b.word("side", "upper", "lower") == "lower" }

// inertia reads three or six elements of the tensor about the centre of gravity.
func (b *block) inertia() []float64 {
	v := b.amounts("inertia", []string{"inertia"}, 3, 6)
	if v == nil {
		return nil
	}
	at := b.hcl.Body.Attributes["inertia"].Expr.Range()
	for i := range 3 {
		// Each principal moment is below the sum of the other two, and so is each diagonal element.
		if rest := v[(i+1)%3] + v[(i+2)%3]; !(v[i] > 0) || v[i] > rest*(1+1e-9) {
			b.fail(at, "inertia: no body has this; xx, yy, zz are positive and none exceeds the sum of the others")
			return nil
		}
	}
	var t [6]float64
	copy(t[:], v)
	if err := airframe.CheckInertia(t); err != nil {
		b.fail(at, "inertia: no body has this: %v; see whether xy, xz, yz are the elements of the tensor, minus the products of inertia", err)
		return nil
	}
	return v
}

// solid reads the bell or the stator of a motor.
func (b *block) solid(name string) *Solid {
	in := b.inside(name)
	if in == nil {
		return nil
	}
	s := &Solid{
		Mass:     in.must("mass", "mass", positive),
		Height:   in.must("height", "length", notNegative),
		Diameter: in.amount("diameter", "length", positive).Value,
		Inner:    in.amount("inner", "length", notNegative).Value,
		Length:   in.amount("length", "length", positive).Value,
		Inertia:  in.inertia(),
	}
	if !in.present("inertia") {
		in.need("diameter", `"28 mm"`)
		in.need("length", `"18 mm"`)
		if s.Diameter > 0 && s.Inner >= s.Diameter {
			in.fail(in.hcl.Body.Attributes["inner"].Expr.Range(), "the inner diameter is not below the outer one")
		}
	}
	in.finish()
	return s
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
		Mass:              b.amount("mass", "mass", positive).Value,
		Height:            b.amount("height", "length", notNegative).Value,
		Bell:              b.solid("bell"),
		Stator:            b.solid("stator"),
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
	b.motor(&r)
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
	// Nothing of that mass within that radius has more, were all of it at the rim.
	mass, radius := r.Mass+r.PropellerMass.Value, max(r.PropellerDiameter.Or(widestPropeller), r.Diameter.Value)/2
	if most := mass * radius * radius; mass > 0 && r.PolarInertia.Value > most {
		b.fail(b.hcl.Body.Attributes["polar_inertia"].Expr.Range(), "polar_inertia is %.3g kg*mm^2, and %.3g g within a radius of %.3g mm have at most %.3g", 1e6*r.PolarInertia.Value, 1e3*mass, 1e3*radius, 1e6*most)
	}
	return r
}

// widestPropeller is the diameter of a propeller that is not given, m, in checks of what is possible.
const widestPropeller = 1

// motor holds the motor to be given whole or as bell and stator.
func (b *block) motor(r *Rotor) {
	if r.Bell == nil && r.Stator == nil {
		b.need("mass", `"33 g"`)
		b.need("height", `"12 mm"`)
		return
	}
	if r.Bell == nil || r.Stator == nil {
		b.fail(b.head(), "bell and stator are due together: what spins and what does not")
		return
	}
	for _, name := range []string{"mass", "height", "diameter", "length", "inertia", "polar_inertia", "spinning_mass"} {
		if b.present(name) {
			b.fail(b.hcl.Body.Attributes[name].NameRange, "%s is given beside bell and stator, from which it follows", name)
		}
	}
	r.Mass = r.Bell.Mass + r.Stator.Mass
	if r.Mass > 0 {
		r.Height = (r.Bell.Mass*r.Bell.Height + r.Stator.Mass*r.Stator.Height) / r.Mass
	}
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
	l.Diameter = b.amount("diameter", "length", positive)
	along := b.amount("length", "length", positive)
	l.Axis = map[string]int{"x": 0, "y": 1, "": 2, "z": 2}[b.word("axis", "x", "y", "z")]
	if o := b.amounts("offset", length, 2); o != nil {
		l.Offset = [2]float64(o)
	}
	b.body(&l, along)
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

// body reads the shape: a box, or a cylinder whose box encloses it.
func (b *block) body(l *Lump, along Opt) {
	cylinder := b.present("diameter") || b.present("length") || b.present("axis")
	if !cylinder {
		b.need("size", `["75 mm", "36 mm", "32 mm"], or a cylinder: diameter = "20 mm", length = "30 mm"`)
		l.Size = b.vector("size")
		return
	}
	b.asked = append(b.asked, "size")
	if b.present("size") {
		b.fail(b.hcl.Body.Attributes["size"].NameRange, "size and diameter are both given: the body is a box or a cylinder")
	}
	b.need("diameter", `"20 mm"`)
	b.need("length", `"30 mm"`)
	d := l.Diameter.Value
	l.Size = airframe.Vec{d, d, d}
	l.Size[l.Axis] = along.Value
}

// checkSprings refuses springs that leave the body loose: each direction needs stiffness, and one place without
// rotational stiffness holds no rotation.
func (b *block) checkSprings(k []float64, places int, at hcl.Range) {
	for i, x := range k {
		if x < 0 || i < 3 && x == 0 {
			b.fail(at, "stiffness along x, y, z must be positive, and about them not negative")
			return
		}
		if i < 3 && x > stiffest || i > 2 && x > stiffestTurn {
			b.fail(at, "stiffness is above 1e7 kN/mm or 1e9 N*m/rad; leave out the springs of a body that is tied rigidly")
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
