package airframefile

import (
	"math"

	"hushframe/core/mechanics/airframe"
)

var components = [6]string{"x", "y", "z", "rx", "ry", "rz"}

func stiffnessDimension(i int) string {
	if i > 2 {
		return "rotational stiffness"
	}
	return "stiffness"
}

func (b *block) joint() Joint {
	j := Joint{Part: b.part, Joint: airframe.Joint{Name: b.part.Name, Preload: b.amount("preload", "force", notNegative).Value, Origin: b.text("origin")}}
	j.LossFactor, j.Low, j.High = b.lossAndRange()
	j.Screw = b.amount("screw", "length", positive)
	j.ScrewMaterial = b.text("screw_material")
	if j.ScrewMaterial == "" {
		j.ScrewMaterial = "steel"
	} else {
		b.checkMaterial("screw_material", j.ScrewMaterial)
	}
	j.Bearing = b.word("grip", "friction", "bearing") == "bearing"
	if !j.Screw.Given {
		for _, name := range []string{"screw_material", "grip"} {
			if b.present(name) {
				b.fail(b.hcl.Body.Attributes[name].NameRange, "%s says how the stiffness follows from plates and screw; give screw = \"3 mm\" as well", name)
			}
		}
	}
	for i, c := range components {
		k, most := b.amount(c, stiffnessDimension(i), positive), stiffest
		if i > 2 {
			most = stiffestTurn
		}
		b.yields(c, k.Value, most, "leave it out where the joint is rigid")
		j.Stiffness[i] = k.Or(math.Inf(1))
	}
	return j
}

// lossAndRange reads the loss factor and the range of a common factor on the stiffness, by low and high or by one
// factor either way.
func (b *block) lossAndRange() (loss, low, high float64) {
	loss = b.amount("loss_factor", "number", lossy).Value
	low, high = b.amount("low", "number", positive).Value, b.amount("high", "number", positive).Value
	factor := b.amount("within_factor", "number", bound{"must be 1 or more", func(x float64) bool { return x >= 1 }})
	switch {
	case factor.Given && (b.present("low") || b.present("high")):
		b.fail(b.hcl.Body.Attributes["within_factor"].NameRange, "within_factor and low or high are both given; keep one kind of range")
	case factor.Given:
		low, high = 1/factor.Value, factor.Value
	case low > 0 && high > 0 && low > high:
		b.fail(b.head(), "low is above high")
	case (low > 0) != (high > 0) && !b.p.diags.HasErrors():
		b.fail(b.head(), "one end of the range is missing; give low and high, or within_factor = 3")
	}
	return loss, low, high
}

// contact reads a block pressed, seam or key.
func (b *block) contact(kind airframe.ContactKind) Contact {
	c := Contact{Part: b.part, Sort: kind, Origin: b.text("origin")}
	c.LossFactor, c.Low, c.High = b.lossAndRange()
	if kind == airframe.Pressed {
		b.pressed(&c)
		return c
	}
	b.need("between", "[plate.fin, plate.top]")
	c.Plates = b.refers("between", "plate")
	if c.Plates != nil && len(c.Plates) != 2 {
		b.fail(b.head(), "between names %d plates; a %s ties two", len(c.Plates), kind)
	}
	example, lengths := `["0 mm", "5 mm"]`, []int{2, 3}
	if kind == airframe.Seam {
		example, lengths = `["0 mm", "5 mm", "30 mm"]`, []int{3}
	}
	for i, name := range []string{"from", "to"} {
		b.need(name, example)
		x := b.amounts(name, length, lengths...)
		copy([]*airframe.Vec{&c.From, &c.To}[i][:], x)
		c.Flat = c.Flat || len(x) == 2
	}
	if c.From == c.To && b.present("from") && b.present("to") {
		b.fail(b.head(), "from and to are the same place; a %s has a length", kind)
	}
	if kind == airframe.Key {
		c.Stiffness[0] = b.must("stiffness", "stiffness", positive)
		b.yields("stiffness", c.Stiffness[0], stiffest, "give what the flank yields with")
		return c
	}
	b.seam(&c)
	return c
}

func (b *block) seam(c *Contact) {
	if k := b.amounts("stiffness", []string{"stiffness"}, 3); k != nil {
		for _, x := range k {
			if !(x > 0) {
				b.fail(b.hcl.Body.Attributes["stiffness"].Expr.Range(), "stiffness along, across and square to the face must be positive")
				return
			}
		}
		b.yields("stiffness", max(k[0], k[1], k[2]), stiffest, "give what the glue yields with")
		c.Stiffness = [3]float64(k)
	}
	g := b.inside("glue")
	switch {
	case g == nil && !b.present("stiffness"):
		b.fail(b.head(), `its stiffness is missing; give glue { modulus = "2 GPa", thickness = "0.2 mm", width = "2 mm" } or stiffness`)
	case g != nil && b.present("stiffness"):
		b.fail(b.head(), "glue and stiffness are both given; keep one of them")
	case g != nil:
		c.Glue = &Glue{Modulus: g.must("modulus", "pressure", positive), Poisson: g.amount("nu", "number", bound{"must lie between 0 and 0.5", func(x float64) bool { return x >= 0 && x < 0.5 }}).Or(0.35),
			Thickness: g.must("thickness", "length", positive), Width: g.must("width", "length", positive)}
		g.finish()
	}
}

func (b *block) pressed(c *Contact) {
	b.need("plates", "[plate.bottom, plate.arm, plate.clamp]")
	c.Plates = b.refers("plates", "plate")
	if c.Plates != nil && len(c.Plates) < 2 {
		b.fail(b.head(), "plates names one plate; two or more are pressed together")
	}
	c.At, c.Diameter = b.point("at"), b.amount("diameter", "length", positive)
	c.Turn = b.amount("turn", "angle", anyNumber).Value
	if s := b.amounts("size", length, 2); s != nil {
		if !(s[0] > 0 && s[1] > 0) {
			b.fail(b.hcl.Body.Attributes["size"].Expr.Range(), "size: both must be positive")
		}
		c.Size = (*[2]float64)(s)
	}
	switch {
	case c.Size != nil && c.Diameter.Given:
		b.fail(b.head(), "size and diameter are both given; keep one shape")
	case (c.Size != nil || c.Diameter.Given) && c.At == nil && !b.present("at"):
		b.fail(b.head(), `the shape has no place; give at = ["0 mm", "0 mm"]`)
	case c.At != nil && c.Size == nil && !c.Diameter.Given && !b.present("size"):
		b.fail(b.head(), "the shape has no size; give size or diameter, or leave out at for wherever the plates overlap")
	}
	c.Bonded = b.word("faces", "bonded", "normal-only") != "normal-only"
	c.Normal = b.amount("normal", "bedding stiffness", positive)
	c.Shear = b.amount("shear", "bedding stiffness", positive)
	const halves = "leave it out for what the halves of the plates yield with"
	b.yields("normal", c.Normal.Value, stiffestFaces, halves)
	b.yields("shear", c.Shear.Value, stiffestFaces, halves)
	if c.Shear.Given && !c.Bonded {
		b.fail(b.hcl.Body.Attributes["shear"].NameRange, "shear is given and faces are normal-only, which slide freely")
	}
}
