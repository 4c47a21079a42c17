package laminate

import (
	"fmt"
	"math"
)

// Material holds the elastic constants of an orthotropic ply or homogenised plate in its own axes.
type Material struct {
	E1, E2   float64 // Young's moduli along and across the fibre, Pa
	G12      float64 // in-plane shear modulus, Pa
	Nu12     float64 // Poisson's ratio: strain along 2 is -Nu12 times that along 1 under stress along 1
	G13, G23 float64 // transverse shear moduli, Pa
	Density  float64 // kg/m³
}

// Isotropic returns the constants of an isotropic material with Young's modulus e (Pa), Poisson's
// ratio nu and density rho (kg/m³). A ratio outside -1 < nu < 0.5 has no stable material; use
// CheckIsotropic to find out.
func Isotropic(e, nu, rho float64) Material {
	g := e / (2 * (1 + nu))
	return Material{E1: e, E2: e, G12: g, Nu12: nu, G13: g, G23: g, Density: rho}
}

// ConstantError names a constant that no stable material can have.
type ConstantError struct {
	Constant string  // "E1", "nu12", "density", ...
	Value    float64 // the offending value in SI
	Bound    string  // what would be possible, as a clause: "must be positive"
}

// Error states the constant, its value and its bound.
func (e *ConstantError) Error() string {
	return fmt.Sprintf("%s = %g is impossible: it %s", e.Constant, e.Value, e.Bound)
}

// Check reports the first constant that makes the strain energy of the material negative or
// undefined, as a *ConstantError, or nil. Moduli and density must be positive and finite, and
// |ν12| < sqrt(E1/E2), the bound for an orthotropic solid (R. M. Jones, Mechanics of Composite
// Materials, 2nd ed., 1999, constraints on elastic constants).
func (m Material) Check() error {
	for _, c := range []struct {
		name  string
		value float64
	}{{"E1", m.E1}, {"E2", m.E2}, {"G12", m.G12}, {"G13", m.G13}, {"G23", m.G23}, {"density", m.Density}} {
		if !(c.value > 0) || math.IsInf(c.value, 1) {
			return &ConstantError{c.name, c.value, "must be positive"}
		}
	}
	if bound := math.Sqrt(m.E1 / m.E2); !(math.Abs(m.Nu12) < bound) {
		return &ConstantError{"nu12", m.Nu12, fmt.Sprintf("must lie between -%.4g and %.4g, the square root of E1/E2", bound, bound)}
	}
	return nil
}

// CheckIsotropic reports the first impossible constant of an isotropic material, as a
// *ConstantError, or nil.
func CheckIsotropic(e, nu, rho float64) error {
	switch {
	case !(e > 0) || math.IsInf(e, 1):
		return &ConstantError{"E", e, "must be positive"}
	case !(nu > -1 && nu < 0.5):
		return &ConstantError{"nu", nu, "must lie between -1 and 0.5"}
	case !(rho > 0) || math.IsInf(rho, 1):
		return &ConstantError{"density", rho, "must be positive"}
	}
	return nil
}

// Reduced returns the plane-stress stiffness Q in axes turned so that the material's 1 axis lies at
// angle (rad, counterclockwise from x): {σ_x, σ_y, τ_xy} = Q {ε_x, ε_y, γ_xy}, in Pa, symmetric.
func (m Material) Reduced(angle float64) [3][3]float64 {
	nu21 := m.Nu12 * m.E2 / m.E1
	d := 1 - m.Nu12*nu21
	q := [3][3]float64{
		{m.E1 / d, m.Nu12 * m.E2 / d, 0},
		{m.Nu12 * m.E2 / d, m.E2 / d, 0},
		{0, 0, m.G12},
	}
	return congruent(q, strainTurn(-angle))
}

// transverse returns {τ_xz, τ_yz} = G {γ_xz, γ_yz} with the 1 axis at angle.
func (m Material) transverse(angle float64) [2][2]float64 {
	c, s := math.Cos(angle), math.Sin(angle)
	off := c * s * (m.G13 - m.G23)
	return [2][2]float64{
		{c*c*m.G13 + s*s*m.G23, off},
		{off, s*s*m.G13 + c*c*m.G23},
	}
}

// strainTurn returns T with ε' = T ε, where ε' holds ε_x', ε_y', γ_x'y' in axes turned by -angle:
// x' at -angle from x.
func strainTurn(angle float64) [3][3]float64 {
	c, s := math.Cos(angle), math.Sin(angle)
	return [3][3]float64{
		{c * c, s * s, -c * s},
		{s * s, c * c, c * s},
		{2 * c * s, -2 * c * s, c*c - s*s},
	}
}

// congruent returns Tᵀ Q T, symmetrised against rounding.
func congruent(q, t [3][3]float64) [3][3]float64 {
	var qt, r [3][3]float64
	for i := range 3 {
		for j := range 3 {
			for k := range 3 {
				qt[i][j] += q[i][k] * t[k][j]
			}
		}
	}
	for i := range 3 {
		for j := range i + 1 {
			for k := range 3 {
				r[i][j] += t[k][i] * qt[k][j]
			}
			r[j][i] = r[i][j]
		}
	}
	return r
}
