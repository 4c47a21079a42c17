package assembly

import (
	"fmt"

	"hushframe/core/numeric/sparse"
)

// Weighted assembles Σ w_g K_g in the pattern of K, one weight per group of the
// problem, on up to threads goroutines. With all weights 1 it is K.
func (s *System) Weighted(weights []float64, threads int) *sparse.Symmetric {
	if len(weights) != len(s.layout.problem.Groups) {
		panic(fmt.Sprintf("assembly: %d weights for %d groups", len(weights), len(s.layout.problem.Groups)))
	}
	k := s.assembler.Fork()
	k.AddAll(threads, func(e int, packed []float64) []float64 {
		weight := weights[s.entries[e].group]
		if weight == 0 {
			return nil
		}
		a := s.entries[e].stiffnessOver(packed)
		if a == nil || weight == 1 {
			return a
		}
		for i, v := range a {
			packed[i] = weight * v
		}
		return packed[:len(a)]
	})
	return k.Matrix()
}
