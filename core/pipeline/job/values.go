package job

import (
	"fmt"
	"math"
	"math/big"
	"reflect"
	"sort"
	"strconv"
	"sync"

	"github.com/zclconf/go-cty/cty"
	"github.com/zclconf/go-cty/cty/convert"

	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// extension keys the data of our capsule types.
type extension struct{}

type quantityMark struct{ dimension string }
type artifactMark struct{ kind string }

var capsules struct {
	sync.Mutex
	types map[any]cty.Type
}

// capsule gives the one type for a mark, so that equal dimensions have equal
// types.
func capsule(mark any, make func() cty.Type) cty.Type {
	capsules.Lock()
	defer capsules.Unlock()
	if t, ok := capsules.types[mark]; ok {
		return t
	}
	if capsules.types == nil {
		capsules.types = map[any]cty.Type{}
	}
	t := make()
	capsules.types[mark] = t
	return t
}

// quantityType is the type of quantities of a dimension. Several names of one
// dimension give one type.
func quantityType(dimension string) cty.Type {
	name := quantity.Canonical(dimension)
	mark := quantityMark{name}
	return capsule(mark, func() cty.Type {
		return cty.CapsuleWithOps(quantity.Article(name), reflect.TypeFor[stage.Quantity](), &cty.CapsuleOps{
			ExtensionData: func(key any) any {
				if key == (extension{}) {
					return mark
				}
				return nil
			},
			RawEquals: func(a, b any) bool { return a.(*stage.Quantity).SI == b.(*stage.Quantity).SI },
			HashKey:   func(v any) string { return strconv.FormatFloat(v.(*stage.Quantity).SI, 'g', -1, 64) },
			ConversionFrom: func(to cty.Type) func(any, cty.Path) (cty.Value, error) {
				if to != cty.String {
					return nil
				}
				return func(v any, _ cty.Path) (cty.Value, error) {
					return cty.StringVal(quantity.Exact(*v.(*stage.Quantity))), nil
				}
			},
		})
	})
}

func quantityValue(q stage.Quantity) cty.Value {
	return cty.CapsuleVal(quantityType(q.Dimension), &q)
}

// dimensionOf gives the dimension of a quantity type.
func dimensionOf(t cty.Type) (string, bool) {
	if !t.IsCapsuleType() {
		return "", false
	}
	m, ok := t.CapsuleExtensionData(extension{}).(quantityMark)
	return m.dimension, ok
}

// Quantity gives the quantity in a known value of a quantity type.
func Quantity(v cty.Value) (stage.Quantity, bool) {
	if _, ok := dimensionOf(v.Type()); !ok || v.IsNull() || !v.IsKnown() {
		return stage.Quantity{}, false
	}
	return *v.EncapsulatedValue().(*stage.Quantity), true
}

func artifactType(kind string) cty.Type {
	mark := artifactMark{kind}
	return capsule(mark, func() cty.Type {
		return cty.CapsuleWithOps("artifact of kind "+kind, reflect.TypeFor[ArtifactRef](), &cty.CapsuleOps{
			ExtensionData: func(key any) any {
				if key == (extension{}) {
					return mark
				}
				return nil
			},
			RawEquals: func(a, b any) bool { return *a.(*ArtifactRef) == *b.(*ArtifactRef) },
			HashKey:   func(v any) string { return v.(*ArtifactRef).String() },
		})
	})
}

func kindOf(t cty.Type) (string, bool) {
	if !t.IsCapsuleType() {
		return "", false
	}
	m, ok := t.CapsuleExtensionData(extension{}).(artifactMark)
	return m.kind, ok
}

// figureType is the type of a figure in expressions.
func figureType(t stage.Type) cty.Type {
	switch t.Kind {
	case stage.Text, stage.File, stage.Target:
		return cty.String
	case stage.Number, stage.Whole:
		return cty.Number
	case stage.Truth:
		return cty.Bool
	case stage.Amount:
		return quantityType(t.Dimension)
	case stage.List:
		if t.Element != nil {
			return cty.List(figureType(*t.Element))
		}
	case stage.Map:
		if t.Element != nil {
			return cty.Map(figureType(*t.Element))
		}
	case stage.Object:
		fields := map[string]cty.Type{}
		for _, f := range t.Fields {
			fields[f.Name] = figureType(f.Type)
		}
		return cty.Object(fields)
	}
	return cty.DynamicPseudoType
}

// figureValue gives a reported figure its declared type. Nil and NaN become
// null: the stage has no value in this run.
func figureValue(v any, t stage.Type) (cty.Value, error) {
	want := figureType(t)
	if x, ok := v.(float64); v == nil || ok && math.IsNaN(x) {
		return cty.NullVal(want), nil
	}
	wrong := fmt.Errorf("it is %s where %s is declared", describeGo(v), describeType(t))
	switch t.Kind {
	case stage.Text, stage.File, stage.Target:
		if s, ok := v.(string); ok {
			return cty.StringVal(s), nil
		}
		return cty.NilVal, wrong
	case stage.Number, stage.Whole:
		if x, ok := v.(float64); ok {
			return numberValue(x), nil
		}
		return cty.NilVal, wrong
	case stage.Truth:
		if b, ok := v.(bool); ok {
			return cty.BoolVal(b), nil
		}
		return cty.NilVal, wrong
	case stage.Amount:
		q, ok := v.(stage.Quantity)
		switch {
		case !ok || !quantity.Same(q.Dimension, t.Dimension):
			return cty.NilVal, wrong
		case math.IsNaN(q.SI):
			return cty.NullVal(want), nil
		}
		return quantityValue(stage.Quantity{SI: q.SI, Dimension: t.Dimension}), nil
	case stage.List:
		list, ok := v.([]any)
		if !ok || t.Element == nil {
			return cty.NilVal, wrong
		}
		if len(list) == 0 {
			return cty.ListValEmpty(want.ElementType()), nil
		}
		values := make([]cty.Value, len(list))
		for i, e := range list {
			x, err := figureValue(e, *t.Element)
			if err != nil {
				return cty.NilVal, fmt.Errorf("in element %d %w", i, err)
			}
			values[i] = x
		}
		if want.HasDynamicTypes() {
			return cty.TupleVal(values), nil
		}
		return cty.ListVal(values), nil
	case stage.Map:
		m, ok := v.(map[string]any)
		if !ok || t.Element == nil {
			return cty.NilVal, wrong
		}
		if len(m) == 0 {
			return cty.MapValEmpty(want.ElementType()), nil
		}
		values := map[string]cty.Value{}
		for _, k := range sorted(m) {
			x, err := figureValue(m[k], *t.Element)
			if err != nil {
				return cty.NilVal, fmt.Errorf("in %q %w", k, err)
			}
			values[k] = x
		}
		if want.HasDynamicTypes() {
			return cty.ObjectVal(values), nil
		}
		return cty.MapVal(values), nil
	case stage.Object:
		m, ok := v.(map[string]any)
		if !ok {
			return cty.NilVal, wrong
		}
		values := map[string]cty.Value{}
		for _, f := range t.Fields {
			x, err := figureValue(m[f.Name], f.Type)
			if err != nil {
				return cty.NilVal, fmt.Errorf("in %q %w", f.Name, err)
			}
			values[f.Name] = x
		}
		return cty.ObjectVal(values), nil
	}
	return fromGo(v), nil
}

// fromGo gives any value of package stage the type it has by itself.
func fromGo(v any) cty.Value {
	switch x := v.(type) {
	case string:
		return cty.StringVal(x)
	case bool:
		return cty.BoolVal(x)
	case float64:
		return numberValue(x)
	case stage.Quantity:
		return quantityValue(x)
	case []any:
		values := make([]cty.Value, len(x))
		for i := range x {
			values[i] = fromGo(x[i])
		}
		return cty.TupleVal(values)
	case map[string]any:
		values := map[string]cty.Value{}
		for k := range x {
			values[k] = fromGo(x[k])
		}
		return cty.ObjectVal(values)
	}
	return cty.NullVal(cty.DynamicPseudoType)
}

func numberValue(x float64) cty.Value {
	switch {
	case math.IsNaN(x):
		return cty.NullVal(cty.Number)
	case math.IsInf(x, 1):
		return cty.PositiveInfinity
	case math.IsInf(x, -1):
		return cty.NegativeInfinity
	}
	// The shortest decimal keeps 0.1 the 0.1 that a file would say.
	v, err := cty.ParseNumberVal(strconv.FormatFloat(x, 'g', -1, 64))
	if err != nil {
		return cty.NumberFloatVal(x)
	}
	return v
}

func float(v cty.Value) float64 {
	x, _ := v.AsBigFloat().Float64()
	return x
}

// renderValue writes a known value as text of the job language.
func renderValue(v cty.Value) string {
	t := v.Type()
	switch {
	case v.IsNull():
		return "null"
	case !v.IsKnown():
		return "(not known yet)"
	case t == cty.String:
		return strconv.Quote(v.AsString())
	case t == cty.Bool:
		return strconv.FormatBool(v.True())
	case t == cty.Number:
		return renderNumber(v.AsBigFloat())
	}
	if q, ok := Quantity(v); ok {
		return strconv.Quote(quantity.Exact(q))
	}
	if _, ok := kindOf(t); ok {
		return v.EncapsulatedValue().(*ArtifactRef).String()
	}
	if !v.CanIterateElements() {
		return t.FriendlyName()
	}
	text, sep := "", ""
	object := t.IsObjectType() || t.IsMapType()
	for it := v.ElementIterator(); it.Next(); sep = ", " {
		k, e := it.Element()
		text += sep
		if object {
			if s, err := convert.Convert(k, cty.String); err == nil {
				text += s.AsString() + " = "
			}
		}
		text += renderValue(e)
	}
	if object {
		return "{" + text + "}"
	}
	return "[" + text + "]"
}

func renderNumber(x *big.Float) string {
	f, _ := x.Float64()
	if f == math.Trunc(f) && math.Abs(f) < 1e15 {
		return strconv.FormatFloat(f, 'f', -1, 64)
	}
	return strconv.FormatFloat(f, 'g', -1, 64)
}

func sorted[V any](m map[string]V) []string {
	names := make([]string, 0, len(m))
	for n := range m {
		names = append(names, n)
	}
	sort.Strings(names)
	return names
}
