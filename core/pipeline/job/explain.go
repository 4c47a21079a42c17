package job

import (
	"fmt"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/nearest"
)

// Explain rewrites diagnostics of evaluation: one about a quantity where a
// number is due says how to calculate with quantities, unknown functions and
// members get the nearest name, and subjects cover the whole offending text.
// The given diagnostics are not changed.
func Explain(diags hcl.Diagnostics) hcl.Diagnostics {
	var out hcl.Diagnostics
	for _, d := range diags {
		out = append(out, explain(d))
	}
	return out
}

func explain(d *hcl.Diagnostic) *hcl.Diagnostic {
	e := *d
	// The values of all variables behind a message would bury it.
	e.Expression, e.EvalContext = nil, nil
	switch d.Summary {
	case "Invalid operand":
		e.Summary = "Impossible operation"
		explainNumber(&e, d)
	case "Invalid function argument":
		e.Summary = "Wrong argument of a function"
		if d.Expression == nil {
			break
		}
		e.Subject = d.Expression.Range().Ptr()
		if call, ok := hcl.DiagnosticExtra[hclsyntax.FunctionCallDiagExtra](d); ok {
			if err := call.FunctionCallError(); err != nil {
				e.Detail = call.CalledFunctionName() + ": " + err.Error()
				break
			}
		}
		if strings.Contains(d.Detail, "number required") || strings.Contains(d.Detail, "a number is required") {
			explainNumber(&e, d)
		}
	case "Operation failed":
		e.Summary = "Impossible operation"
		if text, ok := strings.CutPrefix(d.Detail, "Error during operation: "); ok {
			e.Detail = strings.TrimSuffix(text, ".")
		}
	case "Call to unknown function":
		call, ok := hcl.DiagnosticExtra[hclsyntax.FunctionCallUnknownDiagExtra](d)
		if !ok || d.EvalContext == nil {
			break
		}
		e.Summary = "Unknown function"
		name := call.CalledFunctionNamespace() + call.CalledFunctionName()
		e.Detail = fmt.Sprintf("there is no function %q%s", name, suggest(name, functionNames(d.EvalContext), "the functions are"))
	case "Unsupported attribute":
		if text := member(d); text != "" {
			e.Summary, e.Detail = "Unknown member", text
		}
	}
	return &e
}

// explainNumber says of a value why it is no number.
func explainNumber(e, d *hcl.Diagnostic) {
	if d.Expression == nil {
		return
	}
	e.Subject = d.Expression.Range().Ptr()
	v, more := d.Expression.Value(d.EvalContext)
	if more.HasErrors() {
		return
	}
	text := notNumber(v)
	if quantityAsNumber(v) != nil {
		e.Summary = "Calculation with a quantity"
	} else if v.Type() == cty.Bool || !strings.Contains(d.Detail, "number") {
		return
	}
	if t, ok := d.Expression.(*hclsyntax.ScopeTraversalExpr); ok {
		text = traversalText(t.Traversal) + ": " + text
	}
	e.Detail = text
}

func functionNames(ctx *hcl.EvalContext) []string {
	for ; ctx != nil; ctx = ctx.Parent() {
		if ctx.Functions != nil {
			return sorted(ctx.Functions)
		}
	}
	return nil
}

// member says which members there are where one was not found.
func member(d *hcl.Diagnostic) string {
	var t hcl.Traversal
	var at cty.Value
	switch x := d.Expression.(type) {
	case *hclsyntax.ScopeTraversalExpr:
		t = x.Traversal
		v, diags := t[:1].TraverseAbs(d.EvalContext)
		if diags.HasErrors() {
			return ""
		}
		at, t = v, t[1:]
	case *hclsyntax.RelativeTraversalExpr:
		v, diags := x.Source.Value(d.EvalContext)
		if diags.HasErrors() {
			return ""
		}
		at, t = v, x.Traversal
	default:
		return ""
	}
	for i := range t {
		next, diags := t[i : i+1].TraverseRel(at)
		if !diags.HasErrors() {
			at = next
			continue
		}
		name, ok := step(t, i)
		if !ok || !at.Type().IsObjectType() {
			if ok && (at.Type().IsListType() || at.Type().IsTupleType()) {
				return fmt.Sprintf("this is a list and has no member %q; write [0].%s for one element or [*].%s for all", name, name, name)
			}
			if ok {
				return fmt.Sprintf("%s has no members, so .%s means nothing", describeValue(at), name)
			}
			return ""
		}
		names := sorted(at.Type().AttributeTypes())
		if near := nearest.Name(name, names); near != "" {
			return fmt.Sprintf("there is no member %q; did you mean %q?", name, near)
		}
		if len(names) == 0 {
			return fmt.Sprintf("there is no member %q; the object is empty", name)
		}
		return fmt.Sprintf("there is no member %q; there are %s", name, enumerate(quoted(names)))
	}
	return ""
}

// evaluate gives the value of an expression, its messages explained.
func evaluate(expr hclsyntax.Expression, ctx *hcl.EvalContext) (cty.Value, hcl.Diagnostics) {
	v, diags := expr.Value(ctx)
	diags = Explain(diags)
	if !diags.HasErrors() && !v.IsWhollyKnown() {
		diags = append(diags, probe(expr, ctx)...)
	}
	if diags.HasErrors() {
		return cty.DynamicVal, diags
	}
	return v, diags
}
