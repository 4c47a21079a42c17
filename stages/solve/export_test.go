package solve

import (
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/modal"
)

// Places gives tests the sites of a frame.
var Places = places

// Placed gives tests the words for what the eigen-solver refuses.
var Placed = placed

// Explain gives tests the faults made of what kernels say.
var Explain = explain

// Expected is the memory that a problem is thought to take, bytes.
func Expected(p *assembly.Problem) int64 { return assembly.Measure(p, usualVectors).Bytes }

// With is the stage with another eigen-solver.
func With(lowest modal.Solver) Stage { return Stage{lowest} }
