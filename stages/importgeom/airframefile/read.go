package airframefile

import (
	"sort"

	"github.com/zclconf/go-cty/cty"

	"hushframe/core/mechanics/airframe"
)

// read fills the file from its blocks.
func (p *parser) read(blocks map[string][]*block) {
	f := p.file
	for _, b := range blocks["airframe"] {
		f.Name, f.About = b.part.Name, b.text("about")
		f.AllUpMass = b.amount("all_up_mass", "mass", positive).Value
		f.LossFloor = b.amount("loss_floor", "number", share).Value
	}
	p.materials(blocks["material"])
	for _, b := range blocks["plate"] {
		f.Plates = append(f.Plates, b.plate())
	}
	for _, b := range blocks["copy"] {
		f.Copies = append(f.Copies, b.copy())
	}
	for _, b := range blocks["joint"] {
		f.Joints = append(f.Joints, b.joint())
	}
	for _, kind := range []airframe.ContactKind{airframe.Pressed, airframe.Seam, airframe.Key} {
		for _, b := range blocks[string(kind)] {
			f.Contacts = append(f.Contacts, b.contact(kind))
		}
	}
	f.Bolts = Bolts{Infer: true, Smallest: 2e-3, Largest: 5.5e-3, Gap: 0.2e-3}
	for _, b := range blocks["bolts"] {
		f.Bolts = b.bolts(f.Bolts)
	}
	for _, b := range blocks["bolt"] {
		f.Bolted = append(f.Bolted, b.bolt())
	}
	for _, b := range blocks["standoff"] {
		f.Standoffs = append(f.Standoffs, b.standoff())
	}
	for _, b := range blocks["rotor"] {
		f.Rotors = append(f.Rotors, b.rotor())
	}
	for _, b := range blocks["lump"] {
		f.Lumps = append(f.Lumps, b.lump("mount"))
	}
	for i, b := range blocks["gyro"] {
		l := b.lump("grommets")
		l.Gyro = true
		f.Lumps = append(f.Lumps, l)
		if i > 0 {
			b.fail(b.head(), "a second gyro; keep one")
		}
	}
	var all []string
	for kind := range blocks {
		all = append(all, kind)
	}
	sort.Strings(all)
	for _, kind := range all {
		if kind == "input" {
			continue // done, before there were references
		}
		for _, b := range blocks[kind] {
			b.finish()
		}
	}
	if p.diags.HasErrors() {
		return
	}
	if len(f.Plates) == 0 {
		p.diags = append(p.diags, wanting("the file describes no plate; add one as in plate \"bottom\" { outline = \"bottom.dxf\" ... }"))
	}
}

func (b *block) plate() Plate {
	b.need("outline", `"cut/arm.dxf"`)
	pl := Plate{
		Part:      b.part,
		Outline:   b.text("outline"),
		Layers:    b.texts("layer"),
		Units:     b.text("units"),
		Pick:      b.point("pick"),
		Tolerance: b.amount("tolerance", "length", positive),
		Fibre:     b.amount("fibre", "angle", anyNumber).Value,
		At:        b.vector("at"),
		Turn:      b.amount("turn", "angle", anyNumber).Value,
		Flip:      b.truth("flip", false),
	}
	if o := b.point("origin"); o != nil {
		pl.Origin = *o
	}
	if t := b.amounts("tilt", []string{"angle"}, 2); t != nil {
		pl.Tilt = [2]float64{t[0], t[1]}
	}
	if b.present("plies") {
		pl.Plies = b.plies()
		for _, other := range []string{"thickness", "material"} {
			if b.present(other) {
				b.fail(b.hcl.Body.Attributes[other].NameRange, "%s and plies are both given; keep one of them", other)
			}
		}
		for _, ply := range pl.Plies {
			pl.Thickness += ply.Thickness
		}
	}
	b.asked = append(b.asked, "plies")
	if !b.present("plies") {
		pl.Thickness = b.must("thickness", "length", positive)
		b.need("material", `"carbon-0-90"`)
		pl.Material = b.text("material")
		b.checkMaterial("material", pl.Material)
	} else {
		b.asked = append(b.asked, "thickness", "material")
	}
	return pl
}

func (b *block) plies() []airframe.Ply {
	v, at, ok := b.value("plies")
	if !ok {
		return nil
	}
	all, ok := b.list("plies", v, at)
	if !ok {
		return nil
	}
	if len(all) == 0 {
		b.fail(at, "plies is an empty list")
	}
	var out []airframe.Ply
	for _, e := range all {
		if !e.Type().IsObjectType() && !e.Type().IsMapType() {
			b.fail(at, `plies: each is { material = "...", thickness = "0.25 mm", angle = "45 deg" }`)
			return nil
		}
		var ply airframe.Ply
		fields := e.AsValueMap()
		for _, name := range sortedKeys(fields) {
			v, ok := fields[name], true
			switch name {
			case "material":
				if v.Type() != cty.String || v.IsNull() {
					b.fail(at, "plies: material is a name in quotes")
					return nil
				}
				ply.Material = v.AsString()
				b.checkMaterial("plies", ply.Material)
			case "thickness":
				ply.Thickness, ok = b.amountOf("plies: thickness", v, at, "length", positive)
			case "angle":
				ply.Angle, ok = b.amountOf("plies: angle", v, at, "angle", anyNumber)
			default:
				b.fail(at, "plies: there is no attribute %q%s", name, suggest(name, []string{"material", "thickness", "angle"}))
				return nil
			}
			if !ok {
				return nil
			}
		}
		if ply.Material == "" || ply.Thickness == 0 {
			b.fail(at, "plies: material and thickness are due for each")
			return nil
		}
		out = append(out, ply)
	}
	return out
}

