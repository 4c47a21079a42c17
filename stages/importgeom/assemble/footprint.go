package assemble

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
)

// footprint is a patch as a convex polygon in the plate's frame; a disc becomes one of 48 corners with its area.
func footprint(p airframe.Patch) []outline.Point {
	var out []outline.Point
	if p.Shape == airframe.Rectangle {
		for _, c := range outline.Rectangle(p.Centre, p.Width, p.Height, p.Turn) {
			out = append(out, c.P0)
		}
		return out
	}
	const n = 48
	r := p.Radius * math.Sqrt(2*math.Pi/n/math.Sin(2*math.Pi/n))
	for i := range n {
		s, c := math.Sincos(2 * math.Pi * float64(i) / n)
		out = append(out, p.Centre.Add(outline.Point{X: c, Y: s}.Scale(r)))
	}
	return out
}

// meet reports whether two convex polygons overlap by more than rounding, by the separating axis theorem.
func meet(p, q []outline.Point) bool {
	for _, poly := range [2][]outline.Point{p, q} {
		for i := range poly {
			e := poly[(i+1)%len(poly)].Sub(poly[i])
			n := outline.Point{X: e.Y, Y: -e.X} // outward of a counterclockwise polygon
			size := n.Norm()
			pMin, pMax := spread(p, n)
			qMin, qMax := spread(q, n)
			if pMax <= qMin+1e-7*size || qMax <= pMin+1e-7*size {
				return false
			}
		}
	}
	return true
}

func spread(p []outline.Point, n outline.Point) (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, a := range p {
		d := a.Dot(n)
		lo, hi = math.Min(lo, d), math.Max(hi, d)
	}
	return lo, hi
}

// overlaps notes patches of different owners that overlap on a plate: they will move as one body.
func (b *builder) overlaps() {
	patches := b.out.Geometry.Patches
	shapes := make([][]outline.Point, len(patches))
	for i, p := range patches {
		shapes[i] = footprint(p)
	}
	var list []string
	for i, p := range patches {
		for j := i + 1; j < len(patches); j++ {
			q := patches[j]
			if p.Plate == q.Plate && p.Owner != q.Owner && meet(shapes[i], shapes[j]) {
				list = append(list, fmt.Sprintf("%s and %s on %s", p.Owner, q.Owner, b.plates[p.Plate].name))
			}
		}
	}
	const most = 6
	for i, s := range list {
		if i == most {
			b.note("and %d more pairs of overlapping footprints", len(list)-most)
			break
		}
		b.note("the footprints of %s overlap and move as one", s)
	}
}
