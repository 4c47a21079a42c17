package mesh

import (
	"hushframe/core/mechanics/airframe"
)

// Mesh is a whole airframe in elements, nodes in airframe axes, m. Plates do
// not share nodes with each other: what joins them are patches.
type Mesh struct {
	Nodes []airframe.Vec
	Parts []Part
	// Triangles: corner nodes 0, 1, 2 counterclockwise seen from the part's
	// +z, then the mid-side nodes of sides 0-1, 1-2, 2-0. TrianglePart is the
	// index into Parts, ascending.
	Triangles    [][6]int32
	TrianglePart []int32
	// Beams of standoffs, end nodes from the lower to the upper end.
	Beams    [][2]int32
	BeamPart []int32
	// Edges are the boundary edges of plates: corner, mid-side, corner node,
	// with the material on the left seen from +z.
	Edges    [][3]int32
	EdgePart []int32
	Patches  []Patch // same order and names as in the geometry
	Links    []Link
	Contacts []Contact
}

// Part is a plate or a standoff.
type Part struct {
	Name      string
	Standoff  bool
	Element   string         // element type, for plates
	Options   string         // of an element type that has some; the mesh only carries them
	Thickness float64        // m, of a plate
	Outer     float64        // diameters of a standoff
	Inner     float64        // 0 is solid
	Frame     airframe.Frame // mid-surface frame of a plate; z along a standoff
}

// Patch is the set of plate nodes that moves as one body.
type Patch struct {
	Name   string
	Owner  string
	Part   int32
	Nodes  []int32 // ascending, mid-side nodes included
	Centre airframe.Vec
}

// Link is what joins patches: a bolt (patches from bottom to top, no nodes)
// or a standoff (two patches and the beam node tied to each).
type Link struct {
	Name    string
	Group   string
	Kind    string // "bolt" or "standoff"
	Patches []int32
	Nodes   []int32 // beam end nodes, for a standoff
	Point   airframe.Vec
	Axis    airframe.Vec
}

// Contact is a set of points at which two plates are tied.
type Contact struct {
	Name  string
	Parts [2]int32
	Area  bool // points stand for areas, not for lengths
	// Axes of the springs.
	Axes   airframe.Frame
	Points []ContactPoint
}

// ContactPoint is where a point of a contact lies in a triangle of either part.
type ContactPoint struct {
	At       airframe.Vec
	Measure  float64 // m² or m that it stands for
	Triangle [2]int32
	// Local are the area coordinates of corners 1 and 2 in each triangle, that of
	// corner 0 being the rest. The place they give may lie off At, by half the
	// thickness and more; the motion is carried over rigidly.
	Local [2][2]float64
}
