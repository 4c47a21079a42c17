package modal

import (
	"context"
	"fmt"
	"math"
	"slices"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/numeric/eigen"
)

// RigidError says that the structure does not have six rigid-body motions.
type RigidError struct {
	// Frequencies are the lowest ones computed, Hz.
	Frequencies []float64
	// Moving names the part or body that moves most in the motion beyond the six, by kinetic energy, and
	// Against the part, joint or mount that resists it most, by strain energy. Empty when not known.
	Moving, Against string
}

func (e *RigidError) Error() string {
	text := fmt.Sprintf("the structure does not have six free motions: its lowest frequencies are %.3g Hz", e.Frequencies)
	if e.Moving == "" {
		return text + "; a part may hang by a hinge, or a stiffness may be out of all proportion"
	}
	return fmt.Sprintf("%q moves all but freely, resisted by %q alone: %s", e.Moving, e.Against, text)
}

// rigidRatio is the highest rigid-body frequency over the first elastic one.
func rigidRatio(ctx context.Context, s *assembly.System, res *eigen.Result, threads int) (float64, error) {
	var f []float64
	for _, v := range res.Values {
		f = append(f, math.Sqrt(math.Abs(v))/(2*math.Pi))
	}
	bad := &RigidError{Frequencies: f[:min(len(f), RigidBodies+2)]}
	if len(f) <= RigidBodies {
		return 0, bad
	}
	ratio := slices.Max(f[:RigidBodies]) / f[RigidBodies]
	if ratio < rigidBelow {
		return ratio, nil
	}
	// Those below a gap are the free motions, mixed at will.
	free := RigidBodies + 1
	for free < len(f) && !(f[free-1] < rigidBelow*f[free]) {
		free++
	}
	if free == len(f) {
		free = RigidBodies + 1
	}
	if err := bad.explain(ctx, s, res, free, threads); err != nil {
		return 0, err
	}
	return 0, bad
}

// explain finds what moves in the motion that is left of the free ones once the rigid-body motions are
// taken out: the one of which most is left.
func (e *RigidError) explain(ctx context.Context, s *assembly.System, res *eigen.Result, free, threads int) error {
	b := &span{system: s, threads: threads, n: s.N}
	var rigid []float64
	for _, y := range s.Rigid() {
		rigid = append(rigid, y...)
	}
	if err := b.extend(RigidBody, make([]float64, RigidBodies), rigid); err != nil {
		return nil // no more can be said
	}
	var left []float64
	most, my := 0.0, make([]float64, s.N)
	for _, v := range res.Vectors[:free] {
		y := slices.Clone(v)
		b.project(y, 1)
		s.M.MulVec(my, y)
		size := 0.0
		for i, x := range y {
			size += x * my[i]
		}
		if size > most {
			left, most = y, size
		}
	}
	if left == nil {
		return nil
	}
	energies, err := s.Energies(ctx, [][]float64{left}, threads)
	if err != nil {
		return err
	}
	p := s.Problem()
	best := 0.0
	moving := func(name string, energy float64) {
		if energy > best {
			e.Moving, best = name, energy
		}
	}
	for g, v := range energies.Kinetic[0] {
		moving(p.Groups[g].Name, v)
	}
	for i, v := range energies.Body[0] {
		moving(p.Bodies[i].Name, v)
	}
	strained := 0.0
	for g, kinds := range energies.Strain[0] {
		if sum := total(kinds[:]); sum > strained {
			e.Against, strained = p.Groups[g].Name, sum
		}
	}
	return nil
}
