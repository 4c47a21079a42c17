package scene

import (
	"math"
	"sort"

	"hushframe/core/mechanics/mesh"
	"hushframe/stages/kinds"
	"hushframe/stages/report/pack"
)

// Density is the strain energy per volume at the nodes drawn, mode after mode, 255 for what is as dense as the densest
// hundredth of the nodes of that mode, or denser: the corners of holes would else leave all the rest dark. It is that of
// the plates themselves, without what contacts between them store.
type Density struct {
	Modes  []int      `json:"modes"`
	Levels pack.Bytes `json:"levels"`
}

// newDensity spreads the shares of the triangles over their corners; nil where the modes do not hold them.
func newDensity(m *mesh.Mesh, modes *kinds.Modes, nodes []int32) *Density {
	// Volume of each triangle, by its corners; beams have none and stay at 0.
	volume := make([]float64, len(m.Triangles))
	around := make([]float64, len(m.Nodes))
	for e, t := range m.Triangles {
		a, b, c := m.Nodes[t[0]], m.Nodes[t[1]], m.Nodes[t[2]]
		var u, v [3]float64
		for d := range u {
			u[d], v[d] = b[d]-a[d], c[d]-a[d]
		}
		volume[e] = m.Parts[m.TrianglePart[e]].Thickness / 2 *
			math.Sqrt(sq(u[1]*v[2]-u[2]*v[1])+sq(u[2]*v[0]-u[0]*v[2])+sq(u[0]*v[1]-u[1]*v[0]))
		for _, n := range t[:3] {
			around[n] += volume[e]
		}
	}
	d := &Density{}
	for _, mode := range modes.Survey.Modes {
		if len(mode.ByElement) != len(m.Triangles) || len(m.Triangles) == 0 {
			continue
		}
		energy := make([]float64, len(m.Nodes))
		for e, t := range m.Triangles {
			for _, n := range t[:3] {
				energy[n] += mode.ByElement[e]
			}
		}
		values := make([]float64, len(nodes))
		for i, n := range nodes {
			if around[n] > 0 {
				values[i] = energy[n] / around[n]
			}
		}
		order := append([]float64{}, values...)
		sort.Float64s(order)
		top := order[len(order)-1-len(order)/100]
		d.Modes = append(d.Modes, mode.Number)
		for _, v := range values {
			level := 0.0
			if top > 0 {
				level = math.Round(255 * math.Max(0, math.Min(1, v/top)))
			}
			d.Levels = append(d.Levels, byte(level))
		}
	}
	if len(d.Modes) == 0 {
		return nil
	}
	return d
}

func sq(x float64) float64 { return x * x }
