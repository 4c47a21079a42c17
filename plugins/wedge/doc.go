// Command wedge is an element type from outside: quadratic solid wedges of 15 nodes, extruded from the triangles
// of a plate and stacked in layers. It knows no plate theory, and so checks that of the built-in elements.
//
// # Terms
//
//	column     the wedges over one triangle, from the lower face to the upper; the element of the contract
//	layer      one wedge of a column; every layer is of equal thickness
//	level      a height with points: the faces of the layers (six points) and their middles (three)
//	ξ, η       area coordinates of corners 1 and 2; that of corner 0 is 1 - ξ - η
//	ζ          -1 on the lower face of a layer, 1 on the upper
//	strain     ε_x, ε_y, ε_z, γ_yz, γ_xz, γ_xy; stress likewise, Pa
//
// The shape functions are those of the 15-node serendipity wedge (O. C. Zienkiewicz and R. L. Taylor, The Finite
// Element Method, 5th ed., vol. 1, 2000, chapter 8). They hold all quadratic polynomials, so that bending is exact
// in straight-sided columns. Integration is by seven points in the triangle (degree 5) and by three Gauss points in
// each part of a layer that is of one ply.
//
// A material of a plate lacks three constants of a solid: the modulus along the normal and two ratios of Poisson.
// For an isotropic ply they follow from the others; else they are options. In a plate with free faces they matter
// little: the stress along the normal is nearly nil.
package main
