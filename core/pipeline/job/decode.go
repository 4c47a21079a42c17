package job

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// decoder turns one evaluated expression into the Go value of an argument.
type decoder struct {
	scope *scope
	self  string // label of the stage, not suggested to itself
	diags hcl.Diagnostics
	refs  []ArtifactRef
	// pending is set when a part is not known yet.
	pending bool
}

// at is where a value stands: the expression that gives it, as deep as the
// file spells it out, and the name of the place.
type at struct {
	name string
	expr hcl.Expression
	rng  hcl.Range
}

func atExpr(name string, expr hcl.Expression) at { return at{name, expr, expr.Range()} }

// element goes into a list that is spelled out.
func (p at) element(i, of int) at {
	q := at{fmt.Sprintf("%s[%d]", p.name, i), nil, p.rng}
	if p.expr != nil {
		if items, diags := hcl.ExprList(p.expr); !diags.HasErrors() && i >= 0 && i < of && len(items) == of {
			q.expr, q.rng = items[i], items[i].Range()
		}
	}
	return q
}

// member goes into an object that is spelled out; key is the place of its name.
func (p at) member(name string) (value at, key hcl.Range) {
	q, key := at{p.name + "." + name, nil, p.rng}, p.rng
	if p.expr != nil {
		if pairs, diags := hcl.ExprMap(p.expr); !diags.HasErrors() {
			for _, kv := range pairs {
				if k, diags := kv.Key.Value(nil); !diags.HasErrors() && k.IsKnown() && !k.IsNull() && k.Type() == cty.String && k.AsString() == name {
					q.expr, q.rng, key = kv.Value, kv.Value.Range(), kv.Key.Range()
				}
			}
		}
	}
	return q, key
}

func (d *decoder) wrong(rng hcl.Range, summary, format string, args ...any) {
	d.diags = append(d.diags, &hcl.Diagnostic{
		Severity: hcl.DiagError,
		Summary:  summary,
		Detail:   fmt.Sprintf(format, args...),
		Subject:  rng.Ptr(),
	})
}

// wrongType is the one message for a value of the wrong type.
func (d *decoder) wrongType(p at, v cty.Value, a stage.Argument, t stage.Type, hint string) any {
	text := fmt.Sprintf("%s takes %s, not %s", p.name, describeType(t), describeValue(v))
	switch {
	case hint != "":
		text += "; " + hint
	case a.Example != "" && a.Type.Kind == t.Kind:
		text += "; for example " + a.Example
	}
	d.wrong(p.rng, "Wrong type", "%s", text)
	return nil
}

// decode checks a value against a type and the bounds and choices of an
// argument, which hold for each element of a list. It gives nil after a
// mistake and for what is not known yet.
func (d *decoder) decode(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	if v.IsNull() {
		d.wrong(p.rng, "No value", "%s takes %s, but this has no value", p.name, describeType(t))
		return nil
	}
	vt := v.Type()
	if vt == cty.DynamicPseudoType {
		d.pending = true
		return nil
	}
	if _, ok := kindOf(vt); ok && t.Kind != stage.Artifact {
		hint := ""
		if t.Kind == stage.List && t.Element != nil && t.Element.Kind == stage.Artifact {
			hint = "put it in brackets"
		}
		return d.wrongType(p, v, a, t, hint)
	}
	switch t.Kind {
	case stage.Text, stage.File, stage.Target:
		return d.text(v, p, a, t)
	case stage.Number, stage.Whole:
		return d.number(v, p, a, t)
	case stage.Truth:
		if vt == cty.String && v.IsKnown() && (v.AsString() == "true" || v.AsString() == "false") {
			return d.wrongType(p, v, a, t, "leave the quotes out")
		}
		if vt != cty.Bool {
			return d.wrongType(p, v, a, t, "")
		}
		if !d.known(v) {
			return nil
		}
		return v.True()
	case stage.Amount:
		return d.amount(v, p, a, t)
	case stage.List:
		return d.list(v, p, a, t)
	case stage.Map:
		return d.mapping(v, p, a, t)
	case stage.Object:
		return d.object(v, p, t)
	case stage.Artifact:
		d.artifact(v, p, t)
		return nil
	}
	return d.any(v, p)
}

func (d *decoder) known(v cty.Value) bool {
	if !v.IsKnown() {
		d.pending = true
		return false
	}
	return true
}

func (d *decoder) text(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	if v.Type() != cty.String {
		hint := ""
		if v.Type() == cty.Number || v.Type() == cty.Bool {
			hint = "put it in quotes"
		} else if _, ok := dimensionOf(v.Type()); ok {
			hint = "write tostring(…) to make a text of it"
		}
		return d.wrongType(p, v, a, t, hint)
	}
	if !d.known(v) {
		return nil
	}
	s := v.AsString()
	if (t.Kind == stage.File || t.Kind == stage.Target) && strings.TrimSpace(s) == "" {
		d.wrong(p.rng, "Empty path", "%s takes %s, relative to the folder of the job file, but this is empty", p.name, describeType(t))
		return nil
	}
	if choices := d.scope.choices(a); len(choices) > 0 {
		for _, c := range choices {
			if c == s {
				return s
			}
		}
		why := ""
		if a.Extension != "" && d.scope.absent != nil {
			if err := d.scope.absent(a.Extension, s); err != nil {
				why = "\n" + detail(fault.From(err))
			}
		}
		d.wrong(p.rng, "Not a choice", "%s cannot be %s%s%s", p.name, short(strconv.Quote(s)), suggest(s, choices, "it is one of"), why)
		return nil
	}
	return s
}

func (d *decoder) number(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	if v.Type() != cty.Number {
		if err := quantityAsNumber(v); err != nil {
			unit := unitIn(stringOf(v))
			if dim, ok := dimensionOf(v.Type()); ok {
				unit = quantity.Natural(dim)
			}
			return d.wrongType(p, v, a, t, fmt.Sprintf("take number_in(…, %q) of a quantity", unit))
		}
		if _, err := strconv.ParseFloat(stringOf(v), 64); err == nil {
			return d.wrongType(p, v, a, t, "leave the quotes out")
		}
		return d.wrongType(p, v, a, t, "")
	}
	if !d.known(v) {
		return nil
	}
	x := float(v)
	if math.IsInf(x, 0) {
		d.wrong(p.rng, "Out of range", "%s is infinite or beyond the range of numbers", p.name)
		return nil
	}
	if t.Kind == stage.Whole && (x != math.Trunc(x) || math.Abs(x) > 1<<53) {
		d.wrong(p.rng, "Not a whole number", "%s takes a whole number, not %s", p.name, renderNumber(v.AsBigFloat()))
		return nil
	}
	show := func(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }
	if !d.inside(x, p, a, show) {
		return nil
	}
	return x
}

func stringOf(v cty.Value) string {
	if v.Type() == cty.String && v.IsKnown() && !v.IsNull() {
		return v.AsString()
	}
	return ""
}
