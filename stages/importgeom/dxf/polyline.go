package dxf

import (
	"math"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
)

// corner is a vertex of a polyline with the bulge of the segment that begins there: the tangent of a quarter of its
// sweep, positive counterclockwise.
type corner struct {
	at    outline.Point
	bulge float64
}

func lightPolyline(_ *reader, rec record, own outline.Affine) ([]outline.Curve, *fault.Error) {
	flags, err := rec.whole(70, 0)
	if err != nil {
		return nil, err
	}
	var corners []corner
	for _, t := range rec.tags {
		if t.code != 10 && t.code != 20 && t.code != 42 {
			continue
		}
		x, err := t.real()
		if err != nil {
			return nil, err
		}
		if t.code == 10 {
			corners = append(corners, corner{at: outline.Point{X: x}})
		} else if len(corners) > 0 {
			last := &corners[len(corners)-1]
			if t.code == 20 {
				last.at.Y = x
			} else {
				last.bulge = x
			}
		}
	}
	return segments(corners, flags&1 != 0, own), nil
}

func polyline(r *reader, rec record, own outline.Affine) ([]outline.Curve, *fault.Error) {
	flags, err := rec.whole(70, 0)
	if err != nil {
		return nil, err
	}
	const closed, spatial, mesh, faces, splineFrame = 1, 8, 16, 64, 16
	if flags&(mesh|faces) != 0 {
		r.skipped["POLYLINE that is a mesh"]++
		return nil, nil
	}
	var corners []corner
	for _, v := range rec.below {
		if v.kind != "VERTEX" {
			continue
		}
		kind, err := v.whole(70, 0)
		if err != nil {
			return nil, err
		}
		if kind&splineFrame != 0 {
			continue // control point of a curve whose fitted points follow
		}
		p, err := v.reals(10, 20, 42)
		if err != nil {
			return nil, err
		}
		corners = append(corners, corner{outline.Point{X: p[0], Y: p[1]}, p[2]})
	}
	if flags&spatial != 0 { // in the drawing's coordinates, without bulges
		own = outline.Identity()
		for i := range corners {
			corners[i].bulge = 0
		}
	}
	return segments(corners, flags&closed != 0, own), nil
}

func segments(corners []corner, closed bool, own outline.Affine) []outline.Curve {
	var curves []outline.Curve
	for i, c := range corners {
		if i == len(corners)-1 && !closed {
			break
		}
		next := corners[(i+1)%len(corners)]
		if next.at == c.at {
			continue
		}
		sweep := 4 * math.Atan(c.bulge)
		curve := outline.Line(c.at, next.at)
		if sweep != 0 && math.Abs(sweep) < 2*math.Pi {
			curve = outline.ArcBetween(c.at, next.at, sweep)
		}
		curves = append(curves, curve.Transform(own))
	}
	return curves
}
