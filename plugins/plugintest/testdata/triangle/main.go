// Command triangle offers the built-in triangle as an extension, to see what the boundary costs.
package main

import (
	"context"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/serve"
)

func main() { serve.Elements(outside{}) }

type outside struct{}

func (outside) Describe() stage.Extension {
	return stage.Extension{Kind: extension.ElementKind, Name: "outside-triangle", About: "the built-in triangle, from outside"}
}

func (outside) Shape(context.Context, stage.Arguments) (element.Description, error) {
	return element.Description{Nodes: 6}, nil
}

func (outside) Matrices(ctx context.Context, _ stage.Arguments, in *element.Batch, out *element.Matrices) error {
	return shell.QuadraticTriangle().Matrices(ctx, in, out)
}

func (outside) Energies(ctx context.Context, _ stage.Arguments, in *element.Batch, motions, out []float64) error {
	return shell.QuadraticTriangle().Energies(ctx, in, motions, out)
}
