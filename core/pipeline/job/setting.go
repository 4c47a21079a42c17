package job

import (
	"fmt"
	"strconv"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// readSettings evaluates the settings, with those of the command line put in
// place of the values in the file.
func (l *loader) readSettings() {
	places := map[string]hcl.Range{}
	for _, b := range l.settings {
		name := b.Labels[0]
		if !hclsyntax.ValidIdentifier(name) {
			l.wrong(b.LabelRanges[0], "Label is no name", "a setting is referred to as setting.NAME, so its name has to start with a letter and hold only letters, digits, _ and -")
			continue
		}
		if first, taken := places[name]; taken {
			l.wrong(b.LabelRanges[0], "Two settings of one name", "setting %q is already at %s", name, place(first))
			continue
		}
		places[name] = b.DefRange()
		l.scope.order = append(l.scope.order, name)
		l.scope.settings[name] = cty.DynamicVal
		l.setting(b)
	}
	for _, name := range sorted(l.opt.Set) {
		if _, ok := places[name]; !ok {
			l.diags = append(l.diags, &hcl.Diagnostic{
				Severity: hcl.DiagError,
				Summary:  "Unknown setting on the command line",
				Detail:   fmt.Sprintf("--set %s=%s: this job has no setting %q%s", name, l.opt.Set[name], name, suggest(name, l.scope.order, "its settings are")),
			})
		}
	}
}

func (l *loader) setting(b *hclsyntax.Block) {
	s := Setting{Name: b.Labels[0]}
	l.only(b, []string{"value", argAbout, "choices", "min", "max"})
	if a, ok := b.Body.Attributes[argAbout]; ok {
		s.About = l.literal(a)
	}
	attr, ok := b.Body.Attributes["value"]
	if !ok {
		if !blockOf(b.Body, "value") {
			l.wrong(b.DefRange(), "Missing argument", "a setting needs a value")
		}
		return
	}
	v, ok := l.settingValue(attr)
	if !ok {
		return
	}
	check := l.bounds(b, v)
	if !check(v, atExpr("value", attr.Expr), "") {
		return
	}
	if text, given := l.opt.Set[s.Name]; given {
		v, ok = l.override(s.Name, text, v, attr.Expr.Range())
		if !ok || !check(v, at{"value", nil, attr.Expr.Range()}, fmt.Sprintf("--set %s=%s: ", s.Name, text)) {
			return
		}
		s.Overridden = true
	}
	s.Text = renderValue(v)
	if v.Type() == cty.String {
		s.Text = v.AsString()
	}
	l.scope.settings[s.Name] = v
	l.job.Settings = append(l.job.Settings, s)
}

// settingValue evaluates the value in the file: anything constant.
func (l *loader) settingValue(attr *hclsyntax.Attribute) (cty.Value, bool) {
	for _, t := range attr.Expr.Variables() {
		l.wrong(t.SourceRange(), "Reference not allowed here", "the value of a setting is constant and cannot refer to anything; calculate where the setting is used")
		return cty.NilVal, false
	}
	v, diags := evaluate(attr.Expr, &hcl.EvalContext{Functions: l.scope.functions})
	l.diags = append(l.diags, diags...)
	if diags.HasErrors() {
		return cty.NilVal, false
	}
	if v.IsNull() || !v.IsWhollyKnown() {
		l.wrong(attr.Expr.Range(), "No value", "a setting needs a value, such as \"5 mm\", 3, true or [1, 2]")
		return cty.NilVal, false
	}
	// A quantity stays a text, so that every setting can be given as text.
	if q, ok := Quantity(v); ok {
		v = cty.StringVal(quantity.Exact(q))
	}
	return v, true
}

// override reads the text of the command line as a value of the type that the
// file gives.
func (l *loader) override(name, text string, declared cty.Value, rng hcl.Range) (cty.Value, bool) {
	wrong := func(format string, args ...any) (cty.Value, bool) {
		l.wrong(rng, "Wrong setting on the command line", "%s", fmt.Sprintf("--set %s=%s: ", name, text)+fmt.Sprintf(format, args...))
		return cty.NilVal, false
	}
	switch t := declared.Type(); {
	case t == cty.String:
		if dimension := textQuantity(declared); dimension != "" {
			if _, err := quantity.ParseAs(text, dimension); err != nil {
				return wrong("%s", detail(fault.From(err)))
			}
		}
		return cty.StringVal(text), true
	case t == cty.Number:
		v, err := cty.ParseNumberVal(text)
		if err != nil {
			return wrong("the setting is a number, such as %s", renderValue(declared))
		}
		return v, true
	case t == cty.Bool:
		b, err := strconv.ParseBool(text)
		if err != nil || text != "true" && text != "false" {
			return wrong("the setting is true or false")
		}
		return cty.BoolVal(b), true
	default:
		expr, diags := parseExpression(text, "--set "+name)
		if diags.HasErrors() || len(expr.Variables()) > 0 {
			return wrong("the setting is %s and is given as in the file, such as %s", describeValue(declared), renderValue(declared))
		}
		v, diags := expr.Value(&hcl.EvalContext{Functions: l.scope.functions})
		if diags.HasErrors() || v.IsNull() || !v.IsWhollyKnown() || shape(v.Type()) != shape(t) {
			return wrong("the setting is %s and is given as in the file, such as %s", describeValue(declared), renderValue(declared))
		}
		return v, true
	}
}

func parseExpression(text, name string) (hclsyntax.Expression, hcl.Diagnostics) {
	if d := nesting([]byte(text), name); d != nil {
		return nil, hcl.Diagnostics{d}
	}
	expr, diags := hclsyntax.ParseExpression([]byte(text), name, hcl.InitialPos)
	if !diags.HasErrors() {
		Prepare(expr)
	}
	return expr, diags
}

func shape(t cty.Type) string {
	switch {
	case t.IsTupleType() || t.IsListType() || t.IsSetType():
		return "list"
	case t.IsObjectType() || t.IsMapType():
		return "object"
	}
	return t.FriendlyName()
}

// bounds reads choices, min and max of a setting, and gives a check of a value
// against them.
func (l *loader) bounds(b *hclsyntax.Block, declared cty.Value) func(v cty.Value, p at, before string) bool {
	spec := stage.Argument{Name: "value", Type: stage.Type{Kind: stage.Any}}
	switch {
	case declared.Type() == cty.Number:
		spec.Type.Kind = stage.Number
	case textQuantity(declared) != "":
		spec.Type = stage.Type{Kind: stage.Amount, Dimension: textQuantity(declared), Unit: unitIn(declared.AsString())}
	case declared.Type() == cty.String:
		spec.Type.Kind = stage.Text
	}
	if a, ok := b.Body.Attributes["choices"]; ok {
		if spec.Type.Kind != stage.Text {
			l.wrong(a.NameRange, "Wrong argument", "choices are for settings whose value is a text without a unit")
		} else if list, ok := l.constant(a, "the choices of a setting are constant", stage.Argument{
			Name: "choices", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Text}}}).([]any); ok {
			for _, c := range list {
				spec.Choices = append(spec.Choices, c.(string))
			}
		}
	}
	bound := func(name string) *float64 {
		a, ok := b.Body.Attributes[name]
		if !ok {
			return nil
		}
		if spec.Type.Kind != stage.Number && spec.Type.Kind != stage.Amount {
			l.wrong(a.NameRange, "Wrong argument", "%s is for settings whose value is a number or a quantity", name)
			return nil
		}
		switch x := l.constant(a, "the bounds of a setting are constant", stage.Argument{Name: name, Type: spec.Type}).(type) {
		case float64:
			return &x
		case stage.Quantity:
			return &x.SI
		}
		return nil
	}
	spec.Min, spec.Max = bound("min"), bound("max")
	return func(v cty.Value, p at, before string) bool {
		if spec.Type.Kind == stage.Any {
			return true
		}
		d := decoder{scope: l.scope}
		d.decode(v, p, spec, spec.Type)
		for _, diag := range d.diags {
			if before != "" {
				diag.Detail = before + diag.Detail
			}
			l.diags = append(l.diags, diag)
		}
		return !d.diags.HasErrors()
	}
}
