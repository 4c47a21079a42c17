// Package laminate turns plies, or the homogenised constants of a whole plate, into the section
// stiffness and inertia of first-order shear-deformable (Reissner–Mindlin) plate theory.
//
// # Terms
//
//	1, 2        axes of a material: 1 along the fibre (or warp), 2 across it in the plane
//	x, y, z     axes of the section: z is the plate normal, x and y lie in the reference (mid) plane
//	angle       from x to 1, counterclockwise seen against z, in radians
//	Q           reduced (plane stress) stiffness, order 11, 22, 12 (engineering shear strain), Pa
//	N, M        force and moment per length: N = A ε + B κ (N/m), M = B ε + D κ (N)
//	ε           mid-plane strains ε_x, ε_y, γ_xy
//	κ           curvatures κ_x = ∂β_x/∂x, κ_y = ∂β_y/∂y, κ_xy = ∂β_x/∂y + ∂β_y/∂x in 1/m, where the
//	            in-plane displacement at height z is u + z β_x, v + z β_y; thus M_x = ∫ σ_x z dz
//	Q_x, Q_y    transverse shear force per length: {Q_x, Q_y} = S {γ_xz, γ_yz}, N/m
//	m0, m1, m2  ∫ ρ {1, z, z²} dz: mass (kg/m²), coupling (kg/m) and rotary inertia (kg) per area
//
// A, B, D and S are in SI. Plies are listed from the bottom (lowest z) to the top.
//
// # Transverse shear
//
// A homogeneous plate takes the factor 5/6. A stack takes the stiffness whose energy equals that of
// the shear stresses which balance the bending stresses in cylindrical bending along either axis,
// with no in-plane force: J. M. Whitney and N. J. Pagano, Shear deformation in heterogeneous
// anisotropic plates, J. Appl. Mech. 37, 1970. For one ply both give 5/6.
package laminate
