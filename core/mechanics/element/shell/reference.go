package shell

import "math"

// bubbleScale makes the bubble one at the centroid.
const bubbleScale = 27

// at holds the shape functions of a formulation at one point of the reference triangle. Entry
// [nodes] is the bubble.
type at struct {
	value, dr, ds []float64
}

func linearAt(r, s float64) at {
	return withBubble(at{
		value: []float64{1 - r - s, r, s},
		dr:    []float64{-1, 1, 0},
		ds:    []float64{-1, 0, 1},
	}, r, s)
}

func quadraticAt(r, s float64) at {
	l := 1 - r - s
	return withBubble(at{
		value: []float64{l * (2*l - 1), r * (2*r - 1), s * (2*s - 1), 4 * l * r, 4 * r * s, 4 * s * l},
		dr:    []float64{1 - 4*l, 4*r - 1, 0, 4 * (l - r), 4 * s, -4 * s},
		ds:    []float64{1 - 4*l, 0, 4*s - 1, -4 * r, 4 * r, 4 * (l - s)},
	}, r, s)
}

func withBubble(a at, r, s float64) at {
	a.value = append(a.value, bubbleScale*r*s*(1-r-s))
	a.dr = append(a.dr, bubbleScale*s*(1-2*r-s))
	a.ds = append(a.ds, bubbleScale*r*(1-r-2*s))
	return a
}

// position is a weighted point of the reference triangle; weights of a rule add up to ½.
type position struct{ r, s, weight float64 }

// degree4 is the six-point rule of degree four: G. R. Cowper, Gaussian quadrature formulas for
// triangles, Int. J. Numer. Methods Eng. 7, 1973, in closed form.
func degree4() []position {
	root := math.Sqrt(38 - 44*math.Sqrt(0.4))
	wroot := math.Sqrt(213125 - 53320*math.Sqrt(10))
	var rule []position
	for _, sign := range []float64{1, -1} {
		a := (8 - math.Sqrt(10) + sign*root) / 18
		w := (620 + sign*wroot) / 3720 / 2
		rule = append(rule, position{a, a, w}, position{1 - 2*a, a, w}, position{a, 1 - 2*a, w})
	}
	return rule
}

// degree6 is the product of the four-point Gauss–Legendre rule with itself, collapsed onto the
// triangle: sixteen points, exact to degree six.
func degree6() []position {
	in, out := math.Sqrt(3.0/7-2.0/7*math.Sqrt(1.2)), math.Sqrt(3.0/7+2.0/7*math.Sqrt(1.2))
	heavy, light := (18+math.Sqrt(30))/72, (18-math.Sqrt(30))/72
	x := []float64{(1 - out) / 2, (1 - in) / 2, (1 + in) / 2, (1 + out) / 2}
	w := []float64{light, heavy, heavy, light}
	var rule []position
	for i := range x {
		for j := range x {
			rule = append(rule, position{x[i], x[j] * (1 - x[i]), w[i] * w[j] * (1 - x[i])})
		}
	}
	return rule
}
