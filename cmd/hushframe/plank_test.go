package main

import (
	"context"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/kinds/kindstest"
)

// plank is a stage that gives mesh, modes and response of a plank of some thickness, by formulas: shapes cos(kπx/L), at
// frequencies that are in proportion to thickness.
var plank = testStage{stage.Description{
	Name: "plank", About: "makes a plank ring", Doc: "Gives mesh, modes and response of a plank.",
	Arguments: []stage.Argument{
		{Name: "thickness", About: "of the plank", Type: stage.Type{Kind: stage.Amount, Dimension: "length", Unit: "mm"}, Required: true},
		{Name: "columns", About: "cells along it", Type: stage.Type{Kind: stage.Whole}, Default: 10.0},
	},
	Outputs: []stage.Output{{Name: "mesh", Kind: "mesh"}, {Name: "modes", Kind: "modes"}, {Name: "response", Kind: "response"}},
	Figures: []stage.Figure{{Name: "lowest", About: "lowest mode", Type: frequency}},
}, ringPlank}

func ringPlank(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
	h, columns := c.Arguments.SI("thickness"), c.Arguments.Whole("columns")
	m := kindstest.PlankMesh(h, columns)
	modes := kindstest.PlankModes(m, h)
	for name, a := range map[string]*artifact.Artifact{"mesh": kinds.EncodeMesh(m), "modes": kinds.EncodeModes(modes), "response": kinds.EncodeResponse(kindstest.PlankResponse(modes))} {
		if _, err := artifact.Write(c.Outputs[name], a); err != nil {
			return nil, err
		}
	}
	return &stage.Outcome{Figures: map[string]any{"lowest": stage.Quantity{SI: modes.Survey.Modes[0].Frequency, Dimension: "frequency"}}}, nil
}

const plankJob = `job "plank" {
  about = "A plank"
}

setting "thickness" {
  value = "2 mm"
  about = "of the plank"
}

setting "columns" {
  value = 10
  about = "cells along it"
}

stage "plank" "deck" {
  thickness = setting.thickness
  columns   = setting.columns
}

requirement "slow" {
  figure  = stage.deck.figures.lowest
  at_most = "45 Hz"
  because = "a plank should be supple"
}

requirement "not-too-slow" {
  figure   = stage.deck.figures.lowest
  at_least = "35 Hz"
  because  = "but carry its load"
}
`
