package assembly

import (
	"math"

	"hushframe/core/mechanics/element"
)

// Size is what a problem takes, before anything is computed.
type Size struct {
	Unknowns, Elements int
	// Bytes is about the memory that element matrices, K, M, the factor and the vectors of a solution need.
	Bytes int64
}

// Measure estimates the size of a problem. Unknowns are six per node in use and body, three per point of a solid element,
// before rigid ties. Entries of the factor are those of nested dissection on a plane, 31/4 n log₂ n per pair of unknowns of
// a place (A. George, Nested dissection of a regular finite element mesh, SIAM J. Numer. Anal. 10, 1973), six unknowns to
// a node, and those of a whole fibre where solid elements stand. Garbage that waits for its collector is counted as half
// of what is in use; with that the peaks measured on the demo from 58 to 229 thousand unknowns are met within a tenth.
func Measure(p *Problem, vectors int) Size {
	var s Size
	places, unknowns, pairs := 0, 0, 0.0
	place := func(n int) {
		places++
		unknowns += n
		pairs += float64(n) * float64(n)
	}
	for v, used := range usedNodes(p) {
		if used && v < len(p.Nodes)-p.Own {
			place(element.NodeUnknowns)
		}
	}
	var packed, entries float64
	add := func(elements, unknowns int) {
		s.Elements += elements
		packed += float64(elements) * float64(element.Packed(unknowns))
		// Each element adds about its own block of the pattern, shared by its neighbours.
		entries += float64(elements) * float64(element.Packed(unknowns)) / 2
	}
	for i := range p.Plates {
		part := &p.Plates[i]
		add(len(part.Elements), part.Type.Describe().Unknowns())
		for f := range part.Fibres {
			place(element.PointUnknowns * len(part.Fibres[f].Points))
		}
	}
	for i := range p.Beams {
		add(len(p.Beams[i].Elements), 2*element.NodeUnknowns)
	}
	s.Unknowns = unknowns + 6*len(p.Bodies)
	factor := 31.0 / 4 * pairs * math.Log2(math.Max(2, float64(places))) / 4
	const number, index = 8, 4
	const garbage = 1.5
	s.Bytes = int64(garbage * (2*number*packed + (2*number+index)*entries + number*factor*1.5 + 3*number*float64(vectors)*float64(s.Unknowns)))
	return s
}
