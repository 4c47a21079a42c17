package mesh

import (
	"math"

	"hushframe/core/mechanics/airframe"
)

// Quality describes the triangles of a part by the chords of their sides.
type Quality struct {
	Triangles     int
	SmallestAngle float64 // rad, +Inf without triangles
	Narrow        int     // triangles with an angle below the one asked for
	ShortestSide  float64 // m, +Inf without triangles
}

// Quality judges the triangles of a part; narrow is the angle (rad) below which they are counted.
func (m *Mesh) Quality(part int32, narrow float64) Quality {
	q := Quality{SmallestAngle: math.Inf(1), ShortestSide: math.Inf(1)}
	for t, n := range m.Triangles {
		if m.TrianglePart[t] != part {
			continue
		}
		q.Triangles++
		smallest := math.Inf(1)
		for i := range 3 {
			a, b, c := m.Nodes[n[i]], m.Nodes[n[(i+1)%3]], m.Nodes[n[(i+2)%3]]
			u, v := minus(b, a), minus(c, a)
			smallest = math.Min(smallest, math.Atan2(norm(cross(u, v)), u[0]*v[0]+u[1]*v[1]+u[2]*v[2]))
			q.ShortestSide = math.Min(q.ShortestSide, norm(u))
		}
		if smallest < narrow {
			q.Narrow++
		}
		q.SmallestAngle = math.Min(q.SmallestAngle, smallest)
	}
	return q
}

func norm(v airframe.Vec) float64 { return math.Hypot(math.Hypot(v[0], v[1]), v[2]) }
