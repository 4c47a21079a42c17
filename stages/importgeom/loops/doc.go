// Package loops makes plates of loose curves: it joins them end to end, drops what is drawn twice, and finds which
// closed outlines bound material and which are holes in it.
//
// Terms. A piece is one curve with a note of where it comes from. A loose end is an end that meets no other. An outline
// is a closed curve with the holes inside it. A chain is a run of pieces with loose ends. A tangle is a group of
// pieces in which three or more ends meet, so that no loop through them is the only one: an outline that crosses
// itself, or two that cross or touch.
//
// Rules.
//
//  1. Of two pieces that lie on each other within the tolerance one is dropped, also where they overlap in part.
//  2. Pieces are cut where they cross or touch and where a loose end lies on another piece.
//  3. Ends within a hundredth of the tolerance are one place. A loose end is joined to the nearest other one within
//     the tolerance; its piece is bent to meet it.
//     What sticks out by less than the tolerance beyond a crossing is trimmed.
//  4. Runs that still end loosely are set aside as chains.
//  5. What remains is closed. A loop inside no other, or inside an even number of others, is an outline; inside an odd
//     number, a hole. A circle concentric with a round hole and inside it is a countersink drawn as two circles: the
//     smaller one is the hole and the larger one is set aside.
//
// Lengths are metres.
package loops
