// Package forced answers what the gyro feels when forces and moments act on a
// frame that vibrates in a small set of modal coordinates.
//
// # Terms and symbols
//
//	φ_v      vector v of the basis, M-orthonormal and K-orthogonal (package modal)
//	ω_v      2π times its frequency, rad/s; 0 for the six rigid-body vectors
//	q        modal coordinates, complex, kg^½·m
//	η_g      loss factor of loss group g
//	K_g      stiffness of group g in the basis, Φᵀ K_g Φ, full and symmetric
//	r_g(f)   what a law says of group g at a frequency: its complex stiffness over K_g; 1 where it has none
//	C        coefficient of velocity in the basis (dampers, spinning rotors), real, often absent
//	f, ω     frequency of excitation in Hz and rad/s; time dependence e^{+iωt}
//
// Motion follows from
//
//	[ diag(ω_v²) + Σ (r_g(f) − 1 + iη_g) K_g + iω C − ω² I ] q = Φᵀ F
//
// The damping matrix is not assumed diagonal: a soft lossy mount couples the
// modes, and only the full matrix has that right. Rigid-body vectors are in
// the sum, so that the response of a free frame is finite above 0 Hz and grows
// without bound towards it.
//
// The rotation rate of the gyro is iω times its rotation; axis 0 is roll, 1
// pitch, 2 yaw. A transfer function is that rate in rad/s per newton or per
// newton metre of one component (0 to 2 forces along x, y, z; 3 to 5 moments)
// at one rotor hub. Forces and moments are never added at unit level.
//
// Spectra are one-sided power spectral densities, (rad/s)²/Hz. Sources that do
// not know of each other are added as power.
//
// # Method
//
// Many frequencies are answered by the frame at rest in its own complex vectors, which are found once (spectral): rows
// and loads then meet in one product of real matrices per frequency. Stiffness with a law stretches in few ways, spinning rotors
// couple few motions; both come in by Woodbury's identity, so that no matrix of the size of the basis is
// factorised at a frequency. A frame condensed at rest (Rest) answers at any rotor speed.
//
// A single frequency is answered without the vectors. Without dampers and laws the matrix is a constant one shifted by ω². It is
// brought to upper Hessenberg form once, by unitary reflections, after which each frequency
// costs O(n²) (A. J. Laub, Efficient multivariable frequency response
// computations, IEEE Trans. Automatic Control 26, 1981). Else, and where the vectors are not good
// enough, each frequency is a full factorisation with partial pivoting.
package forced
