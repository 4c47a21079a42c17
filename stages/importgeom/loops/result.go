package loops

import (
	"hushframe/core/mechanics/outline"
)

// Piece is a curve and the words that name its origin, such as "LINE 1F (line 120)".
type Piece struct {
	Curve  outline.Curve
	Source string
}

// Result is what was found in a set of pieces.
type Result struct {
	// Outlines by descending area inside the outer loop; equal ones by place.
	Outlines []Outline
	// Joined are loose ends that were closed, in order of the pieces.
	Joined []Gap
	// Dropped counts pieces, or parts of pieces, that lay on others; DroppedSources names some of them.
	Dropped        int
	DroppedSources []string
	// Trimmed counts ends that stuck out by less than the tolerance where two pieces cross.
	Trimmed int
	// Open are runs with loose ends.
	Open []Chain
	// Tangles are groups in which outlines cross or touch.
	Tangles []Tangle
	// Countersinks are the larger circles set aside.
	Countersinks []Countersink
}

// Outline is one region of material.
type Outline struct {
	Region outline.Region
	// Depth is the number of loops around the outer one: 0, or 2, 4, ... for a loose part inside a hole.
	Depth int
	// Source names a piece of the outer loop.
	Source string
}

// Gap is a pair of loose ends that was joined.
type Gap struct {
	At     outline.Point
	Width  float64
	Source string
}

// Chain is a run of pieces with a loose end at From. At To it is loose as well, or attached to other pieces.
type Chain struct {
	From, To         outline.Point
	Attached         bool
	FromPiece, ToEnd string // sources of its first and last piece
	Pieces           int
	Length           float64
	// Nearest is the distance from one of its ends to the nearest other loose end, infinite when there is none.
	Nearest   float64
	NearestAt outline.Point
}

// Tangle is a connected group of pieces whose closed loops are not unique.
type Tangle struct {
	// Places are where three or more ends meet, at most eight of them, with the sources that meet there.
	Places []Crossing
	// Area is that inside the group: all faces between its curves.
	Area float64
	// Box bounds it.
	Box outline.Box
}

// Crossing is a place where pieces cross or touch.
type Crossing struct {
	At      outline.Point
	Sources []string
}

// Countersink is a circle set aside because a smaller one concentric with it is the hole.
type Countersink struct {
	Centre        outline.Point
	Radius, Inner float64
}
