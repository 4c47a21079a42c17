package element

import (
	"context"
	"fmt"

	"hushframe/core/mechanics/laminate"
)

// NodeUnknowns is the number of unknowns per node.
const NodeUnknowns = 6

// Type is one formulation of a plate element.
//
// Implementations are safe for concurrent calls and give the same bytes for the same input, whatever
// the number of threads. An element that cannot be computed ends the call with a *ShapeError for the
// lowest such index. Cancelling the context ends a call early with the context's error.
type Type interface {
	Describe() Description
	// Matrices fills out, which NewMatrices has sized, with stiffness and consistent mass.
	Matrices(ctx context.Context, in *Batch, out *Matrices) error
	// Energies fills out[(e·motions + m)·Kinds + k] with the strain energy (J) of kind k in element
	// e under motion m. Motions holds len(in.Section)·motions vectors of Nodes·NodeUnknowns
	// components, element by element, then motion by motion.
	Energies(ctx context.Context, in *Batch, motions []float64, out []float64) error
}

// Kinds of strain energy, indices into the innermost dimension of Energies.
const (
	InPlane = iota
	Bending
	Twist
	Shear
	Kinds
)

// KindNames are the names of the kinds, by index.
var KindNames = [Kinds]string{"in-plane", "bending", "twist", "shear"}

// Description says what a type is.
type Description struct {
	Name  string // as jobs write it: "quadratic-triangle"
	About string // one line
	// Nodes is 3, corners counterclockwise seen against z, or 6, then the mid-side nodes of sides
	// 0-1, 1-2 and 2-0. Mid-side nodes may lie off the chord in the plane: curved sides.
	Nodes int
	// Points, when there are any, carry the unknowns in place of the nodes: a solid element over the
	// triangle. Neighbours share a point when they share its node and their heights are equal.
	Points []Point
}

// Point is where a solid element has unknowns: u_x, u_y, u_z (m) alone.
type Point struct {
	Node int // of the triangle
	// Height is over the mid-surface in half thicknesses: -1 on the lower face, 1 on the upper.
	Height float64
}

// PointUnknowns is the number of unknowns per point.
const PointUnknowns = 3

// Solid reports whether points carry the unknowns.
func (d Description) Solid() bool { return len(d.Points) > 0 }

// Unknowns is the number of unknowns of one element, node by node or point by point.
func (d Description) Unknowns() int {
	if d.Solid() {
		return len(d.Points) * PointUnknowns
	}
	return d.Nodes * NodeUnknowns
}

// Batch is a set of elements of one type.
type Batch struct {
	// Nodes holds the coordinates x, y, z (m) of the nodes in the element frame: three per node,
	// node by node, element by element. Its length fixes the count.
	Nodes []float64
	// Section is the index into Sections of each element.
	Section  []int32
	Sections []laminate.Section
	// Layups holds what each section is made of, from the lower face to the upper; angles are those of
	// direction 1 in the element frame. A homogeneous plate is one ply.
	Layups [][]laminate.Ply
	// Threads bounds the goroutines of the call; 0 is one.
	Threads int
}

// Count is the number of elements.
func (b *Batch) Count() int { return len(b.Section) }

// Matrices holds the packed matrices of a batch, element by element.
type Matrices struct {
	Stiffness, Mass []float64
}

// Packed is the number of entries of a packed lower triangle of order n.
func Packed(n int) int { return n * (n + 1) / 2 }

// NewMatrices returns zeroed matrices for count elements of the given number of unknowns.
func NewMatrices(count, unknowns int) *Matrices {
	n := count * Packed(unknowns)
	return &Matrices{Stiffness: make([]float64, n), Mass: make([]float64, n)}
}

// CheckShape panics unless the batch and the sizes of the outputs fit the description; a size of -1
// is not checked.
func CheckShape(d Description, in *Batch, stiffness, mass int) {
	n := in.Count()
	packed := n * Packed(d.Unknowns())
	if len(in.Nodes) != 3*d.Nodes*n || (stiffness >= 0 && stiffness != packed) || (mass >= 0 && mass != packed) {
		panic(fmt.Sprintf("element: %s: %d sections, %d coordinates, %d stiffness and %d mass entries do not fit", d.Name, n, len(in.Nodes), stiffness, mass))
	}
	for _, s := range in.Section {
		if s < 0 || int(s) >= len(in.Sections) {
			panic(fmt.Sprintf("element: %s: section index %d of %d", d.Name, s, len(in.Sections)))
		}
	}
}

// ShapeError says which element of a batch is too distorted to compute, and how.
type ShapeError struct {
	Element int // index in the batch
	Reason  string
}

// Error states the element and the reason.
func (e *ShapeError) Error() string { return fmt.Sprintf("element %d: %s", e.Element, e.Reason) }
