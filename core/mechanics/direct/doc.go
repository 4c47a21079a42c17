// Package direct solves the full damped equations of a structure at single
// frequencies, to hold the response of a modal basis against.
//
// # Terms and symbols
//
//	y        unknowns of the structure, complex amplitudes (package assembly)
//	K_g      stiffness of group g over the unknowns
//	c_g      complex stiffness of group g over its real one: 1 + iη_g, or what a law says at the frequency
//	M, G     mass; gyroscopic matrix of the spinning rotors
//	ω        2π times the frequency; time dependence e^{+iωt}
//
// The equations are
//
//	[ Σ c_g K_g + iωG − ω²M ] y = F
//
// with no basis between them and the answer.
//
// # Method
//
// The real part P = Σ Re c_g K_g − ω²M is factorised. The whole is solved by
// GMRES with P as a right preconditioner (Y. Saad and M. H. Schultz, GMRES,
// SIAM J. Sci. Stat. Comput. 7, 1986): its operator is the identity plus damping and spin over P, which is
// near the identity but for the few motions close to the frequency, so that it
// settles in some tens of steps. Rounds follow for what is left over, until the
// answer no longer changes.
package direct
