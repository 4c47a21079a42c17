package job

import (
	"fmt"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"
)

// Explain rewrites diagnostics of evaluation: one about a quantity where a
// number is due says how to calculate with quantities, and subjects cover the
// whole offending text. The given diagnostics are not changed.
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
		if d.Expression == nil {
			break
		}
		e.Subject = d.Expression.Range().Ptr()
		v, more := d.Expression.Value(d.EvalContext)
		if more.HasErrors() {
			break
		}
		if err := quantityAsNumber(v); err != nil {
			e.Summary = "Calculation with a quantity"
			e.Detail = sentence(named(d.Expression, err.Error()))
		} else if _, ok := kindOf(v.Type()); ok {
			e.Detail = sentence(fmt.Sprintf("a number is due, not %s", describeValue(v)))
		}
	case "Invalid function argument":
		if d.Expression == nil {
			break
		}
		e.Subject = d.Expression.Range().Ptr()
		if strings.Contains(d.Detail, "number required") || strings.Contains(d.Detail, "a number is required") {
			if v, more := d.Expression.Value(d.EvalContext); !more.HasErrors() {
				if err := quantityAsNumber(v); err != nil {
					e.Summary = "Calculation with a quantity"
					e.Detail = sentence(named(d.Expression, err.Error()))
				}
			}
		}
	case "Operation failed":
		e.Summary = "Impossible operation"
		if text, ok := strings.CutPrefix(d.Detail, "Error during operation: "); ok {
			e.Detail = sentence(strings.TrimSuffix(text, "."))
		}
	}
	return &e
}

// named puts the reference before what is said of its value, unless the value
// is written out in place.
func named(expr hcl.Expression, text string) string {
	if t, ok := expr.(*hclsyntax.ScopeTraversalExpr); ok {
		return traversalText(t.Traversal) + ": " + text
	}
	return text
}

// evaluate gives the value of an expression, its messages explained.
func evaluate(expr hcl.Expression, ctx *hcl.EvalContext) (cty.Value, hcl.Diagnostics) {
	v, diags := expr.Value(ctx)
	if diags.HasErrors() {
		return cty.DynamicVal, Explain(diags)
	}
	return v, Explain(diags)
}
