// Package known holds problems with exact or independently computed answers, for tests.
//
// Rows reads the reference values of testdata/known; their README explains fields, tolerances and
// traps. Structured meshes of rectangles, discs and rings, plain or distorted by a fixed seed, build
// the plates the rows describe.
package known
