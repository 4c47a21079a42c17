package printed

import (
	"math"

	"gonum.org/v1/plot/plotter"

	"hushframe/stages/report/draw"
)

// path gives the parts of a curve within the chart, cut where it crosses the border. On a logarithmic scale what lies below
// or above runs along the border, so that a deep valley is seen to go on; what has no value breaks the curve.
func path(ch *draw.Chart, x, y []float64) (out []plotter.XYs) {
	var piece plotter.XYs
	flush := func() {
		if len(piece) > 1 {
			out = append(out, piece)
		}
		piece = nil
	}
	for k := 1; k < len(x); k++ {
		a, okA := scaledPoint(ch, x[k-1], y[k-1])
		c, okC := scaledPoint(ch, x[k], y[k])
		if !okA || !okC {
			flush()
			continue
		}
		from, to, ok := inside(a, c)
		if !ok {
			flush()
			continue
		}
		first, last := between(a, c, from), between(a, c, to)
		if len(piece) == 0 || from > 0 {
			flush()
			piece = append(piece, onPaper(ch, first))
		}
		piece = append(piece, onPaper(ch, last))
		if to < 1 {
			flush()
		}
	}
	flush()
	return out
}

// scaledPoint maps a point so that the chart is the unit square; false for what has no place on its scales.
func scaledPoint(ch *draw.Chart, x, y float64) (p [2]float64, ok bool) {
	for d, v := range [2]float64{x, y} {
		a := ch.X
		if d == 1 {
			a = ch.Y
		}
		if math.IsNaN(v) || math.IsInf(v, 0) || a.Log && !(v > 0) {
			return p, false
		}
		if a.Log {
			p[d] = math.Log(v/a.From) / math.Log(a.To/a.From)
		} else {
			p[d] = (v - a.From) / (a.To - a.From)
		}
	}
	if ch.Y.Log {
		p[1] = math.Max(0, math.Min(1, p[1]))
	}
	return p, true
}

// onPaper maps back.
func onPaper(ch *draw.Chart, p [2]float64) plotter.XY {
	value := func(a draw.Axis, t float64) float64 {
		if a.Log {
			return a.From * math.Pow(a.To/a.From, t)
		}
		return a.From + t*(a.To-a.From)
	}
	return plotter.XY{X: value(ch.X, p[0]), Y: value(ch.Y, p[1])}
}

// inside gives the part of a line within the unit square, by its shares from 0 to 1 (Y.-D. Liang and B. A. Barsky, A new
// concept and method for line clipping, ACM Transactions on Graphics 3, 1984).
func inside(a, c [2]float64) (from, to float64, ok bool) {
	from, to = 0, 1
	for d := range a {
		step := c[d] - a[d]
		for _, side := range [2]struct{ p, q float64 }{{-step, a[d]}, {step, 1 - a[d]}} {
			switch t := side.q / side.p; {
			case side.p == 0:
				if side.q < 0 {
					return 0, 0, false
				}
			case side.p < 0:
				from = math.Max(from, t)
			default:
				to = math.Min(to, t)
			}
		}
	}
	return from, to, from < to
}

func between(a, c [2]float64, t float64) [2]float64 {
	switch t {
	case 0:
		return a
	case 1:
		return c
	}
	return [2]float64{a[0] + t*(c[0]-a[0]), a[1] + t*(c[1]-a[1])}
}
