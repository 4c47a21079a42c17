package airframefile

import (
	"fmt"
	"math"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/quantity"
)

// block reads the attributes of one block; mistakes are gathered in the parser. Every attribute asked for is known,
// and finish reports the others.
type block struct {
	p     *parser
	hcl   *hclsyntax.Block
	part  Part
	asked []string
	below []string // kinds of blocks asked for
}

// bound says what values a number may take.
type bound struct {
	text  string
	holds func(x float64) bool
}

var (
	anyNumber   = bound{}
	positive    = bound{"must be positive", func(x float64) bool { return x > 0 }}
	notNegative = bound{"must not be negative", func(x float64) bool { return x >= 0 }}
	lossy       = bound{"must lie between 0 and 3; 20 % is 0.2", func(x float64) bool { return x >= 0 && x <= 3 }} // of what yields most, by far
	share       = bound{"must lie between 0 and 1", func(x float64) bool { return x >= 0 && x <= 1 }}
)

func (b *block) fail(at hcl.Range, format string, args ...any) {
	b.p.diags = append(b.p.diags, mistake(at, "", fmt.Sprintf("%s: ", b.part)+fmt.Sprintf(format, args...)))
}

// head is the place of the block's first line.
func (b *block) head() hcl.Range { return b.hcl.DefRange() }

// value evaluates an attribute; ok is false when it is absent or wrong, which is reported.
func (b *block) value(name string) (cty.Value, hcl.Range, bool) {
	b.asked = append(b.asked, name)
	a, ok := b.hcl.Body.Attributes[name]
	if !ok {
		return cty.NilVal, hcl.Range{}, false
	}
	v, ok := b.p.evaluate(a.Expr)
	if ok && v.IsNull() {
		return cty.NilVal, hcl.Range{}, false
	}
	return v, a.Expr.Range(), ok
}

func (b *block) present(name string) bool { _, ok := b.hcl.Body.Attributes[name]; return ok }

// need reports a required attribute that is absent.
func (b *block) need(name, example string) {
	if !b.present(name) {
		b.fail(b.head(), "%s is missing; give it as in %s = %s", name, name, example)
	}
}

// amountOf reads a value as a quantity of a dimension, or as a bare number when the dimension is "number".
func (b *block) amountOf(name string, v cty.Value, at hcl.Range, dimension string, limit bound) (float64, bool) {
	x, bad := toSI(v, dimension)
	if bad != nil {
		text := bad.Text
		if bad.Remedy != "" {
			text += "; " + bad.Remedy
		}
		b.fail(at, "%s: %s", name, text)
		return 0, false
	}
	if limit.holds != nil && !limit.holds(x) {
		b.fail(at, "%s is %s and %s", name, shown(v), limit.text)
		return 0, false
	}
	return x, true
}

func toSI(v cty.Value, dimension string) (float64, *fault.Error) {
	due := quantity.Article(dimension)
	if dimension == "number" {
		due = "a number without a unit"
	}
	example := fmt.Sprintf("such as %q", quantity.Example(dimension))
	if q, ok := job.Quantity(v); ok {
		if !quantity.Same(q.Dimension, dimension) {
			return 0, quantity.Mismatch(quantity.Exact(q), q, dimension)
		}
		return q.SI, nil
	}
	switch {
	case v.Type() == cty.Number && dimension == "number":
		x, _ := v.AsBigFloat().Float64()
		if math.IsInf(x, 0) {
			return 0, fault.New(fault.Input, "the number is out of range")
		}
		return x, nil
	case v.Type() == cty.Number:
		return 0, fault.New(fault.Input, "%s is a bare number where %s is due", shown(v), due).Do("write it with its unit, %s", example)
	case v.Type() == cty.String && dimension == "number":
		return 0, fault.New(fault.Input, "%q is a text where %s is due", v.AsString(), due)
	case v.Type() == cty.String:
		q, err := quantity.ParseAs(v.AsString(), dimension)
		if err != nil {
			return 0, fault.From(err)
		}
		return q.SI, nil
	}
	return 0, fault.New(fault.Input, "%s is due, not %s", due, v.Type().FriendlyName()).Do("write it %s", example)
}

