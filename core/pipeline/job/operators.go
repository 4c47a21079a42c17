package job

import (
	"errors"
	"fmt"
	"math"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"
	"github.com/zclconf/go-cty/cty/convert"
	"github.com/zclconf/go-cty/cty/function"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
)

// Prepare gives the comparisons of a syntax tree their meaning for quantities:
// a figure may be compared with another of its dimension or with a text such as
// "20 Hz". Without it, == between the two would quietly be false. The tree is
// changed in place and is to be evaluated with Functions.
func Prepare(tree hclsyntax.Node) {
	_ = hclsyntax.VisitAll(tree, func(n hclsyntax.Node) hcl.Diagnostics {
		if b, ok := n.(*hclsyntax.BinaryOpExpr); ok {
			if op, ok := comparisons[b.Op]; ok {
				b.Op = op
			}
		}
		return nil
	})
}

var comparisons = map[*hclsyntax.Operation]*hclsyntax.Operation{
	hclsyntax.OpEqual:              comparison(hclsyntax.OpEqual, func(a, b float64) bool { return Close(a, b) }),
	hclsyntax.OpNotEqual:           comparison(hclsyntax.OpNotEqual, func(a, b float64) bool { return !Close(a, b) }),
	hclsyntax.OpLessThan:           comparison(hclsyntax.OpLessThan, func(a, b float64) bool { return a < b }),
	hclsyntax.OpLessThanOrEqual:    comparison(hclsyntax.OpLessThanOrEqual, func(a, b float64) bool { return a <= b }),
	hclsyntax.OpGreaterThan:        comparison(hclsyntax.OpGreaterThan, func(a, b float64) bool { return a > b }),
	hclsyntax.OpGreaterThanOrEqual: comparison(hclsyntax.OpGreaterThanOrEqual, func(a, b float64) bool { return a >= b }),
}

// Close is the equality of quantities: within a part in 1e9, since their
// values went through unit factors.
func Close(a, b float64) bool {
	return a == b || math.Abs(a-b) <= 1e-9*math.Max(math.Abs(a), math.Abs(b))
}

func comparison(op *hclsyntax.Operation, compare func(a, b float64) bool) *hclsyntax.Operation {
	equality := op == hclsyntax.OpEqual || op == hclsyntax.OpNotEqual
	side := function.Parameter{Name: "side", Type: cty.DynamicPseudoType, AllowNull: true, AllowUnknown: true, AllowDynamicType: true}
	params := []function.Parameter{side, side}
	return &hclsyntax.Operation{
		Type: cty.Bool,
		Impl: function.New(&function.Spec{
			Params: params,
			Type:   function.StaticReturnType(cty.Bool),
			Impl: func(args []cty.Value, _ cty.Type) (cty.Value, error) {
				a, b := args[0], args[1]
				if a.Type() == cty.DynamicPseudoType && !a.IsNull() || b.Type() == cty.DynamicPseudoType && !b.IsNull() {
					return cty.UnknownVal(cty.Bool), nil
				}
				dimension, ok, err := comparedAs(a, b)
				if err != nil {
					return cty.NilVal, err
				}
				if ok {
					return compareQuantities(a, b, dimension, equality, compare)
				}
				if !equality {
					for i := range args {
						if args[i].IsNull() {
							return cty.NilVal, errors.New("one side has no value in this run")
						}
						if args[i], err = convert.Convert(args[i], cty.Number); err != nil {
							return cty.NilVal, fmt.Errorf("only numbers and quantities have an order, and one side is %s", describeValue([]cty.Value{a, b}[i]))
						}
					}
				}
				return op.Impl.Call(args)
			},
		}),
	}
}

// comparedAs decides whether two values are compared as quantities, and of
// which dimension.
func comparedAs(a, b cty.Value) (string, bool, error) {
	da, qa := dimensionOf(a.Type())
	db, qb := dimensionOf(b.Type())
	switch {
	case qa && qb:
		if !quantity.Same(da, db) {
			return "", false, fmt.Errorf("%s cannot be compared with %s", quantity.Article(da), quantity.Article(db))
		}
		return da, true, nil
	case qa || qb:
		d, other := da, b
		if qb {
			d, other = db, a
		}
		if other.IsNull() || other.Type() == cty.String {
			return d, true, nil
		}
		unit := quantity.Natural(d)
		return "", false, fmt.Errorf("%s cannot be compared with %s; write a quantity such as %q, or take number_in(…, %q)",
			quantity.Article(d), describeValue(other), quantity.Example(d), unit)
	}
	ta, tb := textQuantity(a), textQuantity(b)
	if ta != "" && tb != "" {
		if !quantity.Same(ta, tb) {
			return "", false, fmt.Errorf("%s cannot be compared with %s", describeValue(a), describeValue(b))
		}
		return ta, true, nil
	}
	if ta != "" && b.Type() == cty.Number || tb != "" && a.Type() == cty.Number {
		q := a
		if tb != "" {
			q = b
		}
		return "", false, quantityAsNumber(q)
	}
	return "", false, nil
}

// textQuantity gives the dimension of a known text that reads as a quantity.
func textQuantity(v cty.Value) string {
	if v.Type() != cty.String || v.IsNull() || !v.IsKnown() || !quantity.Looks(v.AsString()) {
		return ""
	}
	q, err := quantity.Parse(v.AsString())
	if err != nil {
		return ""
	}
	return q.Dimension
}

func compareQuantities(a, b cty.Value, dimension string, equality bool, compare func(a, b float64) bool) (cty.Value, error) {
	var si [2]float64
	unknown, null := false, false
	for i, v := range []cty.Value{a, b} {
		switch {
		case !v.IsKnown():
			unknown = true
		case v.IsNull():
			null = true
		case v.Type() == cty.String:
			q, err := quantity.ParseAs(v.AsString(), dimension)
			if err != nil {
				return cty.NilVal, errors.New(detail(fault.From(err)))
			}
			si[i] = q.SI
		default:
			q, _ := Quantity(v)
			si[i] = q.SI
		}
	}
	switch {
	case null && !equality:
		return cty.NilVal, errors.New("one side has no value in this run")
	case unknown:
		return cty.UnknownVal(cty.Bool), nil
	case null:
		// Null equals null alone.
		return cty.BoolVal((a.IsNull() && b.IsNull()) == compare(0, 0)), nil
	}
	return cty.BoolVal(compare(si[0], si[1])), nil
}
