package modal

// Survey says what each elastic mode is and where modes crowd.
type Survey struct {
	// From and To bound the band in which gaps count, Hz.
	From, To float64
	// Groups name the shares of strain energy (Basis.Groups, same order); Kinds its kinds; Carriers
	// the shares of kinetic energy: parts, then bodies; Rotors the rotors.
	Groups, Kinds, Carriers, Rotors []string
	Modes                           []Mode
	// MeshErrors holds what is known of the error of frequencies, by mode; none if not asked for.
	MeshErrors []MeshError
	// Gaps holds, per axis, neighbouring modes that the gyro feels on it.
	Gaps [3][]Gap
}

// Mode is one elastic mode.
type Mode struct {
	Number    int     // from 1, by ascending frequency
	Vector    int     // index into the basis
	Frequency float64 // Hz
	Loss      float64 // loss factor; the damping ratio is half of it
	// Shares of the energies; each adds up to one.
	ByGroup, ByKind, ByCarrier []float64
	// ByElement is the share of each triangle of the mesh in the strain energy, in its order; nil where it is
	// not known. What is missing to one is in standoffs, joints, contacts and mounts.
	ByElement []float64
	// Part names the group with the greatest strain energy, the first of equals; Motion its greatest kind.
	Part, Motion string
	// Rotation is the rotation of the gyro per unit modal coordinate, rad.
	Rotation [3]float64
	// Strength per axis under unit forces, (rad/s)/N, and unit moments, (rad/s)/(N·m).
	Strength, MomentStrength [3]float64
	// RotorShare[r] is the part of rotor r in the square of Strength, the same for all axes.
	// MomentShare likewise.
	RotorShare, MomentShare []float64
	// Below and Above are the distances to the neighbouring elastic modes, Hz; +Inf for none.
	Below, Above float64
	Meetings     []Meeting
}

// Meeting is a rotor speed at which an order meets a mode.
type Meeting struct {
	Order  int     // multiple of the rotor speed; the number of blades for blade passing
	Blade  bool    // blade passing
	Speed  float64 // rad/s
	Rotors []int   // for which this holds, indices into Survey.Rotors
	// Service: not above their highest speed. Hover: that, and within HoverBand of their hover speed.
	Hover, Service bool
}

// HoverBand is how far the speed of a rotor strays from hover in gentle flight, as a share of it
// (common practice, no source).
const HoverBand = 0.15

// Gap is the distance between two modes that are neighbours among those with at least a tenth of the
// strongest strength on an axis.
type Gap struct {
	Lower, Upper int     // mode numbers
	Width        float64 // Hz
}

// MeshError returns the error of a mode, in Hz.
func (s *Survey) MeshError(number int) (e MeshError, ok bool) {
	for _, e := range s.MeshErrors {
		if e.Mode == number {
			return e, true
		}
	}
	return MeshError{}, false
}

// SmallestGap returns the narrowest gap of an axis; ok is false when fewer than two modes count.
func (s *Survey) SmallestGap(axis int) (gap Gap, ok bool) {
	for _, g := range s.Gaps[axis] {
		if !ok || g.Width < gap.Width {
			gap, ok = g, true
		}
	}
	return gap, ok
}
