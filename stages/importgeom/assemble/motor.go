package assemble

import (
	"math"

	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/airframefile"
)

// motor is a motor without its propeller.
type motor struct {
	parts    []item
	spinning float64 // mass of the bell
	polar    float64 // inertia of the bell about the shaft
}

// motor gives the bell and the stator, or the whole as one cylinder of which half is taken to spin. axes are those of
// the plate, up the direction in which the shaft leaves the face.
func (b *builder) motor(r *airframefile.Rotor, axes [3]vec, face, up vec) (motor, *fault.Error) {
	if r.Bell != nil {
		m := motor{spinning: r.Bell.Mass}
		for _, s := range []*airframefile.Solid{r.Stator, r.Bell} {
			m.parts = append(m.parts, item{s.Mass, along(face, up, s.Height), solidInertia(s, axes)})
		}
		// About the shaft, which is the plate's normal.
		for k, ij := range [6][2]int{{0, 0}, {1, 1}, {2, 2}, {0, 1}, {0, 2}, {1, 2}} {
			twice := 1.0
			if k > 2 {
				twice = 2
			}
			m.polar += twice * m.parts[1].inertia[k] * axes[2][ij[0]] * axes[2][ij[1]]
		}
		return m, nil
	}
	length := r.Length.Or(2 * r.Height)
	if !r.Length.Given && len(r.Inertia) == 0 {
		b.assume(r.Part, "motor as long as twice the height of its centre of gravity")
	}
	diameter := r.Diameter.Value
	if !r.Diameter.Given {
		if length == 0 {
			return motor{}, r.Fault("height", "its size is not known: the centre of gravity lies on the face and no length is given").Do("give diameter and length")
		}
		diameter = math.Sqrt(4 * r.Mass / (math.Pi * motorDensity * length))
		b.assume(r.Part, "motor diameter of %s from its mass at %d kg/m³", mm(diameter), motorDensity)
	}
	inertia := principal(cylinder(r.Mass, diameter, length), axes)
	if len(r.Inertia) > 0 {
		inertia = tensor{}
		copy(inertia[:], r.Inertia)
	}
	radius := bellRadius * diameter / 2
	return motor{
		parts: []item{{r.Mass, along(face, up, r.Height), inertia}}, spinning: bellShare * r.Mass, polar: bellShare * r.Mass * radius * radius,
	}, nil
}

func solidInertia(s *airframefile.Solid, axes [3]vec) tensor {
	if len(s.Inertia) > 0 {
		var t tensor
		copy(t[:], s.Inertia)
		return t
	}
	return principal(ring(s.Mass, s.Diameter, s.Inner, s.Length), axes)
}

// ring gives the moments of a homogeneous hollow cylinder about its own axes, z along it.
func ring(mass, outer, inner, length float64) vec {
	q := (outer*outer + inner*inner) / 4
	t := mass * (q/4 + length*length/12)
	return vec{t, t, mass * q / 2}
}

// combine gives mass, centre of gravity and the tensor about it of several things.
func combine(items []item) (mass float64, centre vec, inertia tensor) {
	var moment vec
	for _, it := range items {
		mass += it.mass
		moment = along(moment, it.centre, it.mass)
	}
	centre = scale(moment, 1/mass)
	for _, it := range items {
		inertia = inertia.plus(it.inertia.shifted(it.mass, sub(it.centre, centre)))
	}
	return mass, centre, inertia
}
