package planar

import (
	"math"

	"hushframe/core/mechanics/outline"
)

// widths measures the region straight across from its boundary.
type widths struct {
	a, b []outline.Point // ends of chords of the whole boundary
	skip float64         // (m) chords nearer than this are those of the place itself
}

func newWidths(region outline.Region) *widths {
	tol := 1e-4 * region.Bounds().Diagonal()
	w := &widths{skip: 4 * tol}
	for _, l := range region.Loops() {
		p := l.Flatten(tol)
		for i := range p {
			w.a = append(w.a, p[i])
			w.b = append(w.b, p[(i+1)%len(p)])
		}
	}
	return w
}

// across returns the distance from p, a place on the boundary, to the boundary opposite along the unit vector n, or
// infinity when nothing is met.
func (w *widths) across(p, n outline.Point) float64 {
	best := math.Inf(1)
	for i := range w.a {
		d := w.b[i].Sub(w.a[i])
		den := n.Cross(d)
		if den == 0 {
			continue
		}
		r := w.a[i].Sub(p)
		u := r.Cross(n) / den
		if u < 0 || u > 1 {
			continue
		}
		if s := r.Cross(d) / den; s > w.skip && s < best {
			best = s
		}
	}
	return best
}
