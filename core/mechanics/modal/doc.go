// Package modal turns eigenpairs of a free airframe into a modal basis and says what each mode is.
//
// # Terms
//
//	φ             a vector of the basis over all nodes, with φᵀMφ = 1 and φᵀKφ = ω² = (2πf)²
//	rigid         one of six exact rigid-body motions, f = 0; elastic: a mode with f > 0
//	residual      a combination of static answers to unit loads, orthogonal to all modes in M and K,
//	              that carries what the modes left out; its frequency is a number of the basis
//	inertia       loads on a free body are balanced by the inertia of its rigid acceleration:
//	relief        f - M R Rᵀ f with R the rigid vectors
//	loss          η of a mode alone: Σ η_g φᵀK_gφ / ω², the damping ratio is η/2
//	strength      gyro strength per axis: peak gyro rate of the mode alone, at resonance, per unit
//	              force, (rad/s)/N: |φ_gyro| √(Σ φ_hub²) / (ω η), root sum of squares over the three
//	              force components at all rotor hubs; moments likewise, (rad/s)/(N·m)
//	share         the part of a rotor in the square of the strength
//	meeting       the rotor speed at which an order (1, 2 or blade passing) has the frequency of a
//	              mode: Ω = ω / order
//
// Axes 0, 1, 2 are roll, pitch and yaw. Everything is in SI: rad/s and Hz as named.
package modal
