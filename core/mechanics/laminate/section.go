package laminate

import (
	"fmt"
	"math"
)

// Ply is one layer of a stack.
type Ply struct {
	Material  Material
	Thickness float64 // m
	Angle     float64 // of the material's 1 axis, rad counterclockwise from the section's x axis
}

// Section is the stiffness and inertia of a plate per unit of its reference plane. See the package
// comment for symbols, order and units.
type Section struct {
	A, B, D                [3][3]float64 // order x, y, xy; N/m, N, N·m
	Shear                  [2][2]float64 // order xz, yz; N/m
	Mass, Coupling, Rotary float64       // m0 kg/m², m1 kg/m, m2 kg
	Thickness              float64       // m
}

// Homogeneous returns the section of a plate of one material, with shear factor 5/6. The reference
// plane is the mid-plane. Errors: a *ConstantError for impossible constants or thickness.
func Homogeneous(m Material, thickness, angle float64) (Section, error) {
	return FactoredStack([]Ply{{Material: m, Thickness: thickness, Angle: angle}}, 5.0/6)
}

// Stack returns the section of plies listed from bottom to top, with transverse shear from stress
// equilibrium. The reference plane is the mid-plane. Errors: an empty stack, or a ply with an
// impossible constant or thickness (wraps a *ConstantError).
func Stack(plies []Ply) (Section, error) {
	s, err := FactoredStack(plies, 1)
	if err != nil {
		return Section{}, err
	}
	s.Shear, err = equilibriumShear(plies, s)
	return s, err
}

// FactoredStack is Stack with transverse shear stiffness factor·∫G dz in place of equilibrium.
func FactoredStack(plies []Ply, factor float64) (Section, error) {
	if len(plies) == 0 {
		return Section{}, fmt.Errorf("a stack needs at least one ply")
	}
	var s Section
	for i, p := range plies {
		err := p.Material.Check()
		if err == nil && !(p.Thickness > 0) {
			err = &ConstantError{"thickness", p.Thickness, "must be positive"}
		}
		if err != nil {
			if len(plies) > 1 {
				err = fmt.Errorf("ply %d of %d from the bottom: %w", i+1, len(plies), err)
			}
			return Section{}, err
		}
		s.Thickness += p.Thickness
	}
	z := -s.Thickness / 2
	for _, p := range plies {
		// Moments about the mid-height c of the ply keep thin plies free of cancellation.
		t, c := p.Thickness, z+p.Thickness/2
		second := t*c*c + t*t*t/12
		q, g := p.Material.Reduced(p.Angle), p.Material.transverse(p.Angle)
		for i := range 3 {
			for j := range 3 {
				s.A[i][j] += q[i][j] * t
				s.B[i][j] += q[i][j] * t * c
				s.D[i][j] += q[i][j] * second
			}
		}
		for i := range 2 {
			for j := range 2 {
				s.Shear[i][j] += factor * g[i][j] * t
			}
		}
		rho := p.Material.Density
		s.Mass += rho * t
		s.Coupling += rho * t * c
		s.Rotary += rho * second
		z += t
	}
	if len(plies) == 1 { // the mid-plane of one ply is its own: exactly no coupling
		s.B, s.Coupling = [3][3]float64{}, 0
	}
	return s, nil
}

// Turn returns the section as seen from axes turned by angle (rad, counterclockwise about z): a
// stack whose plies lie at a in the old axes has them at a-angle in the new ones.
func (s Section) Turn(angle float64) Section {
	t := strainTurn(angle)
	s.A, s.B, s.D = congruent(s.A, t), congruent(s.B, t), congruent(s.D, t)
	// As for a material with G13, G23 and a coupling term, in axes at -angle.
	si, c := math.Sincos(angle)
	h := s.Shear
	s.Shear[0][0] = c*c*h[0][0] + 2*c*si*h[0][1] + si*si*h[1][1]
	s.Shear[1][1] = si*si*h[0][0] - 2*c*si*h[0][1] + c*c*h[1][1]
	s.Shear[0][1] = c*si*(h[1][1]-h[0][0]) + (c*c-si*si)*h[0][1]
	s.Shear[1][0] = s.Shear[0][1]
	return s
}

// Flip returns the section seen with z and y reversed: the plate turned over about its x axis.
func (s Section) Flip() Section {
	for i := range 3 {
		for j := range 3 {
			if (i == 2) != (j == 2) { // γ_xy changes sign with y
				s.A[i][j], s.D[i][j] = -s.A[i][j], -s.D[i][j]
			} else { // κ changes sign with z, so B does where γ_xy is not alone
				s.B[i][j] = -s.B[i][j]
			}
		}
	}
	s.Shear[0][1], s.Shear[1][0] = -s.Shear[0][1], -s.Shear[1][0]
	s.Coupling = -s.Coupling
	return s
}

// Uncoupled reports whether membrane and bending are independent (B = 0).
func (s Section) Uncoupled() bool { return s.B == [3][3]float64{} }
