// Package shell holds the built-in plate elements: flat triangles of shear-deformable laminates.
//
// # Kinematics
//
// In the element frame: mid-plane displacement u, v, w and fibre rotation β_x = θ_y, β_y = -θ_x, all
// interpolated alike (isoparametric). ε = sym ∇(u, v), κ = sym ∇β, and the covariant transverse
// shear strains on the reference triangle (r, s), with corners (0,0), (1,0), (0,1), are
//
//	e_r = w,r + β_x x,r + β_y y,r        e_s = w,s + β_x x,s + β_y y,s.
//
// Used as they are these lock; both types replace them by assumed fields. Both enrich β with the
// bubble 27 r s (1-r-s), whose two amplitudes are condensed out and carry no mass.
//
// # quadratic-triangle
//
// Six nodes, quadratic u, v, w and β. The assumed shear is the rotated Raviart–Thomas field of first
// order, 2 + 2·(r, s) + (s, -r)(d r + e s) with eight coefficients, which matches the tangential
// covariant strain at the two Gauss points of each side and the mean of e_r and e_s over the
// triangle: K. J. Bathe, F. Brezzi and S. W. Cho, The MITC7 and MITC9 plate bending elements,
// Comput. Struct. 32, 1989; error bounds free of the thickness in F. Brezzi, K. J. Bathe and
// M. Fortin, Mixed-interpolated elements for Reissner–Mindlin plates, Int. J. Numer. Methods Eng. 28,
// 1989. It is the bubble-stabilised relative of the six-node MITC6 element of P. S. Lee and K. J.
// Bathe, Development of MITC isotropic triangular shell finite elements, Comput. Struct. 82, 2004.
// Since w is quadratic and β contains linear fields, any straight-sided shape reproduces constant
// curvature with zero shear, and constant shear. Curved sides reproduce constant strain exactly and
// constant curvature to fourth order in the rise of the side, because cubic terms of w along a side
// have no derivative at its Gauss points.
//
// # linear-triangle
//
// Three nodes, linear u, v, w, β. The assumed shear is that of Y. Lee, P. S. Lee and K. J. Bathe, The
// MITC3+ shell element and its performance, Comput. Struct. 138, 2014. In its plane it is the
// constant-strain triangle: stiff in in-plane bending until refined.
//
// # Drilling
//
// θ_z is held to the in-plane rotation by ½ ∫ c (θ_z - ½(v,x - u,y))² dA, c a small share of the
// in-plane shear stiffness, which is zero in
// every rigid motion (T. J. R. Hughes and F. Brezzi, On drilling degrees of freedom, Comput. Methods
// Appl. Mech. Eng. 72, 1989). It has no mass.
//
// # Limits
//
// Nodes off the plane of the element are refused. The mass is consistent, with rotary and coupling
// inertia.
package shell
