package job

import (
	"sort"
	"strings"

	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/stage"
)

func (d *decoder) list(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	vt := v.Type()
	if !vt.IsTupleType() && !vt.IsListType() && !vt.IsSetType() {
		return d.wrongType(p, v, a, t, "write it in brackets: [ … ]")
	}
	element := stage.Type{Kind: stage.Any}
	if t.Element != nil {
		element = *t.Element
	}
	if !v.IsKnown() {
		d.pending = true
		if !vt.IsTupleType() {
			d.decode(cty.UnknownVal(vt.ElementType()), at{p.name + "[…]", nil, p.rng}, a, element)
		}
		return nil
	}
	values := v.AsValueSlice()
	out := make([]any, len(values))
	for i, e := range values {
		out[i] = d.decode(e, p.element(i, len(values)), a, element)
	}
	return out
}

func (d *decoder) mapping(v cty.Value, p at, a stage.Argument, t stage.Type) any {
	vt := v.Type()
	if !vt.IsObjectType() && !vt.IsMapType() {
		return d.wrongType(p, v, a, t, "write it in braces: { name = value }")
	}
	element := stage.Type{Kind: stage.Any}
	if t.Element != nil {
		element = *t.Element
	}
	if !v.IsKnown() {
		d.pending = true
		return nil
	}
	out := map[string]any{}
	members := v.AsValueMap()
	for _, k := range sorted(members) {
		q, _ := p.member(k)
		out[k] = d.decode(members[k], q, a, element)
	}
	return out
}

func (d *decoder) object(v cty.Value, p at, t stage.Type) any {
	vt := v.Type()
	if !vt.IsObjectType() && !vt.IsMapType() {
		return d.wrongType(p, v, stage.Argument{}, t, "write it in braces, with "+enumerate(argumentNames(t.Fields)))
	}
	if !v.IsKnown() {
		d.pending = true
		return nil
	}
	members := v.AsValueMap()
	out := map[string]any{}
	for _, k := range sorted(members) {
		if !hasArgument(t.Fields, k) {
			_, key := p.member(k)
			d.wrong(key, "Unknown member", "%s has no member %q%s", p.name, k, suggest(k, argumentNames(t.Fields), "its members are"))
		}
	}
	for _, f := range t.Fields {
		m, ok := members[f.Name]
		if !ok || m.IsNull() {
			if f.Required {
				d.wrong(p.rng, "Missing member", "%s needs %s, %s", p.name, f.Name, withAbout(f))
			} else if f.Default != nil {
				out[f.Name] = plain(f.Default)
			}
			continue
		}
		q, _ := p.member(f.Name)
		out[f.Name] = d.decode(m, q, f, f.Type)
	}
	return out
}

func withAbout(a stage.Argument) string {
	text := describeType(a.Type)
	if a.About != "" {
		text += " (" + a.About + ")"
	}
	return text
}

func hasArgument(arguments []stage.Argument, name string) bool {
	for _, a := range arguments {
		if a.Name == name {
			return true
		}
	}
	return false
}

func (d *decoder) artifact(v cty.Value, p at, t stage.Type) {
	kind, ok := kindOf(v.Type())
	if !ok {
		text := ""
		if s := stringOf(v); s != "" {
			s = strings.TrimPrefix(s, "stage.")
			label, _, _ := strings.Cut(s, ".")
			if near := nearest.Name(label, d.scope.labels); near != "" {
				text = "; artifacts are linked by reference, not by text"
			}
		}
		d.wrong(p.rng, "Wrong type", "%s takes %s, not %s%s; %s", p.name, describeType(t), describeValue(v), text, d.fitting(t.Kinds))
		return
	}
	if !d.known(v) {
		return
	}
	ref := *v.EncapsulatedValue().(*ArtifactRef)
	for _, k := range t.Kinds {
		if k == kind {
			d.refs = append(d.refs, ref)
			return
		}
	}
	if len(t.Kinds) == 0 {
		d.refs = append(d.refs, ref)
		return
	}
	d.wrong(p.rng, "Wrong artifact", "%s takes %s, but %s is an artifact of kind %s; %s", p.name, describeType(t), ref, kind, d.fitting(t.Kinds))
}

// fitting lists what in the job is of one of the kinds.
func (d *decoder) fitting(kinds []string) string {
	var fits []string
	for _, label := range d.scope.labels {
		st := d.scope.stages[label]
		if label == d.self || !st.described {
			continue
		}
		for _, o := range st.Description.Outputs {
			for _, k := range kinds {
				if k == o.Kind {
					fits = append(fits, ArtifactRef{label, o.Name}.String())
				}
			}
		}
	}
	if len(fits) == 0 {
		return "no other stage of this job writes one"
	}
	return "what fits here is " + oneOf(fits)
}

// any takes a value of any type as it is.
func (d *decoder) any(v cty.Value, p at) any {
	if v.IsNull() {
		return nil
	}
	t := v.Type()
	if kind, ok := kindOf(t); ok {
		d.wrong(p.rng, "Artifact not allowed here", "%s takes plain values, not an artifact of kind %s", p.name, kind)
		return nil
	}
	if !d.known(v) {
		return nil
	}
	if q, ok := Quantity(v); ok {
		return q
	}
	switch {
	case t == cty.String:
		return v.AsString()
	case t == cty.Bool:
		return v.True()
	case t == cty.Number:
		return float(v)
	case t.IsObjectType() || t.IsMapType():
		out := map[string]any{}
		members := v.AsValueMap()
		for _, k := range sorted(members) {
			q, _ := p.member(k)
			out[k] = d.any(members[k], q)
		}
		return out
	case t.IsTupleType() || t.IsListType() || t.IsSetType():
		values := v.AsValueSlice()
		out := make([]any, len(values))
		for i, e := range values {
			out[i] = d.any(e, p.element(i, len(values)))
		}
		return out
	}
	d.wrong(p.rng, "Wrong type", "%s cannot take %s", p.name, t.FriendlyName())
	return nil
}

// plain gives a default the Go types of package stage: whole numbers of a
// description become float64, and lists are copied.
func plain(v any) any {
	switch x := v.(type) {
	case int:
		return float64(x)
	case []any:
		out := make([]any, len(x))
		for i := range x {
			out[i] = plain(x[i])
		}
		return out
	case []string:
		out := make([]any, len(x))
		for i := range x {
			out[i] = x[i]
		}
		return out
	case map[string]any:
		out := map[string]any{}
		for k := range x {
			out[k] = plain(x[k])
		}
		return out
	}
	return v
}

func sortedSet(set map[string]bool) []string {
	var names []string
	for n := range set {
		names = append(names, n)
	}
	sort.Strings(names)
	return names
}
