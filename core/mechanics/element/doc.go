// Package element holds the contract that every plate element type meets, built in or from outside.
//
// # Terms
//
//	element frame   right-handed axes of one element: x and y in its plane, z along its normal. All
//	                coordinates, motions and matrices at this interface are in it; the caller turns
//	                them. The laminate section of the element is given in the same axes.
//	unknowns        six per node, node by node: u_x, u_y, u_z (m), θ_x, θ_y, θ_z (rad). A fibre along
//	                the normal turns by θ, so a point at height z moves in the plane by
//	                (u_x + z θ_y, u_y - z θ_x); θ_z is the drilling rotation.
//	points          what a solid element has in place of nodes with six unknowns: places above and below
//	                the nodes of the triangle, with u_x, u_y, u_z each.
//	packed          lower triangle of a symmetric matrix, row by row: entry (i, j), j ≤ i, at
//	                i(i+1)/2 + j. Stiffness in N/m, N, N·m; mass in kg, kg·m, kg·m².
//	kinds           shares of the strain energy: in-plane ½∫N·ε (with the drilling term), bending
//	                ½∫(M_x κ_x + M_y κ_y), twist ½∫M_xy κ_xy, transverse shear ½∫Q·γ. They add up to
//	                ½ uᵀKu; bending and twist are told apart in the axes of the element.
//
// A call carries all elements of one type, since calls may cross a process boundary.
package element
