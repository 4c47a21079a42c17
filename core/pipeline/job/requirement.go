package job

import (
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// condition is what a requirement asks: a figure against one bound, or a truth.
type condition struct {
	figure hclsyntax.Expression // nil for that
	kind   string               // at_least, at_most, within, equals, that
	bound  hclsyntax.Expression
	unit   string // unit the figure is shown in, if its stage states one
	text   string // source text of the figure or condition
	bad    bool
}

var boundNames = []string{"at_least", "at_most", "within", "equals"}

func (l *loader) addRequirement(b *hclsyntax.Block) {
	r := &Requirement{Name: b.Labels[0], Range: b.DefRange(), scope: l.scope}
	for _, other := range l.job.Requirements {
		if other.Name == r.Name {
			l.wrong(b.LabelRanges[0], "Two requirements of one name", "requirement %q is already at %s; give this one another name", r.Name, place(other.Range))
			return
		}
	}
	l.job.Requirements = append(l.job.Requirements, r)
	l.requirements = append(l.requirements, b)
}

func (l *loader) requirementBody(r *Requirement, b *hclsyntax.Block) {
	l.only(b, append([]string{"figure", "that", "because"}, boundNames...))
	if a, ok := b.Body.Attributes["because"]; ok {
		r.Because, _ = l.constant(a, "the reason of a requirement is settled before any stage runs",
			stage.Argument{Name: "because", Type: stage.Type{Kind: stage.Text}}).(string)
	}
	c := &r.condition
	c.bad = true
	var given []string
	for _, n := range boundNames {
		if _, ok := b.Body.Attributes[n]; ok {
			given = append(given, n)
		}
	}
	figure, hasFigure := b.Body.Attributes["figure"]
	that, hasThat := b.Body.Attributes["that"]
	switch {
	case hasThat && (hasFigure || len(given) > 0):
		l.wrong(that.NameRange, "Two conditions", "a requirement has either figure with one of %s, or that with a condition of its own", enumerate(boundNames))
		return
	case hasThat:
		c.kind, c.bound = "that", that.Expr
	case !hasFigure:
		l.wrong(b.DefRange(), "Missing argument", "a requirement needs figure with one of %s, or that = condition", enumerate(boundNames))
		return
	case len(given) == 0:
		l.wrong(figure.NameRange, "Missing argument", "a figure is required to be something: add one of %s", enumerate(boundNames))
		return
	case len(given) > 1:
		l.wrong(b.Body.Attributes[given[1]].NameRange, "Two conditions", "a requirement has one of %s; for a lower and an upper bound write within = [lower, upper]", enumerate(boundNames))
		return
	default:
		c.kind, c.figure, c.bound = given[0], figure.Expr, b.Body.Attributes[given[0]].Expr
	}
	c.bad = false
	needs := map[string]bool{}
	for _, expr := range []hclsyntax.Expression{c.figure, c.bound} {
		if expr == nil {
			continue
		}
		uses, diags := l.scope.references(expr, true, "")
		l.diags = append(l.diags, diags...)
		c.bad = c.bad || diags.HasErrors()
		for _, u := range uses {
			st, ok := l.scope.stages[u.label]
			if !ok {
				continue
			}
			needs[u.label] = true
			if st.described && st.Description.Last {
				l.wrong(u.rng, "Figure comes too late", "stage %s runs after every requirement has been judged, so no requirement can use it", u.label)
				c.bad = true
			} else if st.described && !u.figures {
				l.wrong(u.rng, "Wrong type", "a requirement is about figures, and %s is an artifact; the figures of stage %s are under stage.%s.figures", u.text, u.label, u.label)
				c.bad = true
			}
		}
	}
	r.Needs = sortedSet(needs)
	c.text = l.sourceOf(c.bound)
	if c.figure != nil {
		c.text = l.sourceOf(c.figure)
		c.unit = l.figureUnit(c.figure)
	}
	if !c.bad {
		_, diags := r.Judge(nil)
		l.diags = append(l.diags, diags...)
	}
}

// sourceOf gives the text of an expression on one line.
func (l *loader) sourceOf(expr hcl.Expression) string {
	rng := expr.Range()
	for _, s := range l.job.Sources {
		if s.Name == rng.Filename && rng.CanSliceBytes(s.Bytes) {
			return strings.Join(strings.Fields(string(rng.SliceBytes(s.Bytes))), " ")
		}
	}
	return ""
}

// figureUnit gives the unit that a stage states for the figure, when the
// expression is that figure itself.
func (l *loader) figureUnit(expr hcl.Expression) string {
	t, diags := hcl.AbsTraversalForExpr(expr)
	if diags.HasErrors() || len(t) != 4 {
		return ""
	}
	label, _ := step(t, 1)
	name, _ := step(t, 3)
	if st, ok := l.scope.stages[label]; ok {
		for _, f := range st.Description.Figures {
			if f.Name == name {
				return f.Type.Unit
			}
		}
	}
	return ""
}

// Judge evaluates the requirement over the figures of the labels in r.Needs. A
// figure that has no value in this run breaks the requirement. While figures
// are missing it only checks types, and the verdict is empty.
func (r *Requirement) Judge(figures Figures) (Verdict, hcl.Diagnostics) {
	v := Verdict{Name: r.Name, Because: r.Because}
	c := r.condition
	if c.bad {
		return v, nil
	}
	needed := Figures{}
	for _, label := range r.Needs {
		if f, ok := figures[label]; ok {
			needed[label] = f
		}
	}
	ctx, diags := r.scope.context(needed)
	bound, more := evaluate(c.bound, ctx)
	diags = append(diags, more...)
	if c.kind == "that" {
		if !diags.HasErrors() {
			r.judgeCondition(&v, bound, ctx, &diags)
		}
		return v, diags
	}
	figure, more := evaluate(c.figure, ctx)
	diags = append(diags, more...)
	if !diags.HasErrors() {
		r.judgeFigure(&v, figure, bound, &diags)
	}
	return v, diags
}

func (r *Requirement) judgeCondition(v *Verdict, value cty.Value, ctx *hcl.EvalContext, diags *hcl.Diagnostics) {
	c := r.condition
	switch {
	case value.Type() == cty.DynamicPseudoType && !value.IsNull():
		return
	case value.IsNull() || value.Type() != cty.Bool:
		*diags = append(*diags, &hcl.Diagnostic{Severity: hcl.DiagError, Summary: "Wrong type", Subject: c.bound.Range().Ptr(),
			Detail: fmt.Sprintf("that takes a condition, true or false, not %s", describeValue(value))})
		return
	case !value.IsKnown():
		return
	}
	v.Holds = value.True()
	seen := map[string]bool{}
	var values []string
	for _, t := range c.bound.Variables() {
		x, more := t.TraverseAbs(ctx)
		text := traversalText(t)
		if more.HasErrors() || seen[text] {
			continue
		}
		seen[text] = true
		values = append(values, text+" = "+short(showValue(x, "")))
	}
	sort.Strings(values)
	v.Shown = c.text
	if len(values) > 0 {
		v.Shown += ", with " + strings.Join(values, ", ")
	}
}

// showValue writes a value for people.
func showValue(v cty.Value, unit string) string {
	if v.IsNull() {
		return "no value"
	}
	if q, ok := Quantity(v); ok {
		return quantity.Format(q.SI, q.Dimension, unit)
	}
	if v.Type() == cty.Number && v.IsKnown() {
		return showNumber(float(v))
	}
	return renderValue(v)
}

func showNumber(x float64) string { return quantity.Format(x, "number", "") }

// bounds of a requirement in words.
var wording = map[string]string{"at_least": "at least ", "at_most": "at most ", "within": "within ", "equals": "equal to "}

func (r *Requirement) judgeFigure(v *Verdict, figure, bound cty.Value, diags *hcl.Diagnostics) {
	c := r.condition
	t, ok := scalarOf(figure.Type())
	if !ok {
		if figure.Type() == cty.DynamicPseudoType {
			if figure.IsNull() {
				v.Shown = c.text + " has no value in this run"
			}
			return
		}
		*diags = append(*diags, &hcl.Diagnostic{Severity: hcl.DiagError, Summary: "Wrong type", Subject: c.figure.Range().Ptr(),
			Detail: fmt.Sprintf("figure takes one number, quantity, text or truth value, not %s", describeValue(figure))})
		return
	}
	if figure.IsKnown() && !figure.IsNull() && textQuantity(figure) != "" {
		t = stage.Type{Kind: stage.Amount, Dimension: textQuantity(figure)}
	}
	spec := stage.Argument{Name: c.kind, Type: t}
	ordered := t.Kind == stage.Number || t.Kind == stage.Amount
	switch {
	case c.kind == "within":
		spec.Type = stage.Type{Kind: stage.List, Element: &t}
		fallthrough
	case c.kind != "equals":
		if !ordered {
			*diags = append(*diags, &hcl.Diagnostic{Severity: hcl.DiagError, Summary: "Wrong type", Subject: c.figure.Range().Ptr(),
				Detail: fmt.Sprintf("%s takes a number or a quantity as figure, not %s", c.kind, describeValue(figure))})
			return
		}
	}
	d := decoder{scope: r.scope}
	x := d.decode(bound, atExpr(c.kind, c.bound), spec, spec.Type)
	if list, ok := x.([]any); ok && !d.diags.HasErrors() {
		if len(list) != 2 {
			d.wrong(c.bound.Range(), "Wrong type", "within takes two values: [lower, upper]")
		} else if !d.pending && numberOf(list[0]) > numberOf(list[1]) {
			d.wrong(c.bound.Range(), "Empty range", "the lower bound comes first: within = [lower, upper]")
		}
	}
	*diags = append(*diags, d.diags...)
	if d.diags.HasErrors() || d.pending || !figure.IsKnown() {
		return
	}
	r.compare(v, figure, x, t, boundUnit(c, bound))
}

// boundUnit picks the unit of value and margin: that of the figure, else the
// one the bound is written in.
func boundUnit(c condition, bound cty.Value) string {
	if c.unit != "" {
		return c.unit
	}
	if bound.Type() == cty.String {
		return unitIn(bound.AsString())
	}
	if bound.CanIterateElements() {
		for it := bound.ElementIterator(); it.Next(); {
			if _, e := it.Element(); e.Type() == cty.String && !e.IsNull() {
				return unitIn(e.AsString())
			}
		}
	}
	return ""
}

func scalarOf(t cty.Type) (stage.Type, bool) {
	if d, ok := dimensionOf(t); ok {
		return stage.Type{Kind: stage.Amount, Dimension: d}, true
	}
	switch t {
	case cty.Number:
		return stage.Type{Kind: stage.Number}, true
	case cty.String:
		return stage.Type{Kind: stage.Text}, true
	case cty.Bool:
		return stage.Type{Kind: stage.Truth}, true
	}
	return stage.Type{}, false
}

func numberOf(x any) float64 {
	switch y := x.(type) {
	case float64:
		return y
	case stage.Quantity:
		return y.SI
	}
	return math.NaN()
}

func (r *Requirement) compare(v *Verdict, figure cty.Value, bound any, t stage.Type, unit string) {
	c := r.condition
	show := func(x float64) string { return showNumber(x) }
	change := func(x float64) string {
		if x >= 0 {
			return "+" + showNumber(x)
		}
		return showNumber(x)
	}
	if t.Kind == stage.Amount {
		show = func(x float64) string { return quantity.Format(x, t.Dimension, unit) }
		change = func(x float64) string { return quantity.FormatChange(x, t.Dimension, unit) }
	}
	finish := func() {
		v.Shown = fmt.Sprintf("%s = %s, %s", c.text, v.Value, v.Bound)
	}
	list, _ := bound.([]any)
	switch b := bound.(type) {
	case string:
		v.Bound = wording[c.kind] + strconv.Quote(b)
	case bool:
		v.Bound = wording[c.kind] + strconv.FormatBool(b)
	case []any:
		v.Bound = wording[c.kind] + show(numberOf(list[0])) + " to " + show(numberOf(list[1]))
	default:
		v.Bound = wording[c.kind] + show(numberOf(b))
	}
	if figure.IsNull() {
		v.Value = "no value"
		v.Shown = fmt.Sprintf("%s has no value in this run, %s", c.text, v.Bound)
		return
	}
	if t.Kind == stage.Text || t.Kind == stage.Truth {
		v.Value = renderValue(figure)
		if b, ok := bound.(string); ok {
			v.Holds = figure.AsString() == b
		} else {
			v.Holds = figure.True() == bound.(bool)
		}
		finish()
		return
	}
	x := 0.0
	if q, ok := Quantity(figure); ok {
		x = q.SI
	} else if figure.Type() == cty.String {
		q, _ := quantity.ParseAs(figure.AsString(), t.Dimension)
		x = q.SI
	} else {
		x = float(figure)
	}
	v.Value = show(x)
	margin := 0.0
	switch c.kind {
	case "at_least":
		margin = x - numberOf(bound)
	case "at_most":
		margin = numberOf(bound) - x
	case "within":
		margin = math.Min(x-numberOf(list[0]), numberOf(list[1])-x)
	case "equals":
		if !Close(x, numberOf(bound)) {
			margin = -math.Abs(x - numberOf(bound))
		}
	}
	v.Holds = margin >= 0
	v.Margin, v.Measured = change(margin), &Measured{Value: x, Margin: margin, Dimension: t.Dimension}
	finish()
}
