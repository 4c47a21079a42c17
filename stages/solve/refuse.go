package solve

import (
	"errors"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/eigen"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

const (
	// usualVectors is about how many vectors a solution holds at a time.
	usualVectors = 100
	// unbounded is what a problem may take when the run has no limit of memory, bytes.
	unbounded = 64 << 30
)

// afford refuses a problem that would need more memory than there is, before anything is computed.
func afford(call *stage.Call, p *assembly.Problem) error {
	limit := call.Memory
	if limit <= 0 {
		limit = unbounded
	}
	size := assembly.Measure(p, usualVectors)
	if size.Bytes <= limit {
		return nil
	}
	const giga = 1 << 30
	return fault.New(fault.Limit, "the mesh has %d elements and about %d unknowns, which needs about %.1f GB of memory; %.1f GB are granted", size.Elements, size.Unknowns,
		float64(size.Bytes)/giga, float64(limit)/giga).In("solve", "").Of("mesh").Do("mesh with larger elements, or allow the run more memory")
}

var matrixNames = map[string]string{"K": "the stiffness", "M": "the mass", "K or M": "the stiffness or the mass"}

// placed names the part or body behind what the eigen-solver refuses.
func placed(s *assembly.System, err error) error {
	var indefinite *eigen.IndefiniteError
	var singular *eigen.SingularError
	switch {
	case errors.As(err, &indefinite):
		return fault.New(fault.Numeric, "%s has a direction in which it is negative: %s", matrixNames[indefinite.Matrix], indefinite.Detail).
			In("solve", s.Name(indefinite.Unknown)).Do("see whether its material, joint or mass is negative or out of all proportion")
	case errors.As(err, &singular):
		return fault.New(fault.Numeric, "a motion has neither stiffness nor mass: %v", singular).In("solve", s.Name(singular.Unknown)).
			Do("give the body mass or tie it")
	}
	return err
}
