package airframe

import (
	"hushframe/core/mechanics/outline"
)

// Vec is a vector or point in airframe axes, m unless stated.
type Vec [3]float64

// Frame is a right-handed orthonormal frame: X, Y, Z are unit vectors and
// Origin a point, all in airframe axes.
type Frame struct {
	Origin, X, Y, Z Vec
}

// Geometry is all that meshing needs.
type Geometry struct {
	Plates    []Plate
	Patches   []Patch
	Bolts     []Bolt
	Standoffs []Standoff
	Contacts  []Contact
}

// Plate is a flat plate of constant thickness.
type Plate struct {
	Name string
	// Region is in the x-y plane of Frame, seen from +z, m.
	Region outline.Region
	// Frame has its origin and x-y plane on the mid-surface.
	Frame     Frame
	Thickness float64 // m
}

// PatchShape is the shape of a patch.
type PatchShape string

const (
	// Disc is a circle of Radius.
	Disc PatchShape = "disc"
	// Rectangle is Width along its own x and Height along its own y, turned
	// by Turn counterclockwise from the plate's x axis.
	Rectangle PatchShape = "rectangle"
)

// Patch is a region of a plate that moves as one rigid body, because
// something is clamped or tied to it: the disc under a bolt head or standoff,
// the base of a motor, the pad under a battery. Its outline is a mesh line. It
// may extend over holes and beyond the edge; only the part on the plate counts.
type Patch struct {
	Name   string
	Plate  int // index into Geometry.Plates
	Shape  PatchShape
	Centre outline.Point // in the plate's frame
	Radius float64
	Width  float64
	Height float64
	Turn   float64 // rad
	// Owner says what the patch belongs to, for reports: "bolt clamp-1".
	Owner string
}

// Bolt clamps two or more plates whose faces touch.
type Bolt struct {
	Name    string
	Group   string // joint group; "" when alone
	Patches []int  // one clamp disc per plate, from bottom to top along Axis
	// Point is on the bolt's axis at the middle of the stack; Axis is a unit
	// vector, upward for horizontal plates.
	Point, Axis Vec
	HoleRadius  float64
	ClampRadius float64
	// Inferred is true when the bolt was found from coaxial holes.
	Inferred bool
}

// Standoff is a pillar between two plates, a beam from face to face.
type Standoff struct {
	Name    string
	Patches [2]int // clamp discs at its lower and upper end
	Ends    [2]Vec // end points on the faces of the plates
	Outer   float64
	Inner   float64 // diameters, m; Inner 0 is solid
}

// ContactKind is what a contact is.
type ContactKind string

const (
	// Pressed faces of two plates, tied over an area.
	Pressed ContactKind = "pressed"
	// Seam is a glued line, mostly the edge of a plate on the face of another.
	Seam ContactKind = "seam"
	// Key is the flank of a slot, key or tongue that stops a plate within its plane.
	Key ContactKind = "key"
)

// Contact ties two plates by springs spread over an area or along a line.
type Contact struct {
	Name   string
	Kind   ContactKind
	Plates [2]int // indices into Geometry.Plates
	// Axes are those of the springs, the origin a point of the contact. Pressed: z
	// is the normal of the first plate, origin on the common face. Lines: x runs
	// along; z is the normal of the face (seam) or of the first plate (key).
	Axes Frame
	// Shape bounds a pressed contact, in the frame of the first plate; "" is
	// wherever the plates overlap.
	Shape  PatchShape
	Centre outline.Point
	Radius float64
	Width  float64
	Height float64
	Turn   float64 // rad
	// Ends of a line.
	Ends [2]Vec
}
