package airframefile

import (
	"math"

	"github.com/zclconf/go-cty/cty"

	"hushframe/core/mechanics/airframe"
	"hushframe/stages/importgeom/mounts"
)

func (b *block) mount(kind string) *Mount {
	m := &Mount{
		Part:    b.part,
		Word:    "grommet",
		Height:  b.amount("height", "length", notNegative).Value,
		Pad:     b.amount("pad", "length", positive),
		Preload: b.amount("preload", "force", notNegative).Value,
		Origin:  "airframe file",
	}
	if kind == "mount" {
		m.Word = "mount"
	}
	typical, based := mounts.Mount{}, false
	if like := b.text("like"); like != "" {
		if typical, based = mounts.Find(like); !based {
			b.fail(b.hcl.Body.Attributes["like"].Expr.Range(), "there is no typical mount %q%s", like, suggest(like, mounts.Names()))
		}
		m.Word, m.Law, m.Origin = typical.Kind, typical.Law, typical.Origin()
		copy(m.Stiffness[:], typical.Stiffness[:])
		copy(m.Loss[:], typical.Loss[:])
	}
	if s := b.text("kind"); s != "" {
		m.Word = s
	}
	b.need("places", `[["15 mm", "15 mm"], ...]`)
	if v, at, ok := b.value("places"); ok {
		if n := v.Type(); n.IsTupleType() && v.LengthInt() == 0 {
			b.fail(at, "places is empty, so that the mount is attached to nothing; name where its springs stand")
		} else {
			m.Places = b.points("places", v, at)
		}
	}
	b.mountStiffness(m, typical, b.present("like"))
	b.mountLoss(m)
	b.law(m)
	own := b.present("stiffness") || b.present("loss_factor")
	for _, kind := range []airframe.LawKind{airframe.Fractional, airframe.Solid, airframe.Table} {
		own = own || b.inside(string(kind)) != nil
	}
	if based && own {
		m.Origin = "airframe file; what it does not give as " + typical.Name
	}
	if s := b.text("origin"); s != "" {
		m.Origin = s
	}
	b.finish()
	return m
}

// mountStiffness reads three or six components; of a typical mount three are known.
func (b *block) mountStiffness(m *Mount, typical mounts.Mount, like bool) {
	if !like {
		b.need("stiffness", `["30 N/mm", "30 N/mm", "60 N/mm"], or like = "grommet-silicone-firm"`)
	}
	dimensions := make([]string, 6)
	for i := range dimensions {
		dimensions[i] = stiffnessDimension(i)
	}
	k := b.amounts("stiffness", dimensions, 3, 6)
	at := b.head()
	if k != nil {
		m.Stiffness = [6]float64{}
		copy(m.Stiffness[:], k)
		at = b.hcl.Body.Attributes["stiffness"].Expr.Range()
	} else if typical.Name != "" {
		k = typical.Stiffness[:]
	}
	if k != nil {
		b.checkSprings(k, len(m.Places), at)
	}
}

// mountLoss reads one loss factor for all components, three or six.
func (b *block) mountLoss(m *Mount) {
	v, at, ok := b.value("loss_factor")
	if !ok {
		return
	}
	if v.Type() == cty.Number {
		if x, ok := b.amountOf("loss_factor", v, at, "number", lossy); ok {
			m.Loss = [6]float64{x, x, x, x, x, x}
		}
		return
	}
	all := b.amountsOf("loss_factor", v, at, []string{"number"}, 3, 6)
	for _, x := range all {
		if !lossy.holds(x) {
			b.fail(at, "loss_factor is %g and %s", x, lossy.text)
			return
		}
	}
	m.Loss = [6]float64{}
	copy(m.Loss[:], all)
}

// law reads how the stiffness depends on frequency, of which there may be one block.
func (b *block) law(m *Mount) {
	given := ""
	for _, kind := range []airframe.LawKind{airframe.Fractional, airframe.Solid, airframe.Table} {
		l := b.inside(string(kind))
		if l == nil {
			continue
		}
		if given != "" {
			b.fail(l.head(), "both %s and %s are given; keep one law", given, kind)
		}
		given = string(kind)
		m.Law = airframe.Law{Kind: kind}
		switch kind {
		case airframe.Fractional:
			m.Law.Reference, m.Law.Order = l.must("at", "frequency", positive), l.must("order", "number", positive)
		case airframe.Solid:
			m.Law.Reference = l.must("at", "frequency", positive)
			m.Law.Rise, m.Law.PeakAt = l.must("rise", "number", positive), l.must("peak_at", "frequency", positive)
		case airframe.Table:
			m.Law.Frequency = l.row("frequency", "frequency", `["20 Hz", "200 Hz"]`)
			m.Law.Storage = l.row("storage", "number", "[1, 1.4]")
			m.Law.Loss = l.row("loss_factor", "number", "[0.1, 0.15]")
		}
		broken := l.p.diags.HasErrors() && l.reported()
		l.finish()
		if broken {
			return
		}
		for c, k := range m.Stiffness {
			law := m.Law
			law.LossFactor = m.Loss[c]
			if err := law.Check(); err != nil && (k != 0 || kind != airframe.Fractional) {
				b.fail(l.head(), "%s: %v", kind, err)
				return
			}
		}
	}
	if given != "" && given != string(airframe.Fractional) && b.present("loss_factor") {
		b.fail(b.hcl.Body.Attributes["loss_factor"].NameRange, "loss_factor and %s are both given: a %s brings its own loss", given, given)
	}
}

// row reads a list of any length.
func (b *block) row(name, dimension, example string) []float64 {
	b.need(name, example)
	v, at, ok := b.value(name)
	if !ok {
		return nil
	}
	all, ok := b.list(name, v, at)
	if !ok {
		return nil
	}
	out := make([]float64, len(all))
	for i, e := range all {
		if out[i], ok = b.amountOf(name, e, at, dimension, bound{"must be finite", func(x float64) bool { return !math.IsInf(x, 0) }}); !ok {
			return nil
		}
	}
	return out
}
