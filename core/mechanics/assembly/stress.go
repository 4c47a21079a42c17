package assembly

import "hushframe/core/mechanics/element/beam"

// BeamStresses returns the stresses (Pa for y in unit unknowns) at both ends of each beam element in motion y,
// in the order of the beams of the problem and of their elements, in the principal axes of each section.
func (s *System) BeamStresses(y []float64) [][2]beam.Stress {
	nodes := s.expandAll([][]float64{y}, 1)[0]
	var out [][2]beam.Stress
	for i := range s.beams {
		a := &s.beams[i]
		for e, ends := range a.part.Elements {
			u := local(nil, nodes, ends[:], a.axes[e])
			out = append(out, beam.Stresses(a.part.Section, a.lengths[e], u))
		}
	}
	return out
}
