package airframefile

import (
	"fmt"
	"math"
	"reflect"
	"sort"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// reference is the value of plate.NAME and joint.NAME in expressions.
type reference struct{ kind, name string }

var referenceType = cty.Capsule("reference to a part", reflect.TypeFor[reference]())

// scope is what expressions may refer to.
type scope struct {
	inputs map[string]cty.Value
	// names of plates (copies among them) and joints
	names map[string][]string
}

func (s *scope) context() *hcl.EvalContext {
	vars := map[string]cty.Value{"input": object(s.inputs)}
	for kind, names := range s.names {
		m := map[string]cty.Value{}
		for _, n := range names {
			m[n] = cty.CapsuleVal(referenceType, &reference{kind, n})
		}
		vars[kind] = object(m)
	}
	return &hcl.EvalContext{Variables: vars, Functions: job.Functions()}
}

func object(m map[string]cty.Value) cty.Value {
	if len(m) == 0 {
		return cty.EmptyObjectVal
	}
	return cty.ObjectVal(m)
}

// check finds references to things that are not there.
func (s *scope) check(expr hcl.Expression) hcl.Diagnostics {
	var diags hcl.Diagnostics
	for _, t := range expr.Variables() {
		root := t.RootName()
		name, ok := "", false
		if len(t) > 1 {
			switch step := t[1].(type) {
			case hcl.TraverseAttr:
				name, ok = step.Name, true
			case hcl.TraverseIndex:
				if step.Key.Type() == cty.String {
					name, ok = step.Key.AsString(), true
				}
			}
		}
		var known []string
		switch root {
		case "input":
			for n := range s.inputs {
				known = append(known, n)
			}
			sort.Strings(known)
		case "plate", "joint":
			known = s.names[root]
		case "copy":
			diags = append(diags, mistake(t.SourceRange(), "Reference to a copy",
				fmt.Sprintf("a copy is a plate: write plate.%s", name)))
			continue
		case "material":
			diags = append(diags, mistake(t.SourceRange(), "Reference to a material",
				fmt.Sprintf("materials are named in quotes: write %q", strings.TrimPrefix(name, "material."))))
			continue
		default:
			diags = append(diags, mistake(t.SourceRange(), "Unknown reference",
				fmt.Sprintf("%q is nothing that can be referred to%s; there are plate.NAME, joint.NAME and input.NAME",
					root, didYouMean(root, []string{"plate", "joint", "input"}))))
			continue
		}
		if !ok {
			diags = append(diags, mistake(t.SourceRange(), "Incomplete reference", fmt.Sprintf("a name is due: %s.NAME", root)))
			continue
		}
		if !contains(known, name) {
			diags = append(diags, mistake(t.SourceRange(), "Unknown "+root, fmt.Sprintf("there is no %s %q%s", root, name, suggest(name, known))))
		}
	}
	return diags
}

func contains(names []string, name string) bool {
	for _, n := range names {
		if n == name {
			return true
		}
	}
	return false
}

// didYouMean is a clause that names the nearest candidate, or "".
func didYouMean(name string, known []string) string {
	if n := nearest.Name(name, known); n != "" {
		return fmt.Sprintf("; did you mean %q?", n)
	}
	return ""
}

// suggest names the nearest candidate, or all of them when they are few.
func suggest(name string, known []string) string {
	if near := didYouMean(name, known); near != "" {
		return near
	}
	switch {
	case len(known) > 0 && len(known) <= 12:
		return "; there are " + strings.Join(known, ", ")
	}
	return ""
}

// toCty makes an expression value of a value that crossed the process boundary.
func toCty(v any) (cty.Value, bool) {
	switch x := v.(type) {
	case string:
		return cty.StringVal(x), true
	case bool:
		return cty.BoolVal(x), true
	case float64:
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return cty.NilVal, false
		}
		return cty.NumberFloatVal(x), true
	case stage.Quantity:
		return cty.StringVal(quantity.Exact(x)), true
	case []any:
		if len(x) == 0 {
			return cty.EmptyTupleVal, true
		}
		out := make([]cty.Value, len(x))
		for i := range x {
			var ok bool
			if out[i], ok = toCty(x[i]); !ok {
				return cty.NilVal, false
			}
		}
		return cty.TupleVal(out), true
	}
	return cty.NilVal, false
}

// sort of value, for comparing an input with what replaces it: a dimension, or number, text, truth, list.
func sortOf(v cty.Value) string {
	if q, ok := job.Quantity(v); ok {
		return quantity.Canonical(q.Dimension)
	}
	switch {
	case v.IsNull():
		return "null"
	case v.Type() == cty.Number:
		return "number"
	case v.Type() == cty.Bool:
		return "truth value"
	case v.Type() == cty.String:
		if quantity.Looks(v.AsString()) {
			if q, err := quantity.Parse(v.AsString()); err == nil {
				return quantity.Canonical(q.Dimension)
			}
		}
		return "text"
	case v.Type().IsTupleType() || v.Type().IsListType():
		return "list"
	}
	return v.Type().FriendlyName()
}

// shown gives a value as short text.
func shown(v cty.Value) string {
	if q, ok := job.Quantity(v); ok {
		return quantity.Exact(q)
	}
	switch {
	case v.IsNull():
		return "null"
	case v.Type() == cty.String:
		return v.AsString()
	case v.Type() == cty.Number:
		return v.AsBigFloat().Text('g', 10)
	case v.Type() == cty.Bool:
		return fmt.Sprint(v.True())
	case v.Type().IsTupleType() || v.Type().IsListType():
		var parts []string
		for _, e := range v.AsValueSlice() {
			parts = append(parts, shown(e))
		}
		return "[" + strings.Join(parts, ", ") + "]"
	}
	return v.Type().FriendlyName()
}
