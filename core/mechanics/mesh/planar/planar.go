package planar

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/outline"
)

// Options steers Triangulate. Only Size is required.
type Options struct {
	// Size gives the wanted length of triangle sides (m) at a place of the region; it must be positive there.
	Size func(p outline.Point) float64
	// EdgeSize, when set, gives an upper bound (m) on the length of boundary segments at a place on the boundary,
	// from the local width: the distance (m) straight across the region to the boundary opposite.
	EdgeSize func(p outline.Point, width float64) float64
	// Row, when set, asks for a row of stretched triangles along the boundary: its depth (m), 0 for none, and the
	// longest side along it, from the local width. Rows end at corners that turn inwards and where something is too
	// near; there EdgeSize counts instead.
	Row func(p outline.Point, width float64) (depth, length float64)
	// Lines are closed loops that triangle sides must follow where they run inside the region. They may leave the
	// region, cross holes and each other.
	Lines []outline.Loop
	// PerTurn is the least number of segments for a full turn of a curve; 0 means 12. Holes within a mesh line get two
	// thirds of it.
	PerTurn int
	// MinAngle (rad) is the least angle wanted in triangles away from sharp corners; 0 means 26 degrees. Above 28
	// degrees the refinement may stop at MaxVertices.
	MinAngle float64
	// Snap (m) is how far a mesh line may be moved to join a boundary or another mesh line; 0 means 2e-4 of the
	// region's diagonal.
	Snap float64
	// MaxVertices bounds the corner vertices; 0 means 2,000,000.
	MaxVertices int
	// Stop, when set, is asked now and then; an error ends the work and is returned.
	Stop func() error
}

// Mesh is a region in triangles.
type Mesh struct {
	Nodes []outline.Point // m
	// Triangles: corners 0, 1, 2 counterclockwise, then the mid-side nodes of the sides 0-1, 1-2, 2-0.
	Triangles [][6]int32
	// Within lists for each triangle the mesh lines (indices into Options.Lines, ascending) whose inside holds it.
	// Triangles share these slices.
	Within [][]int32
	// Edges are the sides on the boundary of the region, the region on their left.
	Edges []Edge
	// Corners is the number of corner nodes; they come first in Nodes.
	Corners int
	// Straightened counts curved sides whose mid-side node was moved off the curve to keep a triangle sound.
	Straightened int
	// Complete is false when the refinement stopped at MaxVertices.
	Complete bool
}

// Edge is a side on the boundary.
type Edge struct {
	Nodes [3]int32 // corner, mid-side node, corner
	Loop  int32    // 0 is the outer loop, i+1 hole i
	Curve int32    // index into that loop
}

// Triangulate divides the region into triangles. The errors say what is wrong with the region: loops that cross or
// touch themselves or each other, that are open or have no area, holes outside; or a size that is not positive.
func Triangulate(region outline.Region, o Options) (*Mesh, error) {
	if o.Size == nil {
		panic("planar: Options.Size is not set")
	}
	if err := check(region); err != nil {
		return nil, err
	}
	g := newMesher(region, o)
	if err := g.run(); err != nil {
		return nil, err
	}
	return g.quadratic(), nil
}

func newMesher(region outline.Region, o Options) *mesher {
	g := &mesher{options: o, region: region, diagonal: region.Bounds().Diagonal(), complete: true}
	if o.PerTurn <= 0 {
		g.options.PerTurn = 12
	}
	g.options.PerTurn = max(g.options.PerTurn, 4)
	if o.MinAngle <= 0 {
		g.options.MinAngle = 26 * math.Pi / 180
	}
	if o.Snap <= 0 {
		g.options.Snap = 2e-4 * g.diagonal
	}
	if o.MaxVertices <= 0 {
		g.options.MaxVertices = 2_000_000
	}
	return g
}

func (g *mesher) run() error {
	g.plan = arrange(g.region, g.options.Lines, g.options.Snap)
	for _, step := range []func() error{g.divide, g.constrain, g.refine} {
		if err := step(); err != nil {
			return err
		}
	}
	g.smooth()
	return nil
}

// mesher carries one call of Triangulate from step to step.
type mesher struct {
	*triangulation
	options  Options
	region   outline.Region
	plan     *plan
	diagonal float64
	complete bool

	segments []segment
	kind     []vertexKind // parallel to the vertices of the triangulation
	on       []int32      // piece of a vertex on a segment, none otherwise
	sharp    []bool       // vertices of the plan where pieces meet at a small angle
	covered  []bool       // by loop of the region, for holes within a mesh line
	inside   []bool       // by zone
	refined  []bool       // by zone: inside, and no row

	worn    []int32 // segments to be divided
	queued  []bool  // parallel to segments
	bad     badHeap
	visited []int32 // stamp per triangle
	stamp   int32
}

type vertexKind uint8

const (
	ofFrame   vertexKind = iota
	ofPlan               // end of a piece
	ofSegment            // between segments of one piece
	ofInside             // free
)

// segment is a part of a piece, from parameter t0 to t1, between the vertices a and b.
type segment struct {
	piece  int32
	t0, t1 float64
	a, b   int32
	final  bool // too short, or hemmed in, to be divided further
}

// sizeAt returns the wanted side length and an error when it is not a positive number.
func (g *mesher) sizeAt(p outline.Point) (float64, error) {
	h := g.options.Size(p)
	if !(h > 0) || math.IsInf(h, 1) {
		return 0, fmt.Errorf("the wanted size at (%g, %g) m is %g m; it must be positive", p.X, p.Y, h)
	}
	return h, nil
}
