package meshgen

import (
	"context"
	"encoding/json"
	"maps"
	"slices"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// builtin lists the element types in this executable.
func builtin() []extension.Element {
	var all []extension.Element
	for _, t := range shell.Types() {
		all = append(all, extension.FromType(t))
	}
	return all
}

// elementNames lists the element types that plates can have without an extension.
func elementNames() []string {
	var names []string
	for _, e := range builtin() {
		names = append(names, e.Describe().Name)
	}
	return names
}

func elementOptions() map[string][]stage.Argument {
	out := map[string][]stage.Argument{}
	for _, name := range elementNames() {
		out[name] = nil
	}
	return out
}

// elementType is what the mesh needs of an element type.
type elementType struct {
	description element.Description
	options     string // as JSON, "" for none
}

// elementTypes asks every element type of the job for its shape, so that one that cannot be is found before meshing.
func elementTypes(ctx context.Context, call *stage.Call) (map[string]elementType, error) {
	types := map[string]elementType{}
	main := call.Arguments.Text("element")
	add := func(name, argument string) error {
		if _, done := types[name]; done {
			return nil
		}
		e, err := extension.FindElement(ctx, name, builtin(), call)
		if err != nil {
			return fault.From(err).Of(argument)
		}
		options := stage.Arguments(call.Arguments.Map("options"))
		if name != main {
			options = defaults(e.Describe().Arguments)
		}
		t, err := extension.Bind(ctx, e, options)
		if err != nil {
			f := fault.From(err)
			if f.Argument != "" && f.Argument != "options" { // one of its options
				f = f.Of("options")
			}
			return f
		}
		x := elementType{description: t.Describe()}
		if len(options) > 0 {
			data, err := stage.EncodeValues(options)
			if err != nil {
				return fault.New(fault.Internal, "%v", err)
			}
			x.options = string(data)
		}
		types[name] = x
		return nil
	}
	if err := add(main, "element"); err != nil {
		return nil, err
	}
	for _, plate := range slices.Sorted(maps.Keys(call.Arguments.Map("elements"))) {
		if err := add(call.Arguments.Map("elements")[plate].(string), "elements"); err != nil {
			f := fault.From(err)
			if f.Op == "" {
				f = f.In("mesh plate", plate)
			}
			return nil, f
		}
	}
	return types, nil
}

func defaults(list []stage.Argument) stage.Arguments {
	out := stage.Arguments{}
	for _, a := range list {
		if a.Default == nil {
			continue
		}
		data, err := json.Marshal(a) // the JSON form turns whole numbers into those of arguments
		var plain stage.Argument
		if err == nil && json.Unmarshal(data, &plain) == nil {
			out[a.Name] = plain.Default
		}
	}
	return out
}

// unknowns counts nodes or points that have unknowns, and the unknowns.
func unknowns(m *mesh.Mesh, types map[string]elementType) (places, count int) {
	type point struct {
		node   int32
		height float64
	}
	nodes, points := map[int32]bool{}, map[point]bool{}
	for t, list := range m.Triangles {
		d := types[m.Parts[m.TrianglePart[t]].Element].description
		for _, p := range d.Points {
			points[point{list[p.Node], p.Height}] = true
		}
		if !d.Solid() {
			for _, v := range list[:d.Nodes] {
				nodes[v] = true
			}
		}
	}
	for _, b := range m.Beams {
		nodes[b[0]], nodes[b[1]] = true, true
	}
	return len(nodes) + len(points), element.NodeUnknowns*len(nodes) + element.PointUnknowns*len(points)
}
