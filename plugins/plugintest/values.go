package plugintest

import (
	"path"
	"reflect"

	"hushframe/core/pipeline/stage"
)

// withDefaults fills in what a job would, with the Go types that cross the boundary.
func withDefaults(list []stage.Argument, given stage.Arguments) stage.Arguments {
	out := stage.Arguments{}
	for _, a := range list {
		if a.Default != nil && !takesArtifacts(a.Type) {
			out[a.Name] = plain(a.Default)
		}
	}
	for n, v := range given {
		out[n] = plain(v)
	}
	return out
}

// plain gives a value the Go types that cross the boundary.
func plain(v any) any {
	switch v := v.(type) {
	case int:
		return float64(v)
	case []string:
		var out []any
		for _, e := range v {
			out = append(out, e)
		}
		return out
	case []any:
		out := make([]any, len(v))
		for i, e := range v {
			out[i] = plain(e)
		}
		return out
	case map[string]any:
		out := map[string]any{}
		for k, e := range v {
			out[k] = plain(e)
		}
		return out
	}
	return v
}

// others gives some values that an argument may have besides the usual one, nil if that is not known: larger and
// smaller, none and less than none where the description allows it, other choices, shorter lists.
func others(a stage.Argument, t stage.Type, usual any) (values []any) {
	add := func(v any) {
		for _, old := range append([]any{usual}, values...) {
			if reflect.DeepEqual(v, old) {
				return
			}
		}
		values = append(values, v)
	}
	inside := func(x float64) bool {
		return (a.Min == nil || x >= *a.Min) && (a.Max == nil || x <= *a.Max) && (a.Above == nil || x > *a.Above)
	}
	numbers := func(wrap func(float64) any, candidates ...float64) {
		for _, x := range candidates {
			if inside(x) {
				add(wrap(x))
			}
		}
	}
	least := 0.0
	if a.Min != nil {
		least = *a.Min
	}
	switch t.Kind {
	case stage.Truth:
		v, _ := usual.(bool)
		add(!v)
	case stage.Text:
		for _, c := range a.Choices {
			add(c)
		}
		if v, _ := usual.(string); len(a.Choices) == 0 {
			add(v + "-other")
		}
	case stage.Target:
		if v, _ := usual.(string); v != "" {
			add(path.Join(path.Dir(v), "other-"+path.Base(v)))
		}
	case stage.Whole:
		at, _ := usual.(float64)
		numbers(func(x float64) any { return x }, at+1, at-1, least, -1)
	case stage.Number:
		at, _ := usual.(float64)
		numbers(func(x float64) any { return x }, 2*at, at+1, at/2, at-1, least, -1)
	case stage.Amount:
		q, known := usual.(stage.Quantity)
		if !known && a.Min == nil && a.Above == nil {
			return nil // no idea of its size
		}
		if q.SI == 0 {
			q.SI = 1e9 // its halves find the range
			for a.Max != nil && q.SI > *a.Max && q.SI > 1e-9 {
				q.SI /= 10
			}
		}
		numbers(func(x float64) any { return stage.Quantity{SI: x, Dimension: t.Dimension} }, 2*q.SI, q.SI/2, least, -q.SI)
	case stage.List:
		list, _ := usual.([]any)
		add([]any{})
		if len(list) > 1 {
			add(list[:len(list)-1])
		}
		if len(list) > 0 && t.Element != nil {
			for _, v := range others(a, *t.Element, list[0]) {
				add(append([]any{v}, list[1:]...))
			}
		}
	case stage.Map:
		m, _ := usual.(map[string]any)
		add(map[string]any{})
		for _, k := range sortedKeys(m) {
			if t.Element != nil {
				for _, v := range others(a, *t.Element, m[k]) {
					add(with(m, k, v))
				}
			}
		}
	case stage.Object:
		m, _ := usual.(map[string]any)
		for _, f := range t.Fields {
			at := m[f.Name]
			if at == nil {
				at = plain(f.Default)
			}
			for _, v := range others(f, f.Type, at) {
				add(with(m, f.Name, v))
			}
		}
	}
	return values
}

// with copies a map and sets one value.
func with[M ~map[string]V, V any](m M, name string, v V) M {
	out := M{}
	for k, x := range m {
		out[k] = x
	}
	out[name] = v
	return out
}
