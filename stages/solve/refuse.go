package solve

import (
	"errors"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/modal"
	"hushframe/core/numeric/eigen"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

const (
	// usualVectors is about how many vectors a solution holds at a time.
	usualVectors = 100
	// mostModes is how many modes are searched for at most: a frame has tens, and thousands mean that something is out of
	// all proportion.
	mostModes = 1000
	// leastModes is how many are searched for however little memory is left.
	leastModes = 100
	// vectorsPerMode is about how many vectors the search holds for each mode.
	vectorsPerMode = 3
	// unbounded is what a problem may take when the run has no limit of memory, bytes.
	unbounded = 64 << 30
)

// afford refuses a problem that would need more memory than there is, before anything is computed, and tells how many modes
// there is room for.
func afford(call *stage.Call, p *assembly.Problem) (modes int, err error) {
	limit := call.Memory
	if limit <= 0 {
		limit = unbounded
	}
	size := assembly.Measure(p, usualVectors)
	if size.Bytes <= limit {
		vector := (size.Bytes - assembly.Measure(p, 0).Bytes) / usualVectors
		return int(max(leastModes, min(mostModes, (limit-size.Bytes)/max(1, vector)/vectorsPerMode))), nil
	}
	const giga = 1 << 30
	return 0, fault.New(fault.Limit, "the mesh has %d elements and about %d unknowns, which needs about %.1f GB of memory; %.1f GB are granted", size.Elements, size.Unknowns,
		float64(size.Bytes)/giga, float64(limit)/giga).In("solve", "").Of("mesh").Do("mesh with larger elements, or allow the run more memory")
}

var matrixNames = map[string]string{"K": "the stiffness", "M": "the mass", "K or M": "the stiffness or the mass"}

// crowded says that more modes were counted than are searched for.
func crowded(e *eigen.TooManyError, upTo float64) error {
	elastic, most := e.Counted-modal.RigidBodies, e.Most-modal.RigidBodies
	do := "lower up_to, or see whether thicknesses, moduli and masses are in the units meant"
	if most < mostModes {
		do += "; with more memory more modes would be looked for"
	}
	return fault.New(fault.Limit, "%d modes lie below %g Hz, and at most %d are looked for", elastic, upTo, most).In("solve", "").Of("up_to").Do("%s", do)
}

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
