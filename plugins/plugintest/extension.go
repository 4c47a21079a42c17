package plugintest

import (
	"encoding/json"
	"fmt"
	"reflect"

	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/stage"
)

// checkExtension holds what an element type or reader says of itself to what jobs and help need.
func checkExtension(d, again stage.Extension, kind string) (problems []string) {
	bad := func(format string, args ...any) {
		problems = append(problems, "description: "+fmt.Sprintf(format, args...))
	}
	if !reflect.DeepEqual(d, again) {
		bad("a second one differs; it must be constant")
	}
	data, err := json.Marshal(d)
	var back stage.Extension
	if err == nil {
		err = json.Unmarshal(data, &back)
	}
	if data2, _ := json.Marshal(back); err != nil || string(data2) != string(data) {
		bad("it does not survive the boundary: %v", err)
	}
	if d.Kind != kind {
		bad("its kind is %q, not %q", d.Kind, kind)
	}
	if !name.MatchString(d.Name) {
		bad("%q is no name: lower-case words joined by - or _", d.Name)
	}
	checkAbout(bad, "the "+kind, d.About)
	for _, a := range d.Arguments {
		checkAbout(bad, "option "+a.Name, a.About)
		if a.Type.Kind == stage.Amount && a.Type.Unit == "" {
			bad("option %s has no unit to be shown in", a.Name)
		}
	}
	if err := job.CheckExtension(d); err != nil {
		bad("%v", err)
	}
	return problems
}

// withDefaults fills in what a job would.
func withDefaults(list []stage.Argument, given stage.Arguments) stage.Arguments {
	out := stage.Arguments{}
	for _, a := range list {
		if a.Default != nil {
			out[a.Name] = a.Default
			if n, ok := a.Default.(int); ok {
				out[a.Name] = float64(n)
			}
		}
	}
	for n, v := range given {
		out[n] = v
	}
	return out
}

// others gives some values that an argument may have besides the usual one.
func others(a stage.Argument, usual any) (values []any) {
	add := func(v any) {
		if !reflect.DeepEqual(v, usual) {
			values = append(values, v)
		}
	}
	inside := func(x float64) bool {
		return (a.Min == nil || x >= *a.Min) && (a.Max == nil || x <= *a.Max) && (a.Above == nil || x > *a.Above)
	}
	number := func(wrap func(float64) any, at float64) {
		candidates := []float64{at * 2, at + 1, at / 2, at - 1}
		if a.Min != nil {
			candidates = append(candidates, *a.Min)
		}
		for _, x := range candidates {
			if inside(x) && len(values) < 2 {
				add(wrap(x))
			}
		}
	}
	switch a.Type.Kind {
	case stage.Truth:
		v, _ := usual.(bool)
		add(!v)
	case stage.Text:
		for _, c := range a.Choices {
			add(c)
		}
	case stage.Whole:
		at, _ := usual.(float64)
		candidates := []float64{at + 1, at - 1}
		for _, x := range candidates {
			if inside(x) {
				add(x)
			}
		}
	case stage.Number:
		at, _ := usual.(float64)
		number(func(x float64) any { return x }, at)
	case stage.Amount:
		q, _ := usual.(stage.Quantity)
		if q.SI == 0 && a.Above == nil && a.Min == nil {
			return nil // no idea of its size
		}
		if q.SI == 0 {
			q.SI = 1e9
		}
		number(func(x float64) any { return stage.Quantity{SI: x, Dimension: a.Type.Dimension} }, q.SI)
	}
	return values
}
