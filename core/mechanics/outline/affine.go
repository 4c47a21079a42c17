package outline

import "math"

// Affine is the map (x, y) → (XX·x + XY·y + X0, YX·x + YY·y + Y0). Its zero value sends all to the origin;
// Identity is the map that changes nothing.
type Affine struct {
	XX, XY, X0 float64
	YX, YY, Y0 float64
}

// Identity returns the map that changes nothing.
func Identity() Affine { return Affine{XX: 1, YY: 1} }

// Shift returns the translation by d.
func Shift(d Point) Affine { return Affine{XX: 1, X0: d.X, YY: 1, Y0: d.Y} }

// Turn returns the rotation about the origin by angle (rad, counterclockwise). Multiples of a quarter turn are exact.
func Turn(angle float64) Affine {
	s, c := math.Sincos(angle)
	if q := angle / (math.Pi / 2); q == math.Trunc(q) && math.Abs(q) < 1e6 {
		switch ((int(q) % 4) + 4) % 4 {
		case 0:
			s, c = 0, 1
		case 1:
			s, c = 1, 0
		case 2:
			s, c = 0, -1
		case 3:
			s, c = -1, 0
		}
	}
	return Affine{XX: c, XY: -s, YX: s, YY: c}
}

// Stretch returns the scaling about the origin by fx along x and fy along y; negative factors mirror.
func Stretch(fx, fy float64) Affine { return Affine{XX: fx, YY: fy} }

// Then returns the map that applies a first and b afterwards.
func (a Affine) Then(b Affine) Affine {
	return Affine{
		XX: b.XX*a.XX + b.XY*a.YX, XY: b.XX*a.XY + b.XY*a.YY, X0: b.XX*a.X0 + b.XY*a.Y0 + b.X0,
		YX: b.YX*a.XX + b.YY*a.YX, YY: b.YX*a.XY + b.YY*a.YY, Y0: b.YX*a.X0 + b.YY*a.Y0 + b.Y0,
	}
}

// Apply returns the image of the place p.
func (a Affine) Apply(p Point) Point {
	return Point{a.XX*p.X + a.XY*p.Y + a.X0, a.YX*p.X + a.YY*p.Y + a.Y0}
}

// ApplyVector returns the image of the vector v (no translation).
func (a Affine) ApplyVector(v Point) Point {
	return Point{a.XX*v.X + a.XY*v.Y, a.YX*v.X + a.YY*v.Y}
}

// Determinant returns the factor by which areas grow; it is negative when a mirrors.
func (a Affine) Determinant() float64 { return a.XX*a.YY - a.XY*a.YX }

// Similarity returns the factor by which a scales all lengths and whether it scales all directions alike (relative
// tolerance 1e-9): translation, rotation, uniform scaling and mirrors do, shear and unequal scaling do not.
func (a Affine) Similarity() (factor float64, ok bool) {
	u, v := Point{a.XX, a.YX}, Point{a.XY, a.YY}
	factor = math.Sqrt(math.Abs(a.Determinant()))
	tol := 1e-9 * (u.Dot(u) + v.Dot(v))
	ok = factor > 0 && math.Abs(u.Dot(v)) <= tol && math.Abs(u.Dot(u)-v.Dot(v)) <= tol
	return factor, ok
}
