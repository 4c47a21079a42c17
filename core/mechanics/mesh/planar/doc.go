// Package planar divides flat regions with curved boundaries into triangles with six nodes.
//
// Terms. A segment is a piece of a boundary or mesh line that is a side of triangles. A mesh line is a closed loop,
// such as the rim of a clamp disc, that sides of triangles must follow wherever it runs inside the region. The frame
// is a large rectangle round everything; what lies between it and the region is triangulated too and left out at the
// end. Lengths are in metres, angles in radians.
//
// Method. Boundaries and mesh lines are cut where they meet (arrange), divided into segments that follow size and
// curvature (divide), and made sides of a constrained Delaunay triangulation (triangulation, force) with predicates
// whose signs are exact (predicates). Triangles that are too large or have too small an angle are then removed by new
// vertices (refine): J. Ruppert, A Delaunay refinement algorithm for quality 2-dimensional mesh generation, J.
// Algorithms 18, 1995; L. P. Chew, Guaranteed-quality mesh generation for curved surfaces, 9th Symp. Comp. Geometry,
// 1993 (segments are protected by lenses instead of circles); A. Üngör, Off-centers, LATIN 2004; J. R. Shewchuk,
// Delaunay refinement algorithms for triangular mesh generation, Comp. Geometry 22, 2002 (segments that meet at small
// angles are divided on common circles about the corner, and the short sides across such a corner are left alone).
// Along edges that ask for it a row of stretched triangles is laid out beforehand and kept (rows). Vertices inside are
// then moved where that improves the worst angle round them (smooth), and mid-side nodes are put on the true curves
// (quadratic).
//
// Limits. Where boundaries come closer than about a thousandth of the wanted size angles are not kept. At sharp corners
// (below 61 degrees) and in the triangles next to them they cannot be. Rows have angles of 15 to 45 degrees, and down to 6 where they end.
//
// The result depends on the input alone: no maps are iterated, nothing is random, one goroutine does the work.
package planar
