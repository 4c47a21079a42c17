package beam

import "math"

// Forces returns what holds one element in motion (twelve components in its own axes, see Matrices) at
// rest: forces (N) and moments (N·m) on node 0, then on node 1. Those on node 1 are the resultants of the
// section there, of the part beyond upon the part before; those on node 0 are their negative.
func Forces(s Section, length float64, motion []float64) (out [Unknowns]float64) {
	if !(length > 0) || len(motion) != Unknowns {
		panic("beam: bad length, or a motion that has not twelve components")
	}
	for _, rod := range []struct {
		i     int
		stiff float64
	}{{0, s.EA}, {3, s.GJ}} {
		pull := rod.stiff / length * (motion[rod.i+6] - motion[rod.i])
		out[rod.i], out[rod.i+6] = -pull, pull
	}
	for p, pl := range planes {
		ei, ga, _ := s.plane(p)
		k := bending(ei, ga, length)
		sign := func(a int) float64 {
			if a%2 == 1 {
				return pl.sign
			}
			return 1
		}
		for a := range 4 {
			for b := range 4 {
				out[pl.index[a]] += sign(a) * k[a][b] * sign(b) * motion[pl.index[b]]
			}
		}
	}
	return out
}

// Stress is the greatest stress (Pa) over a section that each of its resultants makes alone, with the sign
// of the resultant: tension, bending about y and about z, and the shear stress of torsion.
type Stress struct {
	Tension, AboutY, AboutZ, Torsion float64
}

// Stresses returns the stresses at both ends of one element in motion, see Forces. They are those of
// slender bars: what the hold of an end adds near it is not in them, the shear stress of transverse
// forces neither.
func Stresses(s Section, length float64, motion []float64) (out [2]Stress) {
	f := Forces(s, length, motion)
	for end, sign := range []float64{-1, 1} {
		at := f[6*end:]
		out[end] = Stress{sign * at[0] / s.Area, sign * at[4] / s.Wy, sign * at[5] / s.Wz, sign * at[3] / s.Wt}
	}
	return out
}

// TorsionModulus returns the torque over the greatest shear stress that it makes in a rectangle, in m³, by
// St Venant. The stress is greatest in the middle of the long sides: G θ' t (1 - 8/π² Σ 1/(n² cosh(nπb/2t)),
// n odd) for width b, thickness t and twist θ' per length; S. P. Timoshenko and J. N. Goodier, Theory of
// Elasticity, 3rd ed., 1970.
func TorsionModulus(width, height float64) float64 {
	b, t := max(width, height), min(width, height)
	sum := 0.0
	for n := 1.0; n < 200; n += 2 {
		sum += 1 / (n * n * math.Cosh(n*math.Pi*b/(2*t)))
	}
	return TorsionConstant(b, t) / (t * (1 - 8/(math.Pi*math.Pi)*sum))
}
