package job

import (
	"errors"
	"fmt"
	"math"
	"path"
	"sort"
	"strings"

	"github.com/hashicorp/hcl/v2/ext/tryfunc"
	"github.com/zclconf/go-cty/cty"
	"github.com/zclconf/go-cty/cty/function"
	"github.com/zclconf/go-cty/cty/function/stdlib"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// Functions gives the functions of the job language, all pure. The map is the
// caller's.
func Functions() map[string]function.Function {
	return map[string]function.Function{
		// quantities
		"number_in": numberIn,
		"quantity":  quantityOf,
		// numbers
		"abs":    stdlib.AbsoluteFunc,
		"ceil":   stdlib.CeilFunc,
		"floor":  stdlib.FloorFunc,
		"round":  real1("round", math.Round),
		"sqrt":   real1("sqrt", math.Sqrt),
		"sin":    real1("sin", math.Sin),
		"cos":    real1("cos", math.Cos),
		"exp":    real1("exp", math.Exp),
		"log":    stdlib.LogFunc,
		"pow":    stdlib.PowFunc,
		"signum": stdlib.SignumFunc,
		"min":    stdlib.MinFunc,
		"max":    stdlib.MaxFunc,
		"sum":    sum,
		// lists and maps
		"length":   stdlib.LengthFunc,
		"concat":   stdlib.ConcatFunc,
		"flatten":  stdlib.FlattenFunc,
		"range":    stdlib.RangeFunc,
		"sort":     sortList,
		"reverse":  stdlib.ReverseListFunc,
		"distinct": stdlib.DistinctFunc,
		"contains": stdlib.ContainsFunc,
		"element":  stdlib.ElementFunc,
		"slice":    stdlib.SliceFunc,
		"keys":     stdlib.KeysFunc,
		"values":   stdlib.ValuesFunc,
		"lookup":   stdlib.LookupFunc,
		"merge":    stdlib.MergeFunc,
		"zipmap":   stdlib.ZipmapFunc,
		"coalesce": stdlib.CoalesceFunc,
		"all":      truths("true if every element of a list is, and for an empty list", true),
		"any":      truths("true if an element of a list is", false),
		// texts
		"format":        stdlib.FormatFunc,
		"join":          stdlib.JoinFunc,
		"split":         stdlib.SplitFunc,
		"lower":         stdlib.LowerFunc,
		"upper":         stdlib.UpperFunc,
		"title":         stdlib.TitleFunc,
		"replace":       stdlib.ReplaceFunc,
		"regex":         stdlib.RegexFunc,
		"regex_all":     stdlib.RegexAllFunc,
		"regex_replace": stdlib.RegexReplaceFunc,
		"substr":        stdlib.SubstrFunc,
		"trim":          stdlib.TrimFunc,
		"trim_space":    stdlib.TrimSpaceFunc,
		"trim_prefix":   stdlib.TrimPrefixFunc,
		"trim_suffix":   stdlib.TrimSuffixFunc,
		// conversion
		"tonumber": stdlib.MakeToFunc(cty.Number),
		"tostring": stdlib.MakeToFunc(cty.String),
		// failure
		"try": tryfunc.TryFunc,
		"can": tryfunc.CanFunc,
		// files
		"path": pathOf,
	}
}

// numberIn gives the number of a quantity in a unit: number_in("2 cm", "mm")
// is 20.
var numberIn = function.New(&function.Spec{
	Description: "the number that a quantity is in a unit",
	Params: []function.Parameter{
		{Name: "quantity", Type: cty.DynamicPseudoType},
		{Name: "unit", Type: cty.String},
	},
	Type: func(args []cty.Value) (cty.Type, error) {
		t := args[0].Type()
		if t == cty.Number {
			return cty.Number, function.NewArgErrorf(0, "it is a number without a unit already")
		}
		dimension, isQuantity := dimensionOf(t)
		if t != cty.String && !isQuantity {
			return cty.Number, function.NewArgErrorf(0, "a quantity such as \"2 mm\" is due, not %s", t.FriendlyName())
		}
		if !args[1].IsKnown() {
			return cty.Number, nil
		}
		unit, err := quantity.ParseUnit(args[1].AsString())
		if err != nil {
			return cty.Number, argError(1, err)
		}
		if isQuantity && !unit.Is(dimension) {
			_, err := quantity.In(stage.Quantity{Dimension: dimension}, unit.Symbol)
			return cty.Number, argError(1, err)
		}
		return cty.Number, nil
	},
	Impl: func(args []cty.Value, _ cty.Type) (cty.Value, error) {
		unit, err := quantity.ParseUnit(args[1].AsString())
		if err != nil {
			return cty.NilVal, argError(1, err)
		}
		q, ok := Quantity(args[0])
		if !ok {
			if q, err = quantity.ParseAs(args[0].AsString(), unit.Dimension()); err != nil {
				return cty.NilVal, argError(0, err)
			}
		}
		return numberValue(tidy(unit.Number(q.SI))), nil
	},
})

// tidy drops the rounding noise of unit factors, so that 5 mm are 5 in mm.
func tidy(x float64) float64 {
	if x == 0 || math.IsInf(x, 0) || math.IsNaN(x) {
		return x
	}
	scale := math.Pow(10, 14-math.Floor(math.Log10(math.Abs(x))))
	if y := math.Round(x*scale) / scale; !math.IsInf(y, 0) && !math.IsNaN(y) {
		return y
	}
	return x
}

// quantityOf makes a quantity: quantity(2, "mm").
var quantityOf = function.New(&function.Spec{
	Description: "a quantity from a number and a unit",
	Params: []function.Parameter{
		{Name: "number", Type: cty.Number},
		{Name: "unit", Type: cty.String},
	},
	Type: func(args []cty.Value) (cty.Type, error) {
		if !args[1].IsKnown() {
			return cty.DynamicPseudoType, nil
		}
		unit, err := quantity.ParseUnit(args[1].AsString())
		if err != nil {
			return cty.DynamicPseudoType, argError(1, err)
		}
		return quantityType(unit.Dimension()), nil
	},
	Impl: func(args []cty.Value, _ cty.Type) (cty.Value, error) {
		unit, err := quantity.ParseUnit(args[1].AsString())
		if err != nil {
			return cty.NilVal, argError(1, err)
		}
		return quantityValue(stage.Quantity{SI: unit.SI(float(args[0])), Dimension: unit.Dimension()}), nil
	},
})

func argError(i int, err error) error {
	f := fault.From(err)
	return function.NewArgErrorf(i, "%s", f.Error())
}

func real1(name string, f func(float64) float64) function.Function {
	return function.New(&function.Spec{
		Params: []function.Parameter{{Name: "number", Type: cty.Number}},
		Type:   function.StaticReturnType(cty.Number),
		Impl: func(args []cty.Value, _ cty.Type) (cty.Value, error) {
			y := f(float(args[0]))
			if math.IsNaN(y) {
				return cty.NilVal, function.NewArgErrorf(0, "%s has no value there", name)
			}
			return numberValue(y), nil
		},
	})
}

var sum = function.New(&function.Spec{
	Description: "the sum of a list of numbers, 0 for an empty one",
	Params:      []function.Parameter{{Name: "list", Type: cty.DynamicPseudoType}},
	Type: func(args []cty.Value) (cty.Type, error) {
		t := args[0].Type()
		if !t.IsTupleType() && !t.IsListType() && !t.IsSetType() {
			return cty.Number, function.NewArgErrorf(0, "a list of numbers is due")
		}
		return cty.Number, nil
	},
	Impl: func(args []cty.Value, _ cty.Type) (cty.Value, error) {
		total := cty.Zero
		for it := args[0].ElementIterator(); it.Next(); {
			_, e := it.Element()
			if !e.IsKnown() {
				return cty.UnknownVal(cty.Number), nil
			}
			if e.IsNull() || e.Type() != cty.Number {
				return cty.NilVal, function.NewArgErrorf(0, "%s", notNumber(e))
			}
			total = total.Add(e)
		}
		return total, nil
	},
})

// truths folds a list of truth values: all of them, or any of them.
func truths(about string, all bool) function.Function {
	return function.New(&function.Spec{
		Description: about,
		Params:      []function.Parameter{{Name: "list", Type: cty.List(cty.Bool)}},
		Type:        function.StaticReturnType(cty.Bool),
		Impl: func(args []cty.Value, _ cty.Type) (cty.Value, error) {
			result, unknown := all, false
			for it := args[0].ElementIterator(); it.Next(); {
				_, e := it.Element()
				switch {
				case !e.IsKnown():
					unknown = true
				case e.IsNull():
					return cty.NilVal, function.NewArgErrorf(0, "an element has no value")
				case e.True() != all:
					result = !all
				}
			}
			if unknown && result == all {
				return cty.UnknownVal(cty.Bool), nil
			}
			return cty.BoolVal(result), nil
		},
	})
}

var sortList = function.New(&function.Spec{
	Description: "a list of numbers, or of texts, in rising order",
	Params:      []function.Parameter{{Name: "list", Type: cty.DynamicPseudoType}},
	Type: func(args []cty.Value) (cty.Type, error) {
		t := args[0].Type()
		if !t.IsTupleType() && !t.IsListType() && !t.IsSetType() {
			return cty.NilType, function.NewArgErrorf(0, "a list is due")
		}
		if !args[0].IsWhollyKnown() {
			return cty.DynamicPseudoType, nil
		}
		element := cty.String
		for it := args[0].ElementIterator(); it.Next(); {
			_, e := it.Element()
			if e.IsNull() {
				return cty.NilType, function.NewArgErrorf(0, "an element is null")
			}
			if _, isQuantity := dimensionOf(e.Type()); isQuantity {
				return cty.NilType, function.NewArgErrorf(0, "%s", notNumber(e))
			}
			if e.Type() != cty.String && e.Type() != cty.Number {
				return cty.NilType, function.NewArgErrorf(0, "only numbers and texts have an order")
			}
			element = e.Type()
		}
		return cty.List(element), nil
	},
	Impl: func(args []cty.Value, t cty.Type) (cty.Value, error) {
		if !args[0].IsWhollyKnown() {
			return cty.DynamicVal, nil
		}
		list := args[0].AsValueSlice()
		if len(list) == 0 {
			return cty.ListValEmpty(t.ElementType()), nil
		}
		for _, e := range list {
			if e.Type() != t.ElementType() {
				return cty.NilVal, function.NewArgErrorf(0, "numbers and texts are mixed")
			}
		}
		sort.SliceStable(list, func(i, j int) bool {
			if t.ElementType() == cty.String {
				return list[i].AsString() < list[j].AsString()
			}
			return list[i].AsBigFloat().Cmp(list[j].AsBigFloat()) < 0
		})
		return cty.ListVal(list), nil
	},
})

// notNumber says why a value cannot be calculated with.
func notNumber(v cty.Value) string {
	if e := quantityAsNumber(v); e != nil {
		return e.Error()
	}
	return fmt.Sprintf("a number is due, not %s", describeValue(v))
}

// quantityAsNumber gives the error of a quantity where a number is due, nil
// when the value is no quantity.
func quantityAsNumber(v cty.Value) error {
	what, unit := "", ""
	if d, ok := dimensionOf(v.Type()); ok {
		what, unit = quantity.Article(d), quantity.Natural(d)
		if q, known := Quantity(v); known {
			what = fmt.Sprintf("%q", quantity.Exact(q))
		}
	} else if v.Type() == cty.String && v.IsKnown() && !v.IsNull() && quantity.Looks(v.AsString()) {
		q, err := quantity.Parse(v.AsString())
		if err != nil {
			return nil
		}
		what, unit = fmt.Sprintf("%q", v.AsString()), unitIn(v.AsString())
		if unit == "" {
			unit = quantity.Natural(q.Dimension)
		}
	} else {
		return nil
	}
	return errors.New(what + " is a quantity, and a calculation needs numbers: take number_in(…, \"" + unit +
		"\"), and quantity(…, \"" + unit + "\") to make the result a quantity again")
}

// unitIn gives the unit that a quantity is written with.
func unitIn(text string) string {
	_, u, err := quantity.Split(text)
	if err != nil {
		return ""
	}
	return u.Symbol
}

// pathOf joins parts of a path relative to the folder of the job file.
var pathOf = function.New(&function.Spec{
	Description: "a file path relative to the folder of the job file, from its parts",
	Params:      []function.Parameter{{Name: "first", Type: cty.String}},
	VarParam:    &function.Parameter{Name: "more", Type: cty.String},
	Type:        function.StaticReturnType(cty.String),
	Impl: func(args []cty.Value, _ cty.Type) (cty.Value, error) {
		parts := make([]string, len(args))
		for i, a := range args {
			parts[i] = strings.ReplaceAll(a.AsString(), `\`, "/")
			if parts[i] == "" {
				return cty.NilVal, function.NewArgErrorf(i, "a part of a path is empty")
			}
			if i > 0 && path.IsAbs(parts[i]) {
				return cty.NilVal, function.NewArgErrorf(i, "only the first part may start with a slash")
			}
		}
		return cty.StringVal(path.Join(parts...)), nil
	},
})