func sortedKeys[V any](m map[string]V) []string {
	var keys []string
	for k := range m {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	return keys
}

func (b *block) copy() Copy {
	b.need("of", "plate.NAME")
	c := Copy{Part: b.part, Of: b.refer("of", "plate"), Turn: b.amount("turn", "angle", anyNumber).Value, Move: b.vector("move")}
	if o := b.point("centre"); o != nil {
		c.Centre = *o
	}
	for _, axis := range b.texts("mirror") {
		i := map[string]int{"x": 1, "y": 2, "z": 3}[axis]
		if i == 0 {
			b.fail(b.hcl.Body.Attributes["mirror"].Expr.Range(), "mirror: %q is no axis; the axes are x, y, z", axis)
			continue
		}
		c.Mirror[i-1] = !c.Mirror[i-1]
	}
	if c.Of == b.part.Name && c.Of != "" {
		b.fail(b.head(), "it is a copy of itself")
	}
	return c
}

func (b *block) fastening() Fastening {
	return Fastening{
		Clamp: b.amount("clamp", "length", positive),
		Mass:  b.amount("mass", "mass", notNegative),
		Joint: b.refer("joint", "joint"),
	}
}

func (b *block) bolts(d Bolts) Bolts {
	out := Bolts{
		Part:      b.part,
		Infer:     b.truth("infer", true),
		Smallest:  b.amount("smallest", "length", positive).Or(d.Smallest),
		Largest:   b.amount("largest", "length", positive).Or(d.Largest),
		Gap:       b.amount("gap", "length", positive).Or(d.Gap),
		Fastening: b.fastening(),
		Remove:    b.texts("remove"),
	}
	if out.Smallest > out.Largest {
		b.fail(b.head(), "smallest is above largest")
	}
	if v, at, ok := b.value("change"); ok {
		out.Change = map[string]Fastening{}
		if !v.Type().IsObjectType() && !v.Type().IsMapType() {
			b.fail(at, `change is a map, as in change = { "bolt-1" = { mass = "2 g" } }`)
			return out
		}
		changes := v.AsValueMap()
		for _, name := range sortedKeys(changes) {
			var f Fastening
			e := changes[name]
			if e.IsNull() || !e.Type().IsObjectType() && !e.Type().IsMapType() {
				b.fail(at, `change: each is { clamp = "8 mm", mass = "2 g", joint = joint.NAME }`)
				return out
			}
			fields := e.AsValueMap()
			for _, k := range sortedKeys(fields) {
				switch k {
				case "clamp":
					f.Clamp.Value, f.Clamp.Given = b.amountOf("change: clamp", fields[k], at, "length", positive)
				case "mass":
					f.Mass.Value, f.Mass.Given = b.amountOf("change: mass", fields[k], at, "mass", notNegative)
				case "joint":
					f.Joint = b.referOf("change: joint", fields[k], at, "joint")
				default:
					b.fail(at, "change: there is no attribute %q%s", k, suggest(k, []string{"clamp", "mass", "joint"}))
				}
			}
			out.Change[name] = f
		}
	}
	return out
}

func (b *block) bolt() Bolt {
	b.need("through", "[plate.bottom, plate.top]")
	out := Bolt{Part: b.part, Through: b.refers("through", "plate"), Places: b.places(),
		Hole: b.amount("hole", "length", positive), Fastening: b.fastening()}
	if len(out.Through) == 1 {
		b.fail(b.head(), "through names one plate; a bolt joins two or more")
	}
	return out
}

func (b *block) standoff() Standoff {
	b.need("between", "[plate.bottom, plate.top]")
	out := Standoff{
		Part:      b.part,
		Places:    b.places(),
		Outer:     b.must("outer", "length", positive),
		Inner:     b.amount("inner", "length", notNegative).Value,
		Clamp:     b.amount("clamp", "length", positive),
		ScrewMass: b.amount("screw_mass", "mass", notNegative).Value,
	}
	b.need("material", `"aluminium"`)
	out.Material = b.text("material")
	b.checkMaterial("material", out.Material)
	plates := b.refers("between", "plate")
	switch {
	case len(plates) == 2:
		out.Between = [2]string{plates[0], plates[1]}
	case plates != nil:
		b.fail(b.head(), "between names %d plates; a standoff stands between two", len(plates))
	}
	if out.Outer > 0 && out.Inner >= out.Outer {
		b.fail(b.head(), "the inner diameter is not below the outer one")
	}
	return out
}
