package draw

import (
	"math"
)

// Thin leaves at most so many places of a curve: of each run of neighbours the lowest and the highest stay, in their
// order, so that no peak is lost; a run without a value leaves one gap. A curve that is short enough is given back as
// it is.
func Thin(c Curve, most int) Curve {
	n := len(c.X)
	if n <= most || most < 2 {
		return c
	}
	runs := most / 2
	out := Curve{Name: c.Name, Class: c.Class}
	take := func(k int) {
		out.X, out.Y = append(out.X, c.X[k]), append(out.Y, c.Y[k])
		if c.Lower != nil {
			out.Lower = append(out.Lower, c.Lower[k])
		}
		if c.Upper != nil {
			out.Upper = append(out.Upper, c.Upper[k])
		}
	}
	for r := range runs {
		from, to := r*n/runs, (r+1)*n/runs
		low, high := -1, -1
		for k := from; k < to; k++ {
			if math.IsNaN(c.Y[k]) {
				continue
			}
			if low < 0 || c.Y[k] < c.Y[low] {
				low = k
			}
			if high < 0 || c.Y[k] > c.Y[high] {
				high = k
			}
		}
		switch {
		case low < 0:
			take(from)
		case low == high:
			take(low)
		default:
			take(min(low, high))
			take(max(low, high))
		}
	}
	return out
}
