// Package beam holds the two-node Timoshenko beam with exact static interpolation.
//
// Axes: x along the beam from node 0 to node 1, y and z across it along the principal axes of the
// section, right-handed. Unknowns per node: u_x, u_y, u_z, θ_x, θ_y, θ_z. Bending in the x-z plane
// turns sections by θ_y = -w' + γ, in the x-y plane by θ_z = v' - γ.
//
//	EA, EIy, EIz, GJ   axial (N), bending about y and z, torsional stiffness (N·m²)
//	GAy, GAz           shear stiffness along y and z with the shear factor applied, N
//	m, jx, jy, jz      mass (kg/m) and rotary inertia (kg·m) per length about x, y and z
//	Wy, Wz, Wt         moduli: moment over the greatest stress it makes, bending and torsion, m³
//	Φ                  12 EI/(GA L²), the shear parameter of one element
//
// The interpolation solves the static equations of the unloaded beam exactly, so that one element
// is exact under end loads; it and the consistent mass of bending with rotary inertia follow
// Z. Friedman and J. B. Kosmatka, An improved two-node Timoshenko beam finite element, Comput. Struct.
// 47, 1993. Stretching and torsion take the mean of consistent and lumped mass.
package beam
