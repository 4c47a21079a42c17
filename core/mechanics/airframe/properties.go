package airframe

import "strings"

// Properties is all of the airframe that meshing does not need.
type Properties struct {
	Materials []Material
	Plates    []PlateProperties    // one per plate, same order
	Standoffs []StandoffProperties // one per standoff, same order
	Bolts     []BoltProperties     // one per bolt, same order
	Contacts  []ContactProperties  // one per contact, same order
	Joints    []Joint
	Bodies    []Body
	Rotors    []Rotor
	Gyro      Gyro
	// DeclaredMass is the all-up mass stated by the user, kg, 0 for none.
	DeclaredMass float64
	// Floor is the loss factor added to every group (air, cables), default 0.
	Floor float64
}

// Material is homogeneous and orthotropic with axis 1 along the fibre
// direction; isotropic ones satisfy G = E/(2(1+ν)).
type Material struct {
	Name          string
	E1, E2        float64 // Pa
	E3            float64 // Pa, through the thickness; 0 unknown. Plates do not need it, joints do.
	Nu12          float64 // strain along 2 per strain along 1, loaded along 1, negated
	G12, G13, G23 float64 // Pa
	Density       float64 // kg/m³
	LossFactor    float64
	Isotropic     bool
	Typical       bool    // from the built-in table, not measured
	Scatter       float64 // relative standard uncertainty of E1 and E2, 0 unknown
	Origin        string  // where the values come from
}

// PlateProperties is what a plate is made of.
type PlateProperties struct {
	Plate    string
	Material string  // of the homogeneous plate; "" when Plies are given
	Fibre    float64 // direction 1, rad counterclockwise from the plate's x axis
	// Plies from the lower to the upper face, for a stack.
	Plies []Ply
	Mass  float64 // kg, area × thickness × density
}

// Ply is one layer of a stack.
type Ply struct {
	Material  string
	Thickness float64
	Angle     float64 // rad from the plate's fibre direction
}

// StandoffProperties is what a standoff is made of.
type StandoffProperties struct {
	Standoff string
	Material string
	Mass     float64 // kg
}

// BoltProperties carries the mass of screw, washer and nut, and the joint.
type BoltProperties struct {
	Bolt  string
	Mass  float64 // kg, at the bolt's point
	Joint string  // name of a Joint; "" is rigid
	// Pairs is the stiffness between each pair of plates from bottom to top,
	// where it is not that of the joint.
	Pairs [][6]float64
}

// ContactProperties says what ties the plates of a contact.
type ContactProperties struct {
	Contact string
	Joint   string // name of a Joint per area or length
	// Stiffness per m² or m, where it is not that of the joint (nil).
	Stiffness *[6]float64
}

// Measure says what the stiffness of a joint counts for.
type Measure string

const (
	Each      Measure = "" // one connection
	PerArea   Measure = "area"
	PerLength Measure = "length"
)

// Joint is a joint group: a named elastic connection of six components, in the
// frame of the bolt (z along its axis, x along the lower plate's x) or the axes
// of the contact. Components x, y, z in N/m and rx, ry, rz in N·m/rad, or these
// per m² or m of a contact. A component of +Inf is rigid, which contacts cannot be.
type Joint struct {
	Name    string
	Measure Measure
	// Stiffness is the nominal one. Low and High are the range of a common factor
	// on the stiffness of the whole group, 0 unknown.
	Stiffness  [6]float64
	LossFactor float64
	Low, High  float64
	Preload    float64 // N of each bolt, 0 unknown; nothing is computed from it
	Origin     string  // where the values come from: a formula with its source, or who gave them
}

// Body is a rigid body: motor with propeller, battery, camera, gyro stack.
type Body struct {
	Name    string
	Kind    string // "rotor", "lump" or "gyro"
	Mass    float64
	Centre  Vec        // centre of gravity
	Inertia [6]float64 // about Centre, airframe axes: tensor elements xx, yy, zz, xy, xz, yz, kg·m²
	// Patches it is tied to rigidly; empty when it sits on a mount.
	Patches []string
	// Mount is nil when the body is tied rigidly.
	Mount *Mount
}

// Mount is a set of springs between a body and patches.
type Mount struct {
	Name   string
	Kind   string // "grommet", "strap", "foam", ...
	Points []MountPoint
	// Loss are the loss factors of the components x, y, z, rx, ry, rz in airframe
	// axes: with a constant law everywhere, with a fractional one at its
	// reference. Tables and solids bring their own.
	Loss [6]float64
	// Law says how the stiffness of all components depends on frequency.
	Law Law
	// Preload is the force (N) it is held with at rest, 0 unknown. The stiffness
	// is that under the preload; nothing is computed from it.
	Preload float64
	Origin  string // where the values come from
}

// Component gives the loss factor and the law of component c: one of them, for
// a varying law brings its own loss.
func (m *Mount) Component(c int) (loss float64, law Law) {
	law = m.Law
	switch law.Kind {
	case Constant:
		return m.Loss[c], Law{}
	case Fractional:
		law.LossFactor = m.Loss[c]
	}
	return 0, law
}

// MountPoint is one spring, acting at a point, along airframe axes.
type MountPoint struct {
	Point     Vec
	Patch     string
	Stiffness [6]float64 // N/m and N·m/rad; 0 is free
}

// Rotor is a motor with its propeller.
type Rotor struct {
	Name   string
	Body   string
	Hub    Vec // where its forces and moments act
	Axis   Vec // unit vector of the shaft, towards thrust
	Blades int
	// Spin is +1 counterclockwise seen from above (about +Axis), −1 clockwise.
	Spin         int
	HoverSpeed   float64 // rad/s
	MaxSpeed     float64 // rad/s
	SpinningMass float64 // kg, bell and propeller
	PolarInertia float64 // kg·m², of the spinning part about Axis
	// BellInertia and PropellerInertia are what PolarInertia consists of, 0 unknown.
	BellInertia, PropellerInertia float64
	// Grade is the balance quality e·Ω (m/s) at MaxSpeed, ISO 21940-11.
	Grade float64
}

// Gyro names the body that carries the gyro; its rotation is the output.
type Gyro struct {
	Body string
	At   Vec
}

// ScrewSuffix ends the names of the bodies that stand for the screws at the lower and upper end of a standoff.
var ScrewSuffix = [2]string{"-lower-screw", "-upper-screw"}

// ScrewOf gives the standoff whose screw a body stands for.
func (p *Properties) ScrewOf(body string) (standoff string, ok bool) {
	for _, suffix := range ScrewSuffix {
		if name, cut := strings.CutSuffix(body, suffix); cut {
			for _, s := range p.Standoffs {
				if s.Standoff == name {
					return name, true
				}
			}
		}
	}
	return "", false
}
