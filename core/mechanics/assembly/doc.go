// Package assembly turns nodes, elements, rigid bodies and springs into one stiffness and one mass
// matrix over independent unknowns.
//
// # Terms
//
//	node frame   the axes in which the six components of a node are unknowns. Where all plates at a
//	             node share a normal it is the frame of the first, so that component 5 is the
//	             drilling rotation and nothing else; elsewhere the axes of the airframe.
//	body         a rigid body: a reference point with displacement U (m) and rotation θ (rad) in
//	             airframe axes. A member node at offset r moves by U + θ×r and turns with θ, except
//	             for its drilling rotation, which stays its own unknown.
//	spring       six stiffness components between two bodies, or a body and the ground, acting at a
//	             point in a frame of its own. A component of +Inf is rigid and is eliminated.
//	contact      springs spread over an area or along a line, between the interpolated motions of two
//	             plates; a sum over pairs of nodes that a point sees together.
//	group        what strain energy and damping are told apart by: a part, joint or mount.
//	unknown      an independent number y_i: a component of a free node, of a body, or a drilling
//	             rotation. All motion is q = T y; K = Tᵀ K_e T summed over the elements, likewise M.
//	motion       six components u_x, u_y, u_z (m), θ_x, θ_y, θ_z (rad), airframe axes unless said.
//
// Rigid ties are eliminated, never penalised. Bodies that share a node are merged into one, which the
// system reports. Rigid components of springs give linear constraints between the six components of
// bodies; they are brought to reduced row echelon form per cluster of bodies, so loops and redundant
// ties are no trouble.
//
// Results do not depend on the number of threads.
package assembly
