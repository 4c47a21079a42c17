// Package jobtest describes stages shaped like the built-in ones, so that the
// job language can be tested without any of them.
package jobtest

import (
	"context"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

func ptr(x float64) *float64 { return &x }

func amount(dimension, unit string) stage.Type {
	return stage.Type{Kind: stage.Amount, Dimension: dimension, Unit: unit}
}

func list(of stage.Type) stage.Type { return stage.Type{Kind: stage.List, Element: &of} }

func of(kinds ...string) stage.Type { return stage.Type{Kind: stage.Artifact, Kinds: kinds} }

var (
	text   = stage.Type{Kind: stage.Text}
	number = stage.Type{Kind: stage.Number}
)

// Stages are the descriptions, by name.
var Stages = map[string]stage.Description{
	"import": {
		Name: "import", About: "reads an airframe",
		Arguments: []stage.Argument{
			{Name: "airframe", Type: stage.Type{Kind: stage.File}, Required: true, About: "airframe file", Example: `"airframe.hcl"`},
			{Name: "with", Type: stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Any}}, About: "values for its inputs"},
		},
		Outputs: []stage.Output{{Name: "geometry", Kind: "geometry"}, {Name: "properties", Kind: "properties"}},
		Figures: []stage.Figure{
			{Name: "mass", Type: amount("mass", "g")},
			{Name: "plates", Type: stage.Type{Kind: stage.Whole}},
		},
	},
	"mesh": {
		Name: "mesh", About: "triangles on every plate",
		Arguments: []stage.Argument{
			{Name: "geometry", Type: of("geometry"), Required: true, About: "what import wrote"},
			{Name: "element", Type: text, Choices: []string{"linear-triangle", "quadratic-triangle"}, Default: "quadratic-triangle"},
			{Name: "size", Type: amount("length", "mm"), Above: ptr(0), Max: ptr(0.1), Default: stage.Quantity{SI: 0.003, Dimension: "length"}, Example: `"3 mm"`, About: "edge length"},
			{Name: "growth", Type: number, Min: ptr(1), Max: ptr(4), Default: 1.3, Example: "1.3"},
			{Name: "rows", Type: stage.Type{Kind: stage.Whole}, Min: ptr(1), Default: 2, Example: "2"},
			{Name: "by_part", Type: stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Text}}},
		},
		Outputs: []stage.Output{{Name: "mesh", Kind: "mesh"}},
		Figures: []stage.Figure{{Name: "unknowns", Type: stage.Type{Kind: stage.Whole}}},
	},
	"solve": {
		Name: "solve", About: "modes of the free airframe",
		Arguments: []stage.Argument{
			{Name: "mesh", Type: of("mesh"), Required: true},
			{Name: "properties", Type: of("properties"), Required: true},
			{Name: "up_to", Type: amount("frequency", "Hz"), Above: ptr(0), Required: true, Example: `"750 Hz"`, About: "highest mode wanted"},
			{Name: "hover_speed", Type: amount("rotational speed", "rpm"), Min: ptr(0), Example: `"16000 rpm"`},
		},
		Outputs: []stage.Output{{Name: "modes", Kind: "modes"}},
		Figures: []stage.Figure{
			{Name: "smallest_gap_pitch", Type: amount("frequency", "Hz")},
			{Name: "lowest", Type: amount("frequency", "Hz")},
			{Name: "count", Type: stage.Type{Kind: stage.Whole}},
			{Name: "strongest_part", Type: text},
			{Name: "modes", Type: list(stage.Type{Kind: stage.Object, Fields: []stage.Argument{
				{Name: "frequency", Type: amount("frequency", "Hz")},
				{Name: "part", Type: text},
				{Name: "gyro_pitch", Type: number},
			}})},
		},
	},
	"sweep": {
		Name: "sweep", About: "gyro response over frequency",
		Arguments: []stage.Argument{
			{Name: "modes", Type: of("modes"), Required: true},
			{Name: "properties", Type: of("properties"), Required: true},
			{Name: "from", Type: amount("frequency", "Hz"), Above: ptr(0), Required: true, Example: `"100 Hz"`},
			{Name: "to", Type: amount("frequency", "Hz"), Above: ptr(0), Required: true, Example: `"500 Hz"`},
			{Name: "shapes_at", Type: list(amount("frequency", "Hz")), About: "operating shapes"},
			{Name: "source", Type: stage.Type{Kind: stage.Object, Fields: []stage.Argument{
				{Name: "force", Type: amount("force density", ""), Default: stage.Quantity{SI: 1e-4, Dimension: "force density"}},
				{Name: "moment", Type: amount("moment density", "")},
				{Name: "rotors", Type: list(text), Required: true},
			}}},
		},
		Outputs: []stage.Output{{Name: "response", Kind: "response"}},
		Figures: []stage.Figure{
			{Name: "peak_pitch", Type: amount("frequency", "Hz")},
			{Name: "level_pitch", Type: amount("angular rate density", "")},
		},
	},
	"record": {
		Name: "record", About: "reads a flight recording",
		Arguments: []stage.Argument{
			{Name: "file", Type: stage.Type{Kind: stage.File}, Required: true, About: "recording", Example: `"flights/hover.csv.gz"`},
			{Name: "window", Type: list(amount("time", "s")), Min: ptr(0), Example: `["8 s", "60 s"]`},
			{Name: "strict", Type: stage.Type{Kind: stage.Truth}, Default: true},
			{Name: "channels", Type: stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Text}}},
		},
		Outputs: []stage.Output{{Name: "spectra", Kind: "spectra"}},
		Figures: []stage.Figure{{Name: "rate", Type: amount("frequency", "Hz")}},
	},
	"compare": {
		Name: "compare", About: "pairs predicted and observed peaks",
		Arguments: []stage.Argument{
			{Name: "predicted", Type: of("response"), Required: true},
			{Name: "observed", Type: of("spectra"), Required: true},
			{Name: "band", Type: list(amount("frequency", "Hz"))},
		},
		Outputs: []stage.Output{{Name: "comparison", Kind: "comparison"}},
		Figures: []stage.Figure{{Name: "pairs", Type: stage.Type{Kind: stage.Whole}}, {Name: "worst_error", Type: number}},
	},
	"report": {
		Name: "report", About: "one page with everything",
		Arguments: []stage.Argument{
			{Name: "include", Type: list(of("modes", "response", "comparison", "geometry")), Required: true, About: "what to show"},
			{Name: "title", Type: text},
			{Name: "to", Type: stage.Type{Kind: stage.Target}, Required: true, Example: `"report/page.html"`},
		},
		Outputs: []stage.Output{{Name: "page", Kind: "page", Publish: "to"}},
		Last:    true,
	},
}

// Names lists the stages in the order of a usual job.
func Names() []string {
	return []string{"import", "mesh", "solve", "sweep", "record", "compare", "report"}
}

// Describe gives a description, or a fault of kind Missing.
func Describe(_ context.Context, name string) (stage.Description, error) {
	if d, ok := Stages[name]; ok {
		return d, nil
	}
	return stage.Description{}, fault.New(fault.Missing, "there is no stage %q", name)
}
