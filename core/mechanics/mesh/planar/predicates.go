package planar

import (
	"math"

	"hushframe/core/mechanics/outline"
)

// Bounds on the rounding error of the two determinants, relative to the sum of the magnitudes of their terms
// (Shewchuk 1997, ccwerrboundA and iccerrboundA).
const (
	unitRoundoff  = 1.0 / (1 << 53)
	orientBound   = (3 + 16*unitRoundoff) * unitRoundoff
	inCircleBound = (10 + 96*unitRoundoff) * unitRoundoff
)

// orient returns a number with the sign of the area of triangle abc: positive when a, b, c run counterclockwise, zero
// when they lie on a line. The sign is exact as long as products of coordinate differences do not underflow.
func orient(a, b, c outline.Point) float64 {
	l := float64((a.X - c.X) * (b.Y - c.Y))
	r := float64((a.Y - c.Y) * (b.X - c.X))
	det := l - r
	if bound := orientBound * (math.Abs(l) + math.Abs(r)); det > bound || -det > bound {
		return det
	}
	return orientExact(a, b, c)
}

func orientExact(a, b, c outline.Point) float64 {
	var m [4][2]float64
	ax, ay := difference(m[0][:0], a.X, c.X), difference(m[1][:0], a.Y, c.Y)
	bx, by := difference(m[2][:0], b.X, c.X), difference(m[3][:0], b.Y, c.Y)
	return leading(crossExact(ax, ay, bx, by))
}

// crossExact returns ax·by − ay·bx.
func crossExact(ax, ay, bx, by []float64) []float64 {
	return addExpansions(nil, multiplyExpansions(ax, by), negate(multiplyExpansions(ay, bx)))
}

// inCircle returns a number that is positive when d lies inside the circle through a, b and c, which run
// counterclockwise, negative outside and zero on it. The sign is exact as for orient.
func inCircle(a, b, c, d outline.Point) float64 {
	adx, ady := a.X-d.X, a.Y-d.Y
	bdx, bdy := b.X-d.X, b.Y-d.Y
	cdx, cdy := c.X-d.X, c.Y-d.Y
	bc1, bc2 := float64(bdx*cdy), float64(cdx*bdy)
	ca1, ca2 := float64(cdx*ady), float64(adx*cdy)
	ab1, ab2 := float64(adx*bdy), float64(bdx*ady)
	al := float64(adx*adx) + float64(ady*ady)
	bl := float64(bdx*bdx) + float64(bdy*bdy)
	cl := float64(cdx*cdx) + float64(cdy*cdy)
	det := float64(al*(bc1-bc2)) + float64(bl*(ca1-ca2)) + float64(cl*(ab1-ab2))
	permanent := float64((math.Abs(bc1)+math.Abs(bc2))*al) +
		float64((math.Abs(ca1)+math.Abs(ca2))*bl) + float64((math.Abs(ab1)+math.Abs(ab2))*cl)
	if bound := inCircleBound * permanent; det > bound || -det > bound {
		return det
	}
	return inCircleExact(a, b, c, d)
}

func inCircleExact(a, b, c, d outline.Point) float64 {
	var m [6][2]float64
	ax, ay := difference(m[0][:0], a.X, d.X), difference(m[1][:0], a.Y, d.Y)
	bx, by := difference(m[2][:0], b.X, d.X), difference(m[3][:0], b.Y, d.Y)
	cx, cy := difference(m[4][:0], c.X, d.X), difference(m[5][:0], c.Y, d.Y)
	term := func(ux, uy, vx, vy, wx, wy []float64) []float64 {
		lift := addExpansions(nil, multiplyExpansions(ux, ux), multiplyExpansions(uy, uy))
		return multiplyExpansions(lift, crossExact(vx, vy, wx, wy))
	}
	sum := addExpansions(nil, term(ax, ay, bx, by, cx, cy), term(bx, by, cx, cy, ax, ay))
	return leading(addExpansions(nil, sum, term(cx, cy, ax, ay, bx, by)))
}
