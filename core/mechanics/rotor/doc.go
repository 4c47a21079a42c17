// Package rotor gives the forces that a spinning motor and propeller put on a
// frame.
//
// # Terms and symbols
//
//	Ω    rotational speed, rad/s, positive
//	s    spin, +1 counterclockwise seen from the tip of the axis, −1 clockwise
//	m    mass of the spinning part, kg
//	e    distance of its centre of mass from the axis of rotation, m
//	U    unbalance m·e, kg·m
//	Jp   polar inertia of what spins, about the shaft, kg·m²
//	Jt   moment of inertia about an axis square to the shaft, kg·m²
//	H    angular momentum s·Jp·Ω, N·m·s
//	G    gyroscopic matrix in a modal basis: a rotor that tilts by θ(t) about axes
//	     e₁, e₂ (e₁ × e₂ along its shaft) adds H θ₂′ to the equation of θ₁ and −H θ₁′ to
//	     that of θ₂ (G. Genta, Dynamics of Rotating Systems, 2005)
//	order  multiple of Ω; blade passing is the order equal to the number of blades
//
// Amplitudes are peak values; a phasor F stands for the real part of F e^{iωt}.
package rotor
