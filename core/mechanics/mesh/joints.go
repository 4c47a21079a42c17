package mesh

import (
	"math"

	"hushframe/core/mechanics/airframe"
)

// addStandoff appends a standoff as a part of its own: beams from end to end and the link to its two patches.
func (m *Mesh) addStandoff(s *airframe.Standoff) {
	part, first := int32(len(m.Parts)), int32(len(m.Nodes))
	axis := unit(minus(s.Ends[1], s.Ends[0]))
	m.Parts = append(m.Parts, Part{
		Name: s.Name, Standoff: true, Outer: s.Outer, Inner: s.Inner, Frame: frameAlong(s.Ends[0], axis),
	})
	for k := range beamsPerStandoff + 1 {
		t := float64(k) / beamsPerStandoff
		var v airframe.Vec
		for d := range v {
			v[d] = (1-t)*s.Ends[0][d] + t*s.Ends[1][d]
		}
		m.Nodes = append(m.Nodes, v)
	}
	for k := range int32(beamsPerStandoff) {
		m.Beams = append(m.Beams, [2]int32{first + k, first + k + 1})
		m.BeamPart = append(m.BeamPart, part)
	}
	var middle airframe.Vec
	for d := range middle {
		middle[d] = 0.5 * (s.Ends[0][d] + s.Ends[1][d])
	}
	m.Links = append(m.Links, Link{
		Name: s.Name, Kind: "standoff",
		Patches: []int32{int32(s.Patches[0]), int32(s.Patches[1])},
		Nodes:   []int32{first, first + beamsPerStandoff},
		Point:   middle, Axis: axis,
	})
}

func (m *Mesh) addBolt(b *airframe.Bolt) {
	l := Link{Name: b.Name, Group: b.Group, Kind: "bolt", Point: b.Point, Axis: b.Axis}
	for _, p := range b.Patches {
		l.Patches = append(l.Patches, int32(p))
	}
	m.Links = append(m.Links, l)
}

// frameAlong returns a frame with its z axis along the unit vector z; x is the part across z of the airframe axis that
// is least along it, the first of equals.
func frameAlong(origin, z airframe.Vec) airframe.Frame {
	least := 0
	for d := range z {
		if math.Abs(z[d]) < math.Abs(z[least]) {
			least = d
		}
	}
	var x airframe.Vec
	x[least] = 1
	for d := range x {
		x[d] -= z[least] * z[d]
	}
	x = unit(x)
	return airframe.Frame{Origin: origin, X: x, Y: cross(z, x), Z: z}
}

func minus(a, b airframe.Vec) airframe.Vec {
	return airframe.Vec{a[0] - b[0], a[1] - b[1], a[2] - b[2]}
}

func cross(a, b airframe.Vec) airframe.Vec {
	return airframe.Vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

// unit returns v over its length; the zero vector gives the z axis.
func unit(v airframe.Vec) airframe.Vec {
	n := norm(v)
	if n == 0 {
		return airframe.Vec{0, 0, 1}
	}
	return airframe.Vec{v[0] / n, v[1] / n, v[2] / n}
}
