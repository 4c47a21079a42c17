package stage

import (
	"fmt"
	"sort"
)

// Arguments are the constant values of a call, by name. The Go types are
// those of Value. Accessors panic on a wrong type, because the host has
// checked the values against the description before the call.
type Arguments map[string]any

// Has reports whether a value (given or default) is there.
func (a Arguments) Has(name string) bool { v, ok := a[name]; return ok && v != nil }

// Text gives a text, file or target; "" when left out.
func (a Arguments) Text(name string) string { return get[string](a, name) }

// Number gives a number; 0 when left out.
func (a Arguments) Number(name string) float64 { return get[float64](a, name) }

// Whole gives a whole number; 0 when left out.
func (a Arguments) Whole(name string) int { return int(get[float64](a, name)) }

// Truth gives a truth value; false when left out.
func (a Arguments) Truth(name string) bool { return get[bool](a, name) }

// SI gives a quantity in SI units; 0 when left out.
func (a Arguments) SI(name string) float64 { return get[Quantity](a, name).SI }

// List gives a list; nil when left out.
func (a Arguments) List(name string) []any { return get[[]any](a, name) }

// Map gives a map or object; nil when left out.
func (a Arguments) Map(name string) map[string]any { return get[map[string]any](a, name) }

// Texts gives a list of texts.
func (a Arguments) Texts(name string) []string {
	var out []string
	for _, v := range a.List(name) {
		out = append(out, v.(string))
	}
	return out
}

// SIs gives a list of quantities in SI units.
func (a Arguments) SIs(name string) []float64 {
	var out []float64
	for _, v := range a.List(name) {
		out = append(out, v.(Quantity).SI)
	}
	return out
}

// Names lists the arguments that have a value, sorted.
func (a Arguments) Names() []string {
	var names []string
	for n, v := range a {
		if v != nil {
			names = append(names, n)
		}
	}
	sort.Strings(names)
	return names
}

func get[T any](a Arguments, name string) T {
	var zero T
	v, ok := a[name]
	if !ok || v == nil {
		return zero
	}
	t, ok := v.(T)
	if !ok {
		panic(fmt.Sprintf("stage: argument %q is %T, not %T", name, v, zero))
	}
	return t
}
