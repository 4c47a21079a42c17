package assembly

import "math"

func add(a, b Vec) Vec           { return Vec{a[0] + b[0], a[1] + b[1], a[2] + b[2]} }
func sub(a, b Vec) Vec           { return Vec{a[0] - b[0], a[1] - b[1], a[2] - b[2]} }
func scale(c float64, a Vec) Vec { return Vec{c * a[0], c * a[1], c * a[2]} }
func dot(a, b Vec) float64       { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }
func length(a Vec) float64       { return math.Sqrt(dot(a, a)) }
func cross(a, b Vec) Vec {
	return Vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

// in returns the components of v in the axes.
func (a Axes) in(v Vec) Vec { return Vec{dot(a[0], v), dot(a[1], v), dot(a[2], v)} }

// out returns the vector with the given components in the axes.
func (a Axes) out(v Vec) Vec {
	return add(scale(v[0], a[0]), add(scale(v[1], a[1]), scale(v[2], a[2])))
}

// in6 and out6 do the same for a motion.
func (a Axes) in6(m [6]float64) [6]float64 {
	return join(a.in(Vec(m[:3])), a.in(Vec(m[3:])))
}

func (a Axes) out6(m [6]float64) [6]float64 {
	return join(a.out(Vec(m[:3])), a.out(Vec(m[3:])))
}

func join(u, r Vec) [6]float64 { return [6]float64{u[0], u[1], u[2], r[0], r[1], r[2]} }

// carried returns the motion at offset r from a point that moves by m, as one rigid body.
func carried(m [6]float64, r Vec) [6]float64 {
	turn := Vec(m[3:])
	return join(add(Vec(m[:3]), cross(turn, r)), turn)
}

// along returns axes with x along d, and y as near to hint as may be.
func along(d, hint Vec) Axes {
	x := scale(1/length(d), d)
	z := cross(x, hint)
	if length(z) < 1e-6*length(hint) || length(hint) == 0 {
		// The axis of x that is least along d.
		hint = Vec{}
		least := 0
		for i := range 3 {
			if math.Abs(x[i]) < math.Abs(x[least]) {
				least = i
			}
		}
		hint[least] = 1
		z = cross(x, hint)
	}
	z = scale(1/length(z), z)
	return Axes{x, cross(z, x), z}
}
