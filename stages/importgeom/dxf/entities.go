package dxf

import (
	"math"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
)

// reader gathers entities in units of the drawing.
type reader struct {
	tolerance float64
	keep      map[string]bool // by lower-case layer; empty keeps all
	blocks    map[string]block
	skipped   map[string]int
	layers    map[string]int
	entities  []Entity
	curves    int
	visits    int
}

// placement is where the entities of a block land.
type placement struct {
	at    outline.Affine
	layer string // of the insert, for entities on layer 0 of its block; "" at the top
	depth int

	open string // names of the blocks being taken apart, to find circles
}

func (r *reader) readEntities(records []record, p placement) *fault.Error {
	for _, rec := range records {
		if err := r.readEntity(rec, p); err != nil {
			if err.Place == "" {
				err = rec.at(err)
			}
			return err
		}
	}
	return nil
}

func (r *reader) readEntity(rec record, p placement) *fault.Error {
	if rec.text(67) == "1" {
		r.skipped["in paper space"]++
		return nil
	}
	layer := rec.text(8)
	if layer == "" {
		layer = "0"
	}
	if layer == "0" && p.layer != "" {
		layer = p.layer
	}
	read, ok := shapes[rec.kind]
	if !ok && rec.kind != "INSERT" {
		r.skipped[rec.kind]++
		return nil
	}
	own, flat, err := rec.plane()
	if err != nil {
		return err
	}
	if !flat {
		r.skipped[rec.kind+" in another plane"]++
		return nil
	}
	if rec.kind == "INSERT" {
		return r.insert(rec, own, layer, p)
	}
	curves, err := read(r, rec, own)
	if err != nil {
		return err
	}
	if len(curves) == 0 {
		r.skipped[rec.kind+" without length"]++
		return nil
	}
	r.layers[layer]++
	if !r.kept(layer) {
		return nil
	}
	mapped, err := mapped(curves, p.at)
	if err != nil {
		return err
	}
	if r.curves += len(mapped); r.curves > maxCurves {
		return fault.New(fault.Limit, "the drawing has more than %d curves", maxCurves).Do("leave out what is not cut")
	}
	for _, c := range mapped {
		for _, p := range [4]outline.Point{c.P0, c.P1, c.C1, c.C2} {
			if !(math.Abs(p.X) < largest && math.Abs(p.Y) < largest) {
				return fault.New(fault.Input, "a coordinate is out of range").Do("check the scale factors of its inserts")
			}
		}
	}
	if len(mapped) > 0 {
		r.entities = append(r.entities, Entity{Type: rec.kind, Layer: layer, Handle: rec.handle(), Line: rec.line, Curves: mapped})
	}
	return nil
}

func (r *reader) kept(layer string) bool { return len(r.keep) == 0 || r.keep[fold(layer)] }

// plane gives the map from the entity's own flat coordinates to the drawing, by its extrusion direction; flat is
// false when that is not along z.
func (rec record) plane() (own outline.Affine, flat bool, err *fault.Error) {
	n, err := rec.reals(210, 220, 230)
	if err != nil {
		return own, false, err
	}
	if !rec.has(230) && !rec.has(220) && !rec.has(210) {
		n[2] = 1
	}
	size := math.Sqrt(n[0]*n[0] + n[1]*n[1] + n[2]*n[2])
	switch {
	case math.Hypot(n[0], n[1]) > 1e-6*size:
		return own, false, nil
	case n[2] < 0:
		return outline.Stretch(-1, 1), true, nil
	}
	return outline.Identity(), true, nil
}

// shapes reads each kind of entity into curves of the drawing's x-y plane.
var shapes = map[string]func(r *reader, rec record, own outline.Affine) ([]outline.Curve, *fault.Error){
	"LINE":       line,
	"ARC":        arc,
	"CIRCLE":     circle,
	"ELLIPSE":    ellipse,
	"LWPOLYLINE": lightPolyline,
	"POLYLINE":   polyline,
	"SPLINE":     spline,
}

