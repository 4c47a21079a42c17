package job

import (
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
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
	if len(a.Choices) > 0 {
		for _, c := range a.Choices {
			if c == s {
				return s
			}
		}
		d.wrong(p.rng, "Not a choice", "%s cannot be %s%s", p.name, short(strconv.Quote(s)), suggest(s, a.Choices, "it is one of"))
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

func (d *decoder) list(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	vt := v.Type()
	if !vt.IsTupleType() && !vt.IsListType() && !vt.IsSetType() {
		return d.wrongType(p, v, a, t, "write it in brackets: [ … ]")
	}
	element := stage.Type{Kind: stage.Any}
	if t.Element != nil {
		element = *t.Element
	}
	if !v.IsKnown() {
		d.pending = true
		if !vt.IsTupleType() {
			d.decode(cty.UnknownVal(vt.ElementType()), at{p.name + "[…]", nil, p.rng}, a, element)
		}
		return nil
	}
	values := v.AsValueSlice()
	out := make([]any, len(values))
	for i, e := range values {
		out[i] = d.decode(e, p.element(i, len(values)), a, element)
	}
	return out
}

func (d *decoder) mapping(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	vt := v.Type()
	if !vt.IsObjectType() && !vt.IsMapType() {
		return d.wrongType(p, v, a, t, "write it in braces: { name = value }")
	}
	element := stage.Type{Kind: stage.Any}
	if t.Element != nil {
		element = *t.Element
	}
	if !v.IsKnown() {
		d.pending = true
		return nil
	}
	out := map[string]any{}
	members := v.AsValueMap()
	for _, k := range sorted(members) {
		q, _ := p.member(k)
		out[k] = d.decode(members[k], q, a, element)
	}
	return out
}

func (d *decoder) object(v cty.Value, p at, t stage.Type) any {
	vt := v.Type()
	if !vt.IsObjectType() && !vt.IsMapType() {
		return d.wrongType(p, v, stage.Argument{}, t, "write it in braces, with "+enumerate(argumentNames(t.Fields)))
	}
	if !v.IsKnown() {
		d.pending = true
		return nil
	}
	members := v.AsValueMap()
	out := map[string]any{}
	for _, k := range sorted(members) {
		if !hasArgument(t.Fields, k) {
			_, key := p.member(k)
			d.wrong(key, "Unknown member", "%s has no member %q%s", p.name, k, suggest(k, argumentNames(t.Fields), "its members are"))
		}
	}
	for _, f := range t.Fields {
		m, ok := members[f.Name]
		if !ok || m.IsNull() {
			if f.Required {
				d.wrong(p.rng, "Missing member", "%s needs %s, %s", p.name, f.Name, withAbout(f))
			} else if f.Default != nil {
				out[f.Name] = plain(f.Default)
			}
			continue
		}
		q, _ := p.member(f.Name)
		out[f.Name] = d.decode(m, q, f, f.Type)
	}
	return out
}

func withAbout(a stage.Argument) string {
	text := describeType(a.Type)
	if a.About != "" {
		text += " (" + a.About + ")"
	}
	return text
}

func hasArgument(arguments []stage.Argument, name string) bool {
	for _, a := range arguments {
		if a.Name == name {
			return true
		}
	}
	return false
}

func (d *decoder) artifact(v cty.Value, p at, t stage.Type) {
	kind, ok := kindOf(v.Type())
	if !ok {
		text := ""
		if s := stringOf(v); s != "" {
			s = strings.TrimPrefix(s, "stage.")
			label, _, _ := strings.Cut(s, ".")
			if near := nearest.Name(label, d.scope.labels); near != "" {
				text = "; artifacts are linked by reference, not by text"
			}
		}
		d.wrong(p.rng, "Wrong type", "%s takes %s, not %s%s; %s", p.name, describeType(t), describeValue(v), text, d.fitting(t.Kinds))
		return
	}
	if !d.known(v) {
		return
	}
	ref := *v.EncapsulatedValue().(*ArtifactRef)
	for _, k := range t.Kinds {
		if k == kind {
			d.refs = append(d.refs, ref)
			return
		}
	}
	if len(t.Kinds) == 0 {
		d.refs = append(d.refs, ref)
		return
	}
	d.wrong(p.rng, "Wrong artifact", "%s takes %s, but %s is an artifact of kind %s; %s", p.name, describeType(t), ref, kind, d.fitting(t.Kinds))
}

// fitting lists what in the job is of one of the kinds.
func (d *decoder) fitting(kinds []string) string {
	var fits []string
	for _, label := range d.scope.labels {
		st := d.scope.stages[label]
		if label == d.self || !st.described {
			continue
		}
		for _, o := range st.Description.Outputs {
			for _, k := range kinds {
				if k == o.Kind {
					fits = append(fits, ArtifactRef{label, o.Name}.String())
				}
			}
		}
	}
	if len(fits) == 0 {
		return "no other stage of this job writes one"
	}
	return "what fits here is " + oneOf(fits)
}

// any takes a value of any type as it is.
func (d *decoder) any(v cty.Value, p at) any {
	if v.IsNull() {
		return nil
	}
	t := v.Type()
	if kind, ok := kindOf(t); ok {
		d.wrong(p.rng, "Artifact not allowed here", "%s takes plain values, not an artifact of kind %s", p.name, kind)
		return nil
	}
	if !d.known(v) {
		return nil
	}
	if q, ok := Quantity(v); ok {
		return q
	}
	switch {
	case t == cty.String:
		return v.AsString()
	case t == cty.Bool:
		return v.True()
	case t == cty.Number:
		return float(v)
	case t.IsObjectType() || t.IsMapType():
		out := map[string]any{}
		members := v.AsValueMap()
		for _, k := range sorted(members) {
			q, _ := p.member(k)
			out[k] = d.any(members[k], q)
		}
		return out
	case t.IsTupleType() || t.IsListType() || t.IsSetType():
		values := v.AsValueSlice()
		out := make([]any, len(values))
		for i, e := range values {
			out[i] = d.any(e, p.element(i, len(values)))
		}
		return out
	}
	d.wrong(p.rng, "Wrong type", "%s cannot take %s", p.name, t.FriendlyName())
	return nil
}

// plain gives a default the Go types of package stage: whole numbers of a
// description become float64, and lists are copied.
func plain(v any) any {
	switch x := v.(type) {
	case int:
		return float64(x)
	case []any:
		out := make([]any, len(x))
		for i := range x {
			out[i] = plain(x[i])
		}
		return out
	case []string:
		out := make([]any, len(x))
		for i := range x {
			out[i] = x[i]
		}
		return out
	case map[string]any:
		out := map[string]any{}
		for k := range x {
			out[k] = plain(x[k])
		}
		return out
	}
	return v
}

func sortedSet(set map[string]bool) []string {
	var names []string
	for n := range set {
		names = append(names, n)
	}
	sort.Strings(names)
	return names
}
