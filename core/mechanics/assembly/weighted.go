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
	all := s.contributions()
	lists := make([][]int32, len(all))
	for i := range all {
		lists[i] = all[i].unknowns
	}
	k := sparse.NewAssemblerThreads(s.N, lists, threads)
	k.AddAll(threads, func(e int, packed []float64) bool {
		if !all[e].addStiffness(packed) {
			return false
		}
		for i := range packed {
			packed[i] *= weights[all[e].group]
		}
		return true
	})
	return k.Matrix()
}
