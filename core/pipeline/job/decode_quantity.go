package job

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

func (d *decoder) amount(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	var q stage.Quantity
	switch dimension, ok := dimensionOf(v.Type()); {
	case ok:
		if !quantity.Same(dimension, t.Dimension) {
			text := ""
			if x, known := Quantity(v); known {
				text = quantity.Exact(x)
			}
			return d.wrongDimension(p, text, dimension, a, t)
		}
		if !d.known(v) {
			return nil
		}
		q, _ = Quantity(v)
	case v.Type() == cty.String:
		if !d.known(v) {
			return nil
		}
		var err error
		if q, err = quantity.ParseAs(v.AsString(), t.Dimension); err != nil {
			d.wrong(p.rng, "Wrong quantity", "%s: %s", p.name, ownExample(detail(fault.From(err)), a, t))
			return nil
		}
	case v.Type() == cty.Number && quantity.Same(t.Dimension, "number"):
		if !d.known(v) {
			return nil
		}
		q.SI = float(v)
	case v.Type() == cty.Number && v.IsKnown():
		unit := unitOf(t, a)
		d.wrong(p.rng, "Unit missing", "%s takes %s with a unit, and this is a bare number; write %q",
			p.name, quantity.Article(t.Dimension), renderNumber(v.AsBigFloat())+" "+unit)
		return nil
	case v.Type() == cty.Number:
		unit := unitOf(t, a)
		d.wrong(p.rng, "Unit missing", "%s takes %s with a unit, and this is a bare number; make it a quantity with quantity(…, %q)",
			p.name, quantity.Article(t.Dimension), unit)
		return nil
	default:
		return d.wrongType(p, v, a, t, fmt.Sprintf("write a text such as %q", exampleOf(t, a)))
	}
	q.Dimension = t.Dimension
	if math.IsInf(q.SI, 0) || math.IsNaN(q.SI) {
		d.wrong(p.rng, "Out of range", "%s is infinite or beyond the range of numbers", p.name)
		return nil
	}
	show := func(x float64) string {
		if x == 0 {
			return quantity.Format(0, t.Dimension, t.Unit)
		}
		return quantity.Format(x, t.Dimension, t.Unit)
	}
	if !d.inside(q.SI, p, a, show) {
		return nil
	}
	return q
}

// wrongDimension reports a quantity of another dimension; text may be empty
// when it is not known yet.
func (d *decoder) wrongDimension(p at, text, got string, a stage.Argument, t stage.Type) any {
	if text != "" {
		f := quantity.Mismatch(text, stage.Quantity{Dimension: got}, t.Dimension)
		if q, err := quantity.Parse(text); err == nil {
			f = quantity.Mismatch(text, q, t.Dimension)
		}
		d.wrong(p.rng, "Wrong quantity", "%s: %s", p.name, ownExample(detail(f), a, t))
		return nil
	}
	d.wrong(p.rng, "Wrong quantity", "%s takes %s, but this is %s", p.name, quantity.Article(t.Dimension), quantity.Article(got))
	return nil
}

// ownExample puts the example of the argument in the place of the general one of
// its dimension.
func ownExample(text string, a stage.Argument, t stage.Type) string {
	return strings.Replace(text, "such as "+strconv.Quote(quantity.Example(t.Dimension)), "such as "+strconv.Quote(exampleOf(t, a)), 1)
}

// unitOf is the unit to suggest for an argument.
func unitOf(t stage.Type, a stage.Argument) string {
	if u := unitIn(strings.Trim(a.Example, `"`)); u != "" {
		if x, err := quantity.ParseUnit(u); err == nil && x.Is(t.Dimension) {
			return u
		}
	}
	if t.Unit != "" {
		return t.Unit
	}
	return quantity.Natural(t.Dimension)
}

func exampleOf(t stage.Type, a stage.Argument) string {
	text := strings.Trim(a.Example, `"`)
	if _, err := quantity.ParseAs(text, t.Dimension); err == nil {
		return text
	}
	return quantity.Example(t.Dimension)
}

// inside checks the bounds of an argument.
func (d *decoder) inside(x float64, p at, a stage.Argument, show func(float64) string) bool {
	low := a.Min != nil && x < *a.Min
	above := a.Above != nil && x <= *a.Above
	high := a.Max != nil && x > *a.Max
	if !low && !above && !high {
		return true
	}
	var bounds []string
	if a.Min != nil {
		bounds = append(bounds, "at least "+show(*a.Min))
	}
	if a.Above != nil {
		bounds = append(bounds, "more than "+show(*a.Above))
	}
	if a.Max != nil {
		bounds = append(bounds, "at most "+show(*a.Max))
	}
	d.wrong(p.rng, "Out of range", "%s is %s, but it has to be %s", p.name, show(x), enumerate(bounds))
	return false
}
