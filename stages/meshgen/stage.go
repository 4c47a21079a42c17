// Package meshgen is the stage that divides the plates and standoffs of a frame into elements.
package meshgen

import (
	"context"
	"errors"

	"hushframe/core/extension"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "mesh".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	length := stage.Type{Kind: stage.Amount, Dimension: "length", Unit: "mm"}
	whole := stage.Type{Kind: stage.Whole}
	zero, four, many := 0.0, 4.0, 360.0
	return stage.Description{
		Name:  "mesh",
		About: "divide plates and standoffs into elements",
		Doc: `Divides every plate into triangles with six nodes. Their sides follow edges and
holes, with the mid-side nodes on the true curves, and the outlines of clamp
discs and footprints. Where a plate is no wider than ten thicknesses the sides
along its edges are short enough for torsion; elsewhere they are as long as
wanted, and shorter near small features. Standoffs become beams.`,
		Arguments: []stage.Argument{
			{Name: "geometry", About: "geometry from import", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"geometry"}}, Required: true},
			{Name: "element", About: "element type of plates", Type: stage.Type{Kind: stage.Text}, Default: "quadratic-triangle", Example: `"quadratic-triangle"`, Choices: elementNames(), Extension: extension.ElementKind},
			{Name: "options", About: "options of that element type, for one from outside", Type: stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Any}},
				OptionsOf: "element", Variants: elementOptions(), Example: `{ layers = 2 }`},
			{Name: "elements", About: "element types of single plates, by name; one from outside has its default options", Type: stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Text}},
				Example: `{ top = "linear-triangle" }`, Choices: elementNames(), Extension: extension.ElementKind},
			{Name: "size", About: "wanted length of triangle sides", Type: length, Default: stage.Quantity{SI: 5e-3, Dimension: "length"}, Example: `"5 mm"`, Above: &zero},
			{Name: "sizes", About: "wanted lengths for single plates, by name", Type: stage.Type{Kind: stage.Map, Element: &length}, Example: `{ arm_fr = "2 mm" }`},
			{Name: "round", About: "least number of sides round a hole", Type: whole, Default: 12.0, Example: "12", Min: &four, Max: &many},
		},
		Outputs: []stage.Output{{Name: "mesh", Kind: "mesh", About: "nodes, triangles, beams and the nodes of patches"}},
		Figures: []stage.Figure{
			{Name: "nodes", About: "number of nodes, or points of solid elements, in use", Type: whole},
			{Name: "triangles", About: "number of triangles", Type: whole},
			{Name: "beams", About: "number of beams", Type: whole},
			{Name: "unknowns", About: "six for each node in use, three for each point of a solid element, before rigid ties take some away", Type: whole},
			{Name: "smallest_angle", About: "smallest angle of any triangle", Type: stage.Type{Kind: stage.Amount, Dimension: "angle", Unit: "deg"}},
			{Name: "narrow_triangles", About: "triangles with an angle below 25 degrees", Type: whole},
			{Name: "shortest_side", About: "shortest side of any triangle", Type: length},
		},
	}
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	a, err := artifact.Open(call.Inputs["geometry"][0].Folder, kinds.Registry())
	if err != nil {
		return nil, err
	}
	g, err := kinds.DecodeGeometry(a)
	if err != nil {
		return nil, err
	}
	o := mesh.Options{
		Size: call.Arguments.SI("size"), Element: call.Arguments.Text("element"),
		Sizes: map[string]float64{}, Elements: map[string]string{},
		PerTurn: call.Arguments.Whole("round"), Threads: call.Threads,
		Progress: func(done, total int) { call.Report.Progress("plates", float64(done)/float64(total)) },
	}
	for name, v := range call.Arguments.Map("elements") {
		o.Elements[name] = v.(string)
	}
	for name, v := range call.Arguments.Map("sizes") {
		o.Sizes[name] = v.(stage.Quantity).SI
	}
	types, err := elementTypes(ctx, call)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("plates", 0)
	m, err := mesh.Build(ctx, g, o)
	if err != nil {
		return nil, explain(err, call.Arguments)
	}
	for p := range m.Parts {
		m.Parts[p].Options = types[m.Parts[p].Element].options
	}
	call.Report.Progress("writing", 1)
	if _, err := artifact.Write(call.Outputs["mesh"], kinds.EncodeMesh(m)); err != nil {
		return nil, err
	}
	return outcome(m, types), nil
}

// explain turns an error of the kernel into a fault with a remedy.
func explain(err error, arguments stage.Arguments) error {
	var p *mesh.Problem
	if !errors.As(err, &p) {
		return fault.From(err)
	}
	f := fault.New(fault.Input, "%s", p.Text).In("mesh plate", p.Part)
	_, sized := arguments.Map("sizes")[p.Part]
	_, typed := arguments.Map("elements")[p.Part]
	switch {
	case p.Contact != "":
		return fault.New(fault.Input, "%s", p.Text).In("mesh contact", p.Contact).
			Do("see whether its plates lie on each other there: at is the LOWER face of a plate; ends of a line are airframe x, y, z")
	case p.Part == "":
		return fault.New(fault.Input, "%s", p.Text).In("mesh", "").Of("size")
	case p.Patch != "":
		return f.At("patch %s", p.Patch).Do("move it onto the plate, or make it larger than the hole it surrounds")
	case p.Unknown && sized:
		return f.Of("sizes").Do("use the name of a plate in the airframe file")
	case p.Unknown && typed:
		return f.Of("elements").Do("use the name of a plate in the airframe file")
	case p.Size && sized:
		return f.Of("sizes").Do("choose a larger size")
	case p.Size:
		return f.Of("size").Do("choose a larger size")
	}
	return f.Do("mend the cut file of this plate")
}
