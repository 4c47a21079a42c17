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
//	order  multiple of Ω; blade passing is the order equal to the number of blades
//
// Amplitudes are peak values; a phasor F stands for the real part of F e^{iωt}.
package rotor
