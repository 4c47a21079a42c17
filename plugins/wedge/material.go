package main

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/laminate"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// solid returns the stiffness of an orthotropic solid whose direction 1 lies at angle from x about z: stress over
// strain in the order of the package, Pa.
func solid(m laminate.Material, angle float64, options stage.Arguments) (c [6][6]float64, err error) {
	e3, nu13, nu23 := options.SI("normal_modulus"), options.Number("normal_ratio"), options.Number("normal_ratio")
	if e3 == 0 {
		e3 = m.E2
	}
	if isotropic(m) {
		e3, nu13, nu23 = m.E1, m.Nu12, m.Nu12
	} else {
		// The option is √(ν13 ν31), where ν13/E1 = ν31/E3: one number that stays possible for any stiffness of the fibres.
		nu13, nu23 = nu13*math.Sqrt(m.E1/e3), nu23*math.Sqrt(m.E2/e3)
	}
	compliance := mat.NewSymDense(6, nil)
	compliance.SetSym(0, 0, 1/m.E1)
	compliance.SetSym(1, 1, 1/m.E2)
	compliance.SetSym(2, 2, 1/e3)
	compliance.SetSym(0, 1, -m.Nu12/m.E1)
	compliance.SetSym(0, 2, -nu13/m.E1)
	compliance.SetSym(1, 2, -nu23/m.E2)
	compliance.SetSym(3, 3, 1/m.G23)
	compliance.SetSym(4, 4, 1/m.G13)
	compliance.SetSym(5, 5, 1/m.G12)
	var chol mat.Cholesky
	if !chol.Factorize(compliance) {
		return c, fault.New(fault.Input, "no solid has these constants: a Poisson's ratio of %g along the normal is too large beside ν12 = %g", options.Number("normal_ratio"), m.Nu12).
			Of("options.normal_ratio").Do("lower normal_ratio")
	}
	var inverse mat.SymDense
	if err := chol.InverseTo(&inverse); err != nil {
		return c, fault.New(fault.Numeric, "%v", err)
	}
	turn := strainTurn(angle)
	var half [6][6]float64
	for i := range 6 {
		for j := range 6 {
			for k := range 6 {
				half[i][j] += inverse.At(i, k) * turn[k][j]
			}
		}
	}
	for i := range 6 {
		for j := range 6 {
			for k := range 6 {
				c[i][j] += turn[k][i] * half[k][j]
			}
		}
	}
	return c, nil
}

func isotropic(m laminate.Material) bool {
	near := func(a, b float64) bool { return math.Abs(a-b) <= 1e-6*b }
	g := m.E1 / (2 * (1 + m.Nu12))
	return near(m.E1, m.E2) && near(m.G12, g) && near(m.G13, g) && near(m.G23, g)
}

// strainTurn gives strains in the axes of the ply from those in the axes of the element.
func strainTurn(angle float64) (t [6][6]float64) {
	s, c := math.Sincos(angle)
	t[0] = [6]float64{c * c, s * s, 0, 0, 0, c * s}
	t[1] = [6]float64{s * s, c * c, 0, 0, 0, -c * s}
	t[2][2] = 1
	t[3] = [6]float64{0, 0, 0, c, -s, 0}
	t[4] = [6]float64{0, 0, 0, s, c, 0}
	t[5] = [6]float64{-2 * c * s, 2 * c * s, 0, 0, 0, c*c - s*s}
	return t
}
