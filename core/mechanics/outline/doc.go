// Package outline describes flat regions bounded by straight lines, circular arcs and cubic Bézier curves.
//
// Terms. A curve is one piece of a boundary, run through by a parameter t from 0 (P0) to 1 (P1). A loop is a
// closed chain of curves, each beginning where the one before it ends. A region is the inside of one outer loop
// less the insides of its holes.
//
// Units and signs. Lengths are metres in the local plane of a plate, angles radians, areas square metres. Angles
// and sweeps are positive counterclockwise. Outer loops run counterclockwise (positive area), holes clockwise.
//
// The ends P0 and P1 of an arc are kept beside its centre and radius, and At(0) and At(1) return them unchanged, so
// that neighbouring curves meet exactly whatever rounding did to the angles.
//
// Limits. Loops are taken to be closed and free of self-crossings by Contains and Area; SelfCrossings says where
// they are not. Whether a point within rounding of the boundary is inside is not defined.
package outline