// amount reads an optional quantity.
func (b *block) amount(name, dimension string, limit bound) Opt {
	v, at, ok := b.value(name)
	if !ok {
		return Opt{}
	}
	x, ok := b.amountOf(name, v, at, dimension, limit)
	return Opt{x, ok}
}

// must reads a required quantity.
func (b *block) must(name, dimension string, limit bound) float64 {
	example := fmt.Sprintf("%q", quantity.Example(dimension))
	if dimension == "number" {
		example = quantity.Example(dimension)
	}
	b.need(name, example)
	return b.amount(name, dimension, limit).Value
}

func (b *block) text(name string) string {
	v, at, ok := b.value(name)
	if !ok {
		return ""
	}
	if v.Type() != cty.String {
		b.fail(at, "%s: a text in quotes is due", name)
		return ""
	}
	return v.AsString()
}

// word reads one of a few words.
func (b *block) word(name string, choices ...string) string {
	s := b.text(name)
	if s == "" || contains(choices, s) {
		return s
	}
	b.fail(b.hcl.Body.Attributes[name].Expr.Range(), "%s is %q and must be one of %s%s", name, s,
		strings.Join(choices, ", "), didYouMean(s, choices))
	return ""
}

func (b *block) truth(name string, missing bool) bool {
	v, at, ok := b.value(name)
	if !ok {
		return missing
	}
	if v.Type() != cty.Bool {
		b.fail(at, "%s: true or false is due, without quotes", name)
		return missing
	}
	return v.True()
}

// list gives the elements of a list.
func (b *block) list(name string, v cty.Value, at hcl.Range) ([]cty.Value, bool) {
	t := v.Type()
	if !t.IsTupleType() && !t.IsListType() && !t.IsSetType() {
		b.fail(at, "%s: a list in brackets is due", name)
		return nil, false
	}
	all := v.AsValueSlice()
	for _, e := range all {
		if e.IsNull() {
			b.fail(at, "%s: an element of the list is null", name)
			return nil, false
		}
	}
	return all, true
}

// texts reads a text or a list of texts.
func (b *block) texts(name string) []string {
	v, at, ok := b.value(name)
	if !ok {
		return nil
	}
	all := []cty.Value{v}
	if v.Type() != cty.String {
		if all, ok = b.list(name, v, at); !ok {
			return nil
		}
	}
	var out []string
	for _, e := range all {
		if e.Type() != cty.String {
			b.fail(at, "%s: texts in quotes are due", name)
			return nil
		}
		out = append(out, e.AsString())
	}
	return out
}

// amountsOf reads a list of quantities of one of the given lengths.
func (b *block) amountsOf(name string, v cty.Value, at hcl.Range, dimensions []string, lengths ...int) []float64 {
	all, ok := b.list(name, v, at)
	if !ok {
		return nil
	}
	fits := false
	var counts []string
	for _, n := range lengths {
		fits = fits || n == len(all)
		counts = append(counts, fmt.Sprint(n))
	}
	if !fits {
		b.fail(at, "%s has %d elements where %s are due", name, len(all), strings.Join(counts, " or "))
		return nil
	}
	out := make([]float64, len(all))
	for i, e := range all {
		if out[i], ok = b.amountOf(name, e, at, dimensions[min(i, len(dimensions)-1)], anyNumber); !ok {
			return nil
		}
	}
	return out
}

func (b *block) amounts(name string, dimensions []string, lengths ...int) []float64 {
	v, at, ok := b.value(name)
	if !ok {
		return nil
	}
	return b.amountsOf(name, v, at, dimensions, lengths...)
}

var length = []string{"length"}

func (b *block) point(name string) *outline.Point {
	if x := b.amounts(name, length, 2); x != nil {
		return &outline.Point{X: x[0], Y: x[1]}
	}
	return nil
}

func (b *block) vector(name string) airframe.Vec {
	if x := b.amounts(name, length, 3); x != nil {
		return airframe.Vec{x[0], x[1], x[2]}
	}
	return airframe.Vec{}
}

