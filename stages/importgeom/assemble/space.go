package assemble

import (
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
)

type vec = airframe.Vec

func add(a, b vec) vec              { return vec{a[0] + b[0], a[1] + b[1], a[2] + b[2]} }
func sub(a, b vec) vec              { return vec{a[0] - b[0], a[1] - b[1], a[2] - b[2]} }
func scale(a vec, f float64) vec    { return vec{f * a[0], f * a[1], f * a[2]} }
func along(p, d vec, f float64) vec { return add(p, scale(d, f)) }
func dot(a, b vec) float64          { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }
func norm(a vec) float64            { return math.Sqrt(dot(a, a)) }
func cross(a, b vec) vec {
	return vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

// turned rotates v about an airframe axis (0 x, 1 y, 2 z) by an angle, right-handed. Quarter turns are exact.
func turned(v vec, axis int, angle float64) vec {
	t := outline.Turn(angle)
	i, j := (axis+1)%3, (axis+2)%3
	p := t.ApplyVector(outline.Point{X: v[i], Y: v[j]})
	v[i], v[j] = p.X, p.Y
	return v
}

// inSpace gives the place of a point of a plate's frame, at height z above the mid-surface.
func inSpace(f airframe.Frame, p outline.Point, z float64) vec {
	return along(along(along(f.Origin, f.X, p.X), f.Y, p.Y), f.Z, z)
}

// onPlate gives the point of a plate's frame below or above airframe x, y; ok is false for upright plates.
func onPlate(f airframe.Frame, at outline.Point) (p outline.Point, ok bool) {
	if math.Abs(f.Z[2]) < 1e-3 {
		return p, false
	}
	d := vec{at.X - f.Origin[0], at.Y - f.Origin[1], 0}
	d[2] = -(d[0]*f.Z[0] + d[1]*f.Z[1]) / f.Z[2]
	return outline.Point{X: dot(d, f.X), Y: dot(d, f.Y)}, true
}

// tensor is a symmetric tensor by its elements xx, yy, zz, xy, xz, yz.
type tensor [6]float64

// principal is the tensor with moments m about the axes of the orthonormal frame.
func principal(m vec, axes [3]vec) tensor {
	var t tensor
	pairs := [6][2]int{{0, 0}, {1, 1}, {2, 2}, {0, 1}, {0, 2}, {1, 2}}
	for n, ij := range pairs {
		for k := range 3 {
			t[n] += m[k] * axes[k][ij[0]] * axes[k][ij[1]]
		}
	}
	return t
}

func (t tensor) plus(u tensor) tensor {
	for i := range t {
		t[i] += u[i]
	}
	return t
}

// shifted adds the inertia of a mass at distance d from the reference point (parallel axes): m(d²1 − d dᵀ).
func (t tensor) shifted(m float64, d vec) tensor {
	q := dot(d, d)
	return t.plus(tensor{m * (q - d[0]*d[0]), m * (q - d[1]*d[1]), m * (q - d[2]*d[2]),
		-m * d[0] * d[1], -m * d[0] * d[2], -m * d[1] * d[2]})
}

// box gives the moments of a homogeneous box about its own axes.
func box(mass float64, size vec) vec {
	a, b, c := size[0]*size[0], size[1]*size[1], size[2]*size[2]
	return vec{mass / 12 * (b + c), mass / 12 * (a + c), mass / 12 * (a + b)}
}

// cylinder gives the moments of a homogeneous cylinder about its own axes, z along it.
func cylinder(mass, diameter, length float64) vec {
	r := diameter / 2
	t := mass * (r*r/4 + length*length/12)
	return vec{t, t, mass * r * r / 2}
}
