// Doubling is the smallest useful extension: one stage that doubles beads.
package main

import (
	"context"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/serve"
)

func main() {
	serve.Stages(doubling{})
}

var beads = artifact.Kind{Name: "beads", Version: 1, Tables: []artifact.TableSpec{
	{Name: "beads", Columns: []artifact.Column{{Name: "mass", Type: artifact.Float, Unit: "kg"}}}}}

type doubling struct{}

func (doubling) Describe() stage.Description {
	return stage.Description{Name: "doubling", About: "doubles beads",
		Arguments: []stage.Argument{{Name: "beads", About: "beads to double", Required: true,
			Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"beads"}}}},
		Outputs: []stage.Output{{Name: "beads", Kind: "beads", About: "doubled beads"}},
		Figures: []stage.Figure{{Name: "count", About: "number of beads", Type: stage.Type{Kind: stage.Whole}}},
	}
}

func (doubling) Run(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
	if err := ctx.Err(); err != nil {
		return nil, fault.From(err)
	}
	c.Report.Progress("doubling", 0.5)
	in, err := artifact.Open(c.Inputs["beads"][0].Folder, artifact.NewRegistry(beads))
	if err != nil {
		return nil, err
	}
	var masses []float64
	for _, m := range in.Table("beads").Floats("mass") {
		masses = append(masses, 2*m)
	}
	out := artifact.New(beads)
	out.Table("beads").Set("mass", masses)
	_, err = artifact.Write(c.Outputs["beads"], out)
	return &stage.Outcome{Figures: map[string]any{"count": float64(len(masses))}}, err
}
