package solve

import (
	"context"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// estimate solves on the refined mesh as well and gives the modes their errors. Meshes of two sizes would not
// do: what sets the size of most elements is the free edges and the rims of holes.
func (x Stage) estimate(ctx context.Context, call *stage.Call, modes *kinds.Modes, m *mesh.Mesh, p *airframe.Properties, types func(string) element.Type, set settings) error {
	problem, err := assembly.FromAirframe(assembly.Refine(m), p, types)
	if err != nil {
		return err
	}
	call.Report.Log(stage.Info, "solving again with every element cut in four")
	finer, _, err := kept(ctx, call, task{problem, p, set, true, x.lowest})
	if err != nil {
		return err
	}
	const half = 0.5
	modes.Survey.MeshErrors = modes.Survey.CompareMeshes(modes.Basis, finer.Survey, finer.Basis, half)
	return nil
}

// largestError is the greatest relative error of a mode below a frequency, infinite when one has none.
func largestError(m *kinds.Modes, upTo float64) float64 {
	worst := 0.0
	for _, x := range m.Survey.Modes {
		if x.Frequency > upTo {
			continue
		}
		e, ok := m.Survey.MeshError(x.Number)
		if !ok {
			return math.Inf(1)
		}
		worst = max(worst, e.Error/x.Frequency)
	}
	return worst
}
