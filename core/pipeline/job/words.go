package job

import (
	"fmt"
	"strconv"
	"strings"

	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// suggest names the nearest candidate, or lists all when none is near.
func suggest(name string, candidates []string, are string) string {
	if near := nearest.Name(name, candidates); near != "" {
		return fmt.Sprintf("; did you mean %q?", near)
	}
	if len(candidates) == 0 {
		return "; there are none"
	}
	return "; " + are + " " + enumerate(quoted(candidates))
}

func quoted(names []string) []string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = strconv.Quote(n)
	}
	return out
}

// enumerate joins names with commas and a last "and"; a very long list is cut.
func enumerate(names []string) string { return joined(names, " and ") }

// oneOf does the same with "or".
func oneOf(names []string) string { return joined(names, " or ") }

func joined(names []string, last string) string {
	const most = 60
	if len(names) > most {
		return strings.Join(names[:most], ", ") + fmt.Sprintf(" and %d more", len(names)-most)
	}
	if len(names) < 2 {
		return strings.Join(names, "")
	}
	n := len(names) - 1
	return strings.Join(names[:n], ", ") + last + names[n]
}

// detail gives what a fault says, with its remedy as a sentence of its own.
func detail(f *fault.Error) string {
	e := *f
	e.Remedy = ""
	text := e.Error()
	if f.Remedy == "" {
		return text
	}
	return text + "; " + f.Remedy
}

// describeType says in words what a type is: "a length", "a list of texts".
func describeType(t stage.Type) string {
	switch t.Kind {
	case stage.Amount:
		return quantity.Article(t.Dimension)
	case stage.Whole:
		return "a whole number"
	case stage.Truth:
		return "true or false"
	case stage.List:
		if t.Element != nil {
			return "a list of " + plural(*t.Element)
		}
		return "a list"
	case stage.Map:
		if t.Element != nil {
			return "a map of " + plural(*t.Element)
		}
		return "a map"
	case stage.Object:
		return "an object"
	case stage.File:
		return "a file path"
	case stage.Target:
		return "a path to write to"
	case stage.Artifact:
		return "an artifact of kind " + oneOf(t.Kinds)
	case stage.Any:
		return "any value"
	}
	return "a " + string(t.Kind)
}

func plural(t stage.Type) string {
	switch t.Kind {
	case stage.Amount:
		return "quantities (" + t.Dimension + ")"
	case stage.Whole:
		return "whole numbers"
	case stage.Truth:
		return "truth values"
	case stage.File, stage.Target:
		return "paths"
	case stage.Artifact:
		return "artifacts (" + oneOf(t.Kinds) + ")"
	case stage.Any:
		return "values"
	case stage.List, stage.Map:
		if t.Element != nil {
			return string(t.Kind) + "s of " + plural(*t.Element)
		}
	}
	return string(t.Kind) + "s"
}

// describeValue says what a value is, with the value when it is short.
func describeValue(v cty.Value) string {
	t := v.Type()
	switch {
	case v.IsNull():
		return "null"
	case t == cty.DynamicPseudoType:
		return "a value not known yet"
	}
	if kind, ok := kindOf(t); ok {
		if v.IsKnown() {
			return v.EncapsulatedValue().(*ArtifactRef).String() + ", an artifact of kind " + kind
		}
		return "an artifact of kind " + kind
	}
	if d, ok := dimensionOf(t); ok {
		if q, ok := Quantity(v); ok {
			return fmt.Sprintf("%q, %s", quantity.Exact(q), quantity.Article(d))
		}
		return quantity.Article(d)
	}
	what := ""
	switch t {
	case cty.String:
		what = "text"
	case cty.Number:
		what = "number"
	case cty.Bool:
		what = "truth value"
	}
	switch {
	case what != "" && v.IsKnown():
		return "the " + what + " " + short(renderValue(v))
	case what != "":
		return "a " + what
	case t.IsTupleType() || t.IsListType() || t.IsSetType():
		return "a list"
	case t.IsObjectType():
		return "an object"
	case t.IsMapType():
		return "a map"
	}
	return t.FriendlyName()
}

func describeGo(v any) string {
	switch x := v.(type) {
	case string:
		return "a text"
	case bool:
		return "a truth value"
	case float64, int:
		return "a number"
	case stage.Quantity:
		if quantity.Known(x.Dimension) != nil {
			return fmt.Sprintf("a quantity of the unknown dimension %q", x.Dimension)
		}
		return quantity.Article(x.Dimension)
	case []any:
		return "a list"
	case map[string]any:
		return "an object"
	case nil:
		return "nothing"
	}
	return fmt.Sprintf("a Go %T", v)
}

func short(s string) string {
	r := []rune(s)
	if len(r) > 60 {
		return string(r[:57]) + "..."
	}
	return s
}
