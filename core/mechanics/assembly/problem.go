package assembly

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/laminate"
)

// Vec is a vector in airframe axes.
type Vec = airframe.Vec

// Axes are three orthonormal unit vectors x, y, z, right-handed.
type Axes [3]Vec

// Global are the airframe axes.
var Global = Axes{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}

// Problem is a structure to assemble. Nodes in no element are left out and move with nothing.
type Problem struct {
	Nodes []Vec // m
	// Own is how many of the last nodes are points of solid elements; the others are those of the mesh.
	Own      int
	Groups   []Group
	Plates   []PlatePart
	Beams    []BeamPart
	Bodies   []Body
	Welds    [][2]int // pairs of bodies joined into one
	Springs  []Spring
	Contacts []Contact
	Supports []Support
}

// Kinds of groups.
const (
	PartGroup  = "part"
	JointGroup = "joint"
	MountGroup = "mount"
)

// Group is a named share of the stiffness.
type Group struct {
	Name, Kind string
}

// PlatePart is a set of plate elements of one type and section.
type PlatePart struct {
	Group   int
	Type    element.Type
	Axes    Axes // of the elements and of the section
	Section laminate.Section
	Layup   []laminate.Ply // what the section is made of
	// Elements lists nodes; only the first Type.Describe().Nodes of each count.
	Elements [][6]int32
	// Points lists the nodes that carry the unknowns of each solid element, and Fibres those above and below each node
	// of the mesh; both nil for elements with six unknowns per node.
	Points [][]int32
	Fibres []Fibre
}

// Fibre is the points of solid elements on one line through the plate, from the lower face to the upper.
type Fibre struct {
	Node    int32 // of the mesh, on the mid-surface
	Points  []int32
	Heights []float64 // over the mid-surface, m
}

// BeamPart is a chain of beams of one section. Y is across the beams: the y axis of the section.
type BeamPart struct {
	Group    int
	Section  beam.Section
	Y        Vec
	Elements [][2]int32
}

// Body is a rigid body.
type Body struct {
	Name    string
	Nodes   []int32 // of plates or beams
	Inertia []Inertia
}

// Inertia is a mass with its centre of gravity and its inertia tensor about it: elements xx, yy, zz,
// xy, xz, yz (off-diagonal ones are minus the products of inertia) in airframe axes.
type Inertia struct {
	Mass   float64 // kg
	Centre Vec
	Tensor [6]float64 // kg·m²
}

// Ground is the body index of the ground.
const Ground = -1

// Spring connects body A to body B, or to the ground, at a point.
type Spring struct {
	Group     int
	A, B      int
	Point     Vec
	Axes      Axes
	Stiffness [6]float64 // N/m, N·m/rad; +Inf rigid, 0 free
}

// Support fixes components of a node. With Axes nil they are those of the node frame; Axes whose z is
// the plate's normal keep the drilling rotation separate.
type Support struct {
	Node  int32
	Fixed [6]bool
	Axes  *Axes
}
