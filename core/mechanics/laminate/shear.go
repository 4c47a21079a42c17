package laminate

import (
	"errors"
	"math"
)

// equilibriumShear returns the transverse shear stiffness S (order xz, yz) from equilibrium.
//
// Two states are taken: cylindrical bending along x, and along y. In the first the curvature grows
// as κ_x,x = 1, and the mid-plane strains ε_x and γ_xy follow with N_x = N_xy = 0. Equilibrium then
// gives τ_xz,z = -σ_x,x and τ_yz,z = -τ_xy,x, both zero at the bottom face (and, by N = 0, at the
// top). With the stresses τ(z) of both states as columns and their integrals over z as Q, a unit
// shear force carries f(z) = τ(z) Q⁻¹, and S⁻¹ = ∫ fᵀ G⁻¹ f dz. For a symmetric cross-ply this is
// Whitney and Pagano's factor; for one ply it is 5/6 at any angle.
func equilibriumShear(plies []Ply, s Section) ([2][2]float64, error) {
	type state struct {
		own  int        // index of the stress along the direction of bending
		edge [2]float64 // gradients of ε_own and γ_xy
	}
	var states [2]state
	for i := range states {
		a11, a12, a22 := s.A[i][i], s.A[i][2], s.A[2][2]
		det := a11*a22 - a12*a12
		if !(det > 0) {
			return [2][2]float64{}, errors.New("the membrane stiffness of the stack is singular")
		}
		states[i] = state{i, [2]float64{
			-(a22*s.B[i][i] - a12*s.B[2][i]) / det,
			-(a11*s.B[2][i] - a12*s.B[i][i]) / det,
		}}
	}

	var force [2][2]float64 // ∫ τ dz: rows xz, yz; columns states
	var low [2][2]float64   // τ at the bottom of the ply
	var energy [2][2]float64
	z := -s.Thickness / 2
	for _, p := range plies {
		q, g := p.Material.Reduced(p.Angle), p.Material.transverse(p.Angle)
		det := g[0][0]*g[1][1] - g[0][1]*g[1][0]
		// τ at distance d above the bottom of the ply.
		tau := func(d float64) (t [2][2]float64) {
			for col, st := range states {
				along := q[st.own][st.own]*st.edge[0] + q[st.own][2]*st.edge[1]
				across := q[2][st.own]*st.edge[0] + q[2][2]*st.edge[1]
				mid := d * (z + d/2) // ∫ z dz
				t[st.own][col] = low[st.own][col] - along*d - q[st.own][st.own]*mid
				t[1-st.own][col] = low[1-st.own][col] - across*d - q[2][st.own]*mid
			}
			return t
		}
		for _, gp := range gauss3 { // τ is quadratic in z, so its square needs degree four
			t, w := tau(p.Thickness*gp.at), p.Thickness*gp.weight
			for i := range 2 {
				for j := range 2 {
					force[i][j] += w * t[i][j]
					energy[i][j] += w / det * (t[0][i]*(g[1][1]*t[0][j]-g[0][1]*t[1][j]) + t[1][i]*(g[0][0]*t[1][j]-g[1][0]*t[0][j]))
				}
			}
		}
		low = tau(p.Thickness)
		z += p.Thickness
	}

	// S = Q energy⁻¹ Qᵀ.
	energy[0][1] = (energy[0][1] + energy[1][0]) / 2
	det := energy[0][0]*energy[1][1] - energy[0][1]*energy[0][1]
	if !(det > 0) {
		return [2][2]float64{}, errors.New("the transverse shear flexibility of the stack is singular")
	}
	inv := [2][2]float64{{energy[1][1] / det, -energy[0][1] / det}, {-energy[0][1] / det, energy[0][0] / det}}
	var shear [2][2]float64
	for i := range 2 {
		for j := range 2 {
			for k := range 2 {
				for l := range 2 {
					shear[i][j] += force[i][k] * inv[k][l] * force[j][l]
				}
			}
		}
	}
	shear[1][0] = shear[0][1]
	return shear, nil
}

// gauss3 is the three-point Gauss–Legendre rule on (0, 1).
var gauss3 = [3]struct{ at, weight float64 }{
	{0.5 - math.Sqrt(0.15), 5.0 / 18},
	{0.5, 8.0 / 18},
	{0.5 + math.Sqrt(0.15), 5.0 / 18},
}

// inverse3 returns the inverse by cofactors, and false if the matrix is singular.
func inverse3(m [3][3]float64) (r [3][3]float64, ok bool) {
	for i := range 3 {
		for j := range 3 {
			a, b, c, d := (i+1)%3, (i+2)%3, (j+1)%3, (j+2)%3
			r[j][i] = m[a][c]*m[b][d] - m[a][d]*m[b][c]
		}
	}
	det := m[0][0]*r[0][0] + m[0][1]*r[1][0] + m[0][2]*r[2][0]
	if det == 0 || math.IsNaN(det) {
		return r, false
	}
	for i := range 3 {
		for j := range 3 {
			r[i][j] /= det
		}
	}
	return r, true
}
