package beam

import (
	"math"

	"hushframe/core/mechanics/element"
)

// Unknowns of one element.
const Unknowns = 2 * element.NodeUnknowns

// planes lists where the four unknowns of bending in a plane sit: deflection and slope ψ = w' - γ at
// either node, and the sign of the rotation that ψ is.
var planes = [2]struct {
	index [4]int
	sign  float64
}{
	{[4]int{1, 5, 7, 11}, 1},  // x-y: ψ = θ_z
	{[4]int{2, 4, 8, 10}, -1}, // x-z: ψ = -θ_y
}

// plane returns the bending stiffness, shear stiffness and rotary inertia of plane p.
func (s Section) plane(p int) (ei, ga, j float64) {
	if p == 0 {
		return s.EIz, s.GAy, s.Jz
	}
	return s.EIy, s.GAz, s.Jy
}

// Matrices writes the packed stiffness and mass (see package element) of a beam of the
// given length (m) in its own axes. An infinite GAy or GAz leaves shear out. It panics unless length
// is positive and both slices hold element.Packed(Unknowns) numbers.
func Matrices(s Section, length float64, stiffness, mass []float64) {
	if !(length > 0) || len(stiffness) != element.Packed(Unknowns) || len(mass) != len(stiffness) {
		panic("beam: bad length or size of the matrices")
	}
	clear(stiffness)
	clear(mass)
	add := func(m []float64, i, j int, v float64) {
		m[element.Packed(max(i, j))+min(i, j)] += v
	}
	for _, rod := range []struct {
		i             int
		stiff, weight float64
	}{{0, s.EA, s.M}, {3, s.GJ, s.Jx}} {
		i, j := rod.i, rod.i+6
		add(stiffness, i, i, rod.stiff/length)
		add(stiffness, j, j, rod.stiff/length)
		add(stiffness, i, j, -rod.stiff/length)
		// The mean of consistent and lumped mass: their frequencies are off by ±(kh)²/24 for a wave
		// number k, so that the mean is off by the fourth power only. Rigid motions see no difference.
		add(mass, i, i, rod.weight*length*5/12)
		add(mass, j, j, rod.weight*length*5/12)
		add(mass, i, j, rod.weight*length/12)
	}
	for p, pl := range planes {
		ei, ga, jr := s.plane(p)
		k := bending(ei, ga, length)
		var m [4][4]float64
		for _, g := range gauss4 {
			w, psi := shapes(ei, ga, length, g.at)
			for a := range 4 {
				for b := range a + 1 {
					m[a][b] += g.weight * length * (s.M*w[a]*w[b] + jr*psi[a]*psi[b])
				}
			}
		}
		for a := range 4 {
			for b := range a + 1 {
				sign := 1.0
				if (a+b)%2 == 1 {
					sign = pl.sign
				}
				add(stiffness, pl.index[a], pl.index[b], sign*k[a][b])
				add(mass, pl.index[a], pl.index[b], sign*m[a][b])
			}
		}
	}
}

// shearParameter is Φ = 12 EI/(GA L²).
func shearParameter(ei, ga, length float64) float64 {
	if math.IsInf(ga, 1) {
		return 0
	}
	return 12 * ei / (ga * length * length)
}

// bending returns the stiffness over w0, ψ0, w1, ψ1.
func bending(ei, ga, l float64) [4][4]float64 {
	phi := shearParameter(ei, ga, l)
	c := ei / (l * l * l * (1 + phi))
	return [4][4]float64{
		{12 * c, 6 * l * c, -12 * c, 6 * l * c},
		{6 * l * c, (4 + phi) * l * l * c, -6 * l * c, (2 - phi) * l * l * c},
		{-12 * c, -6 * l * c, 12 * c, -6 * l * c},
		{6 * l * c, (2 - phi) * l * l * c, -6 * l * c, (4 + phi) * l * l * c},
	}
}

// shapes returns deflection and slope at x = ξ·l of unit w0, ψ0, w1, ψ1.
func shapes(ei, ga, l, xi float64) (w, psi [4]float64) {
	phi := shearParameter(ei, ga, l)
	mu := 1 / (1 + phi)
	x2, x3 := xi*xi, xi*xi*xi
	w = [4]float64{
		mu * (2*x3 - 3*x2 - phi*xi + 1 + phi),
		mu * l * (x3 - (2+phi/2)*x2 + (1+phi/2)*xi),
		-mu * (2*x3 - 3*x2 - phi*xi),
		mu * l * (x3 - (1-phi/2)*x2 - phi/2*xi),
	}
	psi = [4]float64{
		6 * mu / l * (x2 - xi),
		mu * (3*x2 - (4+phi)*xi + 1 + phi),
		-6 * mu / l * (x2 - xi),
		mu * (3*x2 - (2-phi)*xi),
	}
	return w, psi
}

// gauss4 is the four-point Gauss–Legendre rule on (0, 1), exact to degree seven.
var gauss4 = func() (rule [4]struct{ at, weight float64 }) {
	in, out := math.Sqrt(3.0/7-2.0/7*math.Sqrt(1.2)), math.Sqrt(3.0/7+2.0/7*math.Sqrt(1.2))
	heavy, light := (18+math.Sqrt(30))/72, (18-math.Sqrt(30))/72
	for i, x := range []float64{-out, -in, in, out} {
		rule[i].at, rule[i].weight = (1+x)/2, light
		if i == 1 || i == 2 {
			rule[i].weight = heavy
		}
	}
	return rule
}()

// Energies returns the strain energy (J) by kind of one element under motion, twelve components in
// its own axes. Stretching counts as in-plane, torsion as twist.
func Energies(s Section, length float64, motion []float64) (out [element.Kinds]float64) {
	if len(motion) != Unknowns {
		panic("beam: a motion has twelve components")
	}
	stretch, twist := motion[6]-motion[0], motion[9]-motion[3]
	out[element.InPlane] = s.EA / length * stretch * stretch / 2
	out[element.Twist] = s.GJ / length * twist * twist / 2
	for p, pl := range planes {
		ei, ga, _ := s.plane(p)
		var u [4]float64
		for a := range 4 {
			u[a] = motion[pl.index[a]]
			if a%2 == 1 {
				u[a] *= pl.sign
			}
		}
		k := bending(ei, ga, length)
		total, force := 0.0, 0.0
		for a := range 4 {
			force += k[0][a] * u[a]
			for b := range 4 {
				total += u[a] * k[a][b] * u[b] / 2
			}
		}
		shear := force * force * length / (2 * ga) // the shear force is constant
		out[element.Shear] += shear
		out[element.Bending] += total - shear
	}
	return out
}
