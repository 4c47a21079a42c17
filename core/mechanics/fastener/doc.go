// Package fastener gives the six-component stiffness between plates that a screw clamps, and of layers between
// plates, from dimensions and materials.
//
// # Terms
//
//	stack       plates under one screw, from bottom to top; the joint of a pair connects the middles of neighbours
//	cone        from the screw's heads the clamped material spreads at 30° towards the middle of the stack
//	d, D        diameters of the hole and of the head or washer
//	E₃, G       modulus through the thickness; transverse shear modulus, the mean of both directions
//
// # Formulas
//
// Of the material between the middles of two plates, cut into frusta of the cone (plate by plate, and at the middle of
// the stack), all in a row:
//
//	axial       k = π E₃ d tanα / ln[(D₂−d)(D₁+d) / ((D₂+d)(D₁−d))], D₁ and D₂ the diameters at the ends of a
//	            frustum, α = 30°: J. E. Shigley and C. R. Mischke, Mechanical Engineering Design, 5th ed., 1989,
//	            stiffness of members in a bolted joint; for one material and D = 1.5 d it is there
//	            k = 0.577 π E d / (2 ln[5 (0.577 l + 0.5 d)/(0.577 l + 2.5 d)])
//	shear       k = G A / h of each frustum, A from its mean diameter: friction under preload sticks at small motion
//	rocking     k_r = k (R² + r²)/4, the annulus R, r at the face that the two plates share on a bed of stiffness k;
//	            turning about the axis likewise with the shear stiffness and (R² + r²)/2
//	screw       axial k = E A / l in parallel, with l that of the whole stack and 0.4 diameters within each head
//	            (common practice for screws), A that of the core, 0.75 of the nominal one; shared by the pairs of the
//	            stack in a row
//	bearing     where preload does not hold, the shear stiffness is 1/C of a screw in its hole in single shear,
//	            C = ((t₁+t₂)/(2d))^(2/3) · b · (1/(t₁E₁) + 1/(t₂E₂) + 1/(2t₁E_s) + 1/(2t₂E_s)), b = 4.2 in
//	            composites, 3.0 in metal: H. Huth, Influence of fastener flexibility on the prediction of load transfer
//	            and fatigue life for multiple-row joints, ASTM STP 927, 1986
//	layer       glue of thickness t, or two halves of plates that touch, per area: normal E/t and shear G/t, in a row
//	            1/Σ(t/E): M. Goland and E. Reissner, The stresses in cemented joints, J. Appl. Mech. 11, 1944
//
// All formulas are from memory of these sources. They leave out the roughness of faces and the local dishing of the
// plates, both of which soften: measured joints lie lower, which is why a joint group carries a range.
//
// Everything is SI; components are x, y (across), z (along the screw), then rotations about them.
package fastener