// places reads `at`, one point, or `places`, a list of points; one of them must be there.
func (b *block) places() []outline.Point {
	one := b.point("at")
	v, at, ok := b.value("places")
	switch {
	case b.present("at") && b.present("places"):
		b.fail(b.head(), "both at and places are given; keep one of them")
	case one != nil:
		return []outline.Point{*one}
	case !b.present("at") && !b.present("places"):
		b.fail(b.head(), `a place is missing; give it as in at = ["20 mm", "15 mm"]`)
	}
	if !ok {
		return nil
	}
	return b.points("places", v, at)
}

func (b *block) points(name string, v cty.Value, at hcl.Range) []outline.Point {
	all, ok := b.list(name, v, at)
	if !ok {
		return nil
	}
	if len(all) == 0 {
		b.fail(at, "%s is empty", name)
	}
	var out []outline.Point
	for _, e := range all {
		x := b.amountsOf(name, e, at, length, 2)
		if x == nil {
			return nil
		}
		out = append(out, outline.Point{X: x[0], Y: x[1]})
	}
	return out
}

// refer reads a reference to a part of a kind.
func (b *block) refer(name, kind string) string {
	v, at, ok := b.value(name)
	if !ok {
		return ""
	}
	return b.referOf(name, v, at, kind)
}

func (b *block) referOf(name string, v cty.Value, at hcl.Range, kind string) string {
	if v.Type() == referenceType {
		r := v.EncapsulatedValue().(*reference)
		if r.kind == kind {
			return r.name
		}
		b.fail(at, "%s: a %s is due, and %s.%s is a %s", name, kind, r.kind, r.name, r.kind)
		return ""
	}
	hint := "NAME"
	if v.Type() == cty.String {
		hint = v.AsString()
		if n := nearest.Name(hint, b.p.scope.names[kind]); n != "" {
			hint = n
		}
	}
	b.fail(at, "%s: a reference without quotes is due: %s.%s", name, kind, hint)
	return ""
}

func (b *block) refers(name, kind string) []string {
	v, at, ok := b.value(name)
	if !ok {
		return nil
	}
	all, ok := b.list(name, v, at)
	if !ok {
		return nil
	}
	var out []string
	for _, e := range all {
		r := b.referOf(name, e, at, kind)
		if r == "" {
			return nil
		}
		if contains(out, r) {
			b.fail(at, "%s names %s.%s twice", name, kind, r)
			return nil
		}
		out = append(out, r)
	}
	return out
}

// inside gives the only block of a kind within this one, nil when there is none.
func (b *block) inside(kind string) *block {
	b.below = append(b.below, kind)
	var found *block
	for _, h := range b.hcl.Body.Blocks {
		if h.Type != kind {
			continue
		}
		if found != nil {
			b.fail(h.DefRange(), "a second block %s; keep one", kind)
			continue
		}
		if len(h.Labels) > 0 {
			b.fail(h.DefRange(), "the block %s takes no name", kind)
		}
		found = b.p.block(h, kind, "")
		found.part.Name = b.part.Name
		found.part.Kind = kind + " of " + b.part.Kind
	}
	return found
}

// finish reports what nobody asked for.
func (b *block) finish() {
	for name, a := range b.hcl.Body.Attributes {
		if contains(b.asked, name) {
			continue
		}
		if contains(b.below, name) {
			b.fail(a.NameRange, "%s is a block: write %s { ... } without =", name, name)
			continue
		}
		b.fail(a.NameRange, "there is no attribute %q%s", name, suggest(name, b.asked))
	}
	for _, h := range b.hcl.Body.Blocks {
		if contains(b.below, h.Type) {
			continue
		}
		if contains(b.asked, h.Type) {
			b.fail(h.TypeRange, "%s is an attribute: write %s = ...", h.Type, h.Type)
			continue
		}
		b.fail(h.TypeRange, "there is no block %q here%s", h.Type, suggest(h.Type, b.below))
	}
}
