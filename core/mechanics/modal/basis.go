package modal

import (
	"hushframe/core/mechanics/airframe"
)

// VectorKind sorts the vectors of a Basis.
type VectorKind string

const (
	RigidBody VectorKind = "rigid"
	Elastic   VectorKind = "elastic"
	// Residual vectors carry the static answer of all modes left out; their
	// frequency is a number of the basis, not of the frame.
	Residual VectorKind = "residual"
)

// Basis is a set of M-orthonormal, K-orthogonal vectors: six rigid-body ones,
// the elastic modes by ascending frequency, then residual vectors. Modal mass
// is 1 (kg for shapes in m), modal stiffness (2π Frequency)².
type Basis struct {
	Kinds     []VectorKind
	Frequency []float64 // Hz, 0 for rigid-body vectors
	// Sites are the points where forces act or motion is read.
	Sites []Site
	// Groups split the stiffness by what dissipates: each holds φᵀ K_g φ over
	// the whole basis, n×n row-major, symmetric. They add up to the modal
	// stiffness; the loss factor of each group makes the damping.
	Groups []LossGroup
	// Shapes[v] is the displacement of the mesh nodes in vector v: ux, uy, uz
	// of each (m, airframe axes) per unit modal coordinate.
	Shapes [][]float64
}

// Site is a named point fixed to a body or patch.
type Site struct {
	Name  string
	Kind  string // "rotor", "gyro", "body"
	Point airframe.Vec
	// Motion[v] is the motion of the point in vector v: ux, uy, uz, rx, ry, rz.
	Motion [][6]float64
}

// LossGroup is the stiffness of one part, joint group or mount in the basis.
type LossGroup struct {
	Name string
	Kind string // "part", "joint" or "mount"
	// LossFactor is that of a group whose law is constant, the floor of the
	// airframe included; where the law varies it brings its own loss and this is
	// the floor alone.
	LossFactor float64
	// Law says how the stiffness depends on frequency; Stiffness is that at its
	// reference, on which the frequencies of the basis rest.
	Law       airframe.Law
	Stiffness []float64
}

// At gives the complex ratio of the group's stiffness at f (Hz) to Stiffness:
// 1 + iη where the law is constant.
func (g *LossGroup) At(f float64) complex128 {
	return g.Law.At(f) + complex(0, g.LossFactor)
}
