// Package cases builds the problems of the rows of testdata/known and solves them as jobs are solved:
// elements, rigid bodies and springs, assembly, sparse factorisation, eigen-solver, modal response.
//
// A Family is a set of rows that one function builds, with the mesh it uses. Frequencies come from
// eigen.Lowest, whose count proves that none is missing; static answers from the same sparse factor.
// Plates are quadratic triangles unless said otherwise, on meshes no finer than the row's.
//
// Curved shells are made of flat facets of that type whose straight-sided corners lie on the surface, so
// that mid-side nodes lie in the plane of the facet. Where facets meet at an angle the drilling rotation
// of one is part of the bending rotation of the other, as in the folds of real frames.
package cases