// line ends are in the drawing's coordinates whatever the extrusion direction.
func line(_ *reader, rec record, _ outline.Affine) ([]outline.Curve, *fault.Error) {
	v, err := rec.reals(10, 20, 11, 21)
	if err != nil {
		return nil, err
	}
	p, q := outline.Point{X: v[0], Y: v[1]}, outline.Point{X: v[2], Y: v[3]}
	if p == q {
		return nil, nil
	}
	return []outline.Curve{outline.Line(p, q)}, nil
}

func circle(_ *reader, rec record, own outline.Affine) ([]outline.Curve, *fault.Error) {
	v, err := rec.reals(10, 20, 40)
	if err != nil || !(v[2] > 0) {
		return nil, err
	}
	return []outline.Curve{outline.Circle(outline.Point{X: v[0], Y: v[1]}, v[2], true).Transform(own)}, nil
}

func arc(_ *reader, rec record, own outline.Affine) ([]outline.Curve, *fault.Error) {
	v, err := rec.reals(10, 20, 40, 50, 51)
	if err != nil || !(v[2] > 0) {
		return nil, err
	}
	sweep := math.Mod(v[4]-v[3], 360)
	if sweep <= 1e-12 {
		sweep += 360
	}
	const degree = math.Pi / 180
	return []outline.Curve{outline.ArcOf(outline.Point{X: v[0], Y: v[1]}, v[2], math.Mod(v[3], 360)*degree, sweep*degree).Transform(own)}, nil
}

// ellipse: centre and major half axis are in the drawing's coordinates; the minor one is the normal times the major.
func ellipse(_ *reader, rec record, own outline.Affine) ([]outline.Curve, *fault.Error) {
	v, err := rec.reals(10, 20, 11, 21, 40, 41)
	if err != nil {
		return nil, err
	}
	end, err := rec.real(42, 2*math.Pi)
	if err != nil {
		return nil, err
	}
	u := outline.Point{X: v[2], Y: v[3]}
	minor := outline.Point{X: -u.Y, Y: u.X}.Scale(v[4])
	if own.Determinant() < 0 {
		minor = minor.Scale(-1)
	}
	if u.Norm() == 0 || minor.Norm() == 0 {
		return nil, nil
	}
	sweep := math.Mod(end-v[5], 2*math.Pi)
	if sweep <= 1e-9 {
		sweep += 2 * math.Pi
	}
	if 2*math.Pi-sweep < 1e-9 { // files round 2π to six or more digits
		sweep = 2 * math.Pi
	}
	start := math.Mod(v[5], 2*math.Pi)
	unitArc := outline.ArcOf(outline.Point{}, 1, start, sweep)
	onto := outline.Affine{XX: u.X, YX: u.Y, XY: minor.X, YY: minor.Y, X0: v[0], Y0: v[1]}
	return mapped([]outline.Curve{unitArc}, onto)
}

// mapped gives the image of curves under any map; an arc that is no longer one becomes cubics, and curves that
// shrink to nothing are left out.
func mapped(curves []outline.Curve, to outline.Affine) ([]outline.Curve, *fault.Error) {
	det := to.Determinant()
	if det == 0 || math.IsNaN(det) || math.IsInf(det, 0) {
		return nil, fault.New(fault.Input, "the insert flattens its block: a scale factor is 0 or out of range").
			Do("give the insert proper scale factors")
	}
	_, similar := to.Similarity()
	var out []outline.Curve
	for _, c := range curves {
		if c.Kind != outline.KindArc || similar {
			out = append(out, c.Transform(to))
			continue
		}
		u := to.ApplyVector(outline.Point{X: c.Radius})
		v := to.ApplyVector(outline.Point{Y: c.Radius})
		pieces := outline.EllipseArc(to.Apply(c.Centre), u, v, c.Start, c.Sweep)
		// The ends of the arc are those kept beside its angles, so that neighbours meet exactly.
		pieces[0].P0 = to.Apply(c.P0)
		pieces[len(pieces)-1].P1 = to.Apply(c.P1)
		out = append(out, pieces...)
	}
	return out, nil
}
