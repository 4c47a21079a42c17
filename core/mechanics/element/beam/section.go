package beam

import "math"

// Section holds the stiffness and inertia of a beam per length, and what its stresses follow from.
type Section struct {
	EA, EIy, EIz, GJ, GAy, GAz float64
	M, Jx, Jy, Jz              float64
	// Area (m²) and moduli (m³): the moment over the greatest stress that it makes, in bending about y and z and
	// in torsion. They are needed for stresses alone.
	Area, Wy, Wz, Wt float64
}

// Rectangle returns the section of a solid rectangle, width along y and height along z (m), of an
// isotropic material: E (Pa), Poisson's ratio nu, density rho (kg/m³). Shear factor 5/6, torsion
// constant of St Venant, torsional inertia from the polar second moment.
func Rectangle(width, height, e, nu, rho float64) Section {
	g, area := e/(2*(1+nu)), width*height
	iy, iz := width*height*height*height/12, height*width*width*width/12
	return Section{
		EA: e * area, EIy: e * iy, EIz: e * iz, GJ: g * TorsionConstant(width, height),
		GAy: 5.0 / 6 * g * area, GAz: 5.0 / 6 * g * area,
		M: rho * area, Jx: rho * (iy + iz), Jy: rho * iy, Jz: rho * iz,
		Area: area, Wy: 2 * iy / height, Wz: 2 * iz / width, Wt: TorsionModulus(width, height),
	}
}

// Tube returns the section of a round tube (inner 0: a solid bar), diameters in m. Shear factor of
// G. R. Cowper, The shear coefficient in Timoshenko's beam theory, J. Appl. Mech. 33, 1966.
func Tube(outer, inner, e, nu, rho float64) Section {
	g := e / (2 * (1 + nu))
	area := math.Pi / 4 * (outer*outer - inner*inner)
	i := math.Pi / 64 * (outer*outer*outer*outer - inner*inner*inner*inner)
	r := inner / outer
	h := (1 + r*r) * (1 + r*r)
	factor := 6 * (1 + nu) * h / ((7+6*nu)*h + (20+12*nu)*r*r)
	return Section{
		EA: e * area, EIy: e * i, EIz: e * i, GJ: g * 2 * i,
		GAy: factor * g * area, GAz: factor * g * area,
		M: rho * area, Jx: 2 * rho * i, Jy: rho * i, Jz: rho * i,
		Area: area, Wy: 2 * i / outer, Wz: 2 * i / outer, Wt: 4 * i / outer,
	}
}

// TorsionConstant returns St Venant's torsion constant of a rectangle in m⁴, by the series of S. P.
// Timoshenko and J. N. Goodier, Theory of Elasticity, 3rd ed., 1970, to ten digits.
func TorsionConstant(width, height float64) float64 {
	b, t := max(width, height), min(width, height)
	sum := 0.0
	for n := 1.0; n < 200; n += 2 {
		sum += math.Tanh(n*math.Pi*b/(2*t)) / (n * n * n * n * n)
	}
	return b * t * t * t * (1.0/3 - 64/(math.Pi*math.Pi*math.Pi*math.Pi*math.Pi)*t/b*sum)
}
