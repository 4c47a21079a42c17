package airframefile

import (
	"errors"
	"fmt"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/pipeline/quantity"
	"hushframe/stages/importgeom/materials"
)

// materials reads the material blocks in order; `like` may name one above or one of the table.
func (p *parser) materials(blocks []*block) {
	p.file.Materials = map[string]airframe.Material{}
	for _, b := range blocks {
		p.file.Materials[b.part.Name] = b.material()
	}
}

// known finds a material of the file or the table.
func (p *parser) known(name string) (airframe.Material, bool) {
	if m, ok := p.file.Materials[name]; ok {
		return m, true
	}
	return materials.Find(name)
}

func (p *parser) materialNames() []string {
	names := materials.Names()
	for _, n := range sortedKeys(p.file.Materials) {
		if !contains(names, n) {
			names = append(names, n)
		}
	}
	return names
}

func (b *block) checkMaterial(attribute, name string) {
	if name == "" {
		return
	}
	if _, ok := b.p.known(name); !ok {
		b.fail(b.hcl.Body.Attributes[attribute].Expr.Range(), "there is no material %q%s", name, suggest(name, b.p.materialNames()))
	}
}

func (b *block) material() airframe.Material {
	name := b.part.Name
	base, based := b.p.known(name)
	if like := b.text("like"); like != "" {
		b.checkMaterial("like", like)
		base, based = b.p.known(like)
	}
	stiff := []string{"E1", "E2", "G12", "G13", "G23"}
	modulus := map[string]Opt{}
	for _, n := range append([]string{"E"}, stiff...) {
		modulus[n] = b.amount(n, "pressure", anyNumber)
	}
	nu, nu12 := b.amount("nu", "number", anyNumber), b.amount("nu12", "number", anyNumber)
	m := base
	m.Name = name
	m.E3 = b.amount("E3", "pressure", positive).Or(base.E3)
	m.Density = b.amount("density", "density", anyNumber).Or(base.Density)
	m.LossFactor = b.amount("loss_factor", "number", share).Or(base.LossFactor)
	m.Scatter = b.amount("scatter", "number", share).Or(base.Scatter)
	directed := nu12.Given
	for _, n := range stiff {
		directed = directed || modulus[n].Given
	}
	simple := modulus["E"].Given || nu.Given
	switch {
	case simple && directed:
		b.fail(b.head(), "E and nu are of an isotropic material, E1, E2, G12, nu12, G13, G23 of one with directions; give one kind")
	case simple:
		if based && !base.Isotropic && !(modulus["E"].Given && nu.Given) {
			b.fail(b.head(), "the material it is like has directions; give both E and nu to make it isotropic")
		}
		e, v := modulus["E"].Or(base.E1), nu.Or(base.Nu12)
		g := e / (2 * (1 + v))
		m.E1, m.E2, m.Nu12, m.G12, m.G13, m.G23, m.Isotropic = e, e, v, g, g, g, true
		if !b.present("E3") {
			m.E3 = e
		}
	case directed:
		m.Isotropic = false
		m.E1 = modulus["E1"].Or(base.E1)
		m.E2 = modulus["E2"].Or(base.E2)
		m.Nu12 = nu12.Or(base.Nu12)
		m.G12 = modulus["G12"].Or(base.G12)
		g13, g23 := base.G13, base.G23
		if !based {
			g13, g23 = m.G12, m.G12
		}
		m.G13, m.G23 = modulus["G13"].Or(g13), modulus["G23"].Or(g23)
	}
	if simple || modulus["E1"].Given || modulus["E2"].Given {
		m.Typical = false
		m.Origin = "airframe file"
		if based && directed {
			m.Origin = fmt.Sprintf("airframe file; the rest as %s", base.Name)
		}
	}
	if s := b.text("origin"); s != "" {
		m.Origin = s
	}
	b.checkConstants(m, based, simple, directed)
	return m
}

// checkConstants refuses what no stable material has. It stays silent where a wrong value has been reported.
func (b *block) checkConstants(m airframe.Material, based, simple, directed bool) {
	if b.p.diags.HasErrors() && b.reported() {
		return
	}
	if !based && !simple && !directed {
		b.fail(b.head(), "its moduli are missing; give E and nu, or E1, E2, G12 and nu12, or like = \"carbon-0-90\"")
		return
	}
	var missing []string
	for _, c := range []struct {
		name string
		x    float64
	}{{"E1", m.E1}, {"E2", m.E2}, {"G12", m.G12}, {"density", m.Density}} {
		given := b.present(c.name) || c.name[0] != 'd' && b.present("E")
		if c.x == 0 && !given && !based {
			missing = append(missing, c.name)
		}
	}
	if len(missing) > 0 {
		b.fail(b.head(), "%s is missing", missing[0])
		return
	}
	var err error
	if m.Isotropic {
		err = laminate.CheckIsotropic(m.E1, m.Nu12, m.Density)
	} else {
		err = laminate.Material{E1: m.E1, E2: m.E2, Nu12: m.Nu12, G12: m.G12, G13: m.G13, G23: m.G23, Density: m.Density}.Check()
	}
	var bad *laminate.ConstantError
	if !errors.As(err, &bad) {
		return
	}
	at := b.head()
	if a, ok := b.hcl.Body.Attributes[bad.Constant]; ok {
		at = a.Expr.Range()
	}
	value := fmt.Sprintf("%g", bad.Value)
	switch bad.Constant {
	case "nu", "nu12":
	case "density":
		value = quantity.Format(bad.Value, "density", "")
	default:
		value = quantity.Format(bad.Value, "pressure", "")
	}
	b.fail(at, "%s is %s, which no material has: it %s", bad.Constant, value, bad.Bound)
}

// reported tells whether a mistake within this block has been reported.
func (b *block) reported() bool {
	r := b.hcl.Body.Range()
	for _, d := range b.p.diags {
		if d.Subject != nil && d.Subject.Start.Line >= b.part.Line && d.Subject.End.Line <= r.End.Line {
			return true
		}
	}
	return false
}

// wanting is a mistake of the file as a whole.
func wanting(text string) *hcl.Diagnostic {
	return &hcl.Diagnostic{Severity: hcl.DiagError, Detail: text}
}
