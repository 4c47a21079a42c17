package kinds

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/artifact"
)

// GeometryKind is all that meshing needs of an airframe.
var GeometryKind = artifact.Kind{
	Name: "geometry", Version: 2,
	About: "plates as placed outlines, the patches on them, bolts, standoffs and contacts",
	Tables: []artifact.TableSpec{
		{Name: "plates", About: "flat plates; the frame lies on the mid-surface", Columns: columns(
			col("name", artifact.Text, "", "name in the airframe file"),
			col("thickness", artifact.Float, "m", "plate thickness"),
			frameCols("mid-surface frame"),
		)},
		{Name: "curves", About: "boundary curves in the plate's frame, in order along each loop", Columns: columns(
			col("plate", artifact.Int, "", "index of the plate"),
			col("loop", artifact.Int, "", "0 is the outer loop (counterclockwise), then holes (clockwise)"),
			col("kind", artifact.Int, "", "0 line, 1 arc, 2 cubic"),
			col("x0", artifact.Float, "m", "start"), col("y0", artifact.Float, "m", "start"),
			col("x1", artifact.Float, "m", "end"), col("y1", artifact.Float, "m", "end"),
			col("cx", artifact.Float, "m", "arc: centre; cubic: first control point"), col("cy", artifact.Float, "m", "as cx"),
			col("dx", artifact.Float, "m", "arc: radius; cubic: second control point"), col("dy", artifact.Float, "m", "cubic: second control point"),
			col("start", artifact.Float, "rad", "arc: angle of the start"), col("sweep", artifact.Float, "rad", "arc: signed angle, counterclockwise positive"),
		)},
		{Name: "patches", About: "regions of plates that move as one rigid body", Columns: columns(
			col("name", artifact.Text, "", "unique name"),
			col("owner", artifact.Text, "", "what it belongs to"),
			col("plate", artifact.Int, "", "index of the plate"),
			col("shape", artifact.Text, "", "disc or rectangle"),
			col("x", artifact.Float, "m", "centre in the plate's frame"), col("y", artifact.Float, "m", "centre in the plate's frame"),
			col("radius", artifact.Float, "m", "of a disc"),
			col("width", artifact.Float, "m", "of a rectangle, along its x"), col("height", artifact.Float, "m", "of a rectangle, along its y"),
			col("turn", artifact.Float, "rad", "of a rectangle, from the plate's x axis"),
		)},
		{Name: "bolts", About: "bolts through plates whose faces touch", Columns: columns(
			col("name", artifact.Text, "", "unique name"),
			col("group", artifact.Text, "", "joint group"),
			col("patches", artifact.IntList, "", "clamp discs from bottom to top"),
			vecCols("point", "m", "middle of the stack"), vecCols("axis", "1", "axis"),
			col("hole_radius", artifact.Float, "m", "radius of the hole"), col("clamp_radius", artifact.Float, "m", "radius of the clamp disc"),
			col("inferred", artifact.Truth, "", "found from coaxial holes"),
		)},
		{Name: "standoffs", About: "pillars between plates", Columns: columns(
			col("name", artifact.Text, "", "unique name"),
			col("lower", artifact.Int, "", "patch at the lower end"), col("upper", artifact.Int, "", "patch at the upper end"),
			vecCols("from", "m", "lower end on the plate's face"), vecCols("to", "m", "upper end on the plate's face"),
			col("outer", artifact.Float, "m", "outer diameter"), col("inner", artifact.Float, "m", "inner diameter, 0 is solid"),
		)},
		contactTable,
	},
}

// EncodeGeometry makes the artifact of a geometry.
func EncodeGeometry(g *airframe.Geometry) *artifact.Artifact {
	a := artifact.New(GeometryKind)
	n := len(g.Plates)
	t := a.Table("plates")
	t.Set("name", each(n, func(i int) string { return g.Plates[i].Name }))
	t.Set("thickness", each(n, func(i int) float64 { return g.Plates[i].Thickness }))
	setFrames(t, n, func(i int) airframe.Frame { return g.Plates[i].Frame })

	type row struct {
		plate, loop int
		c           outline.Curve
	}
	var rows []row
	for p, plate := range g.Plates {
		for l, loop := range plate.Region.Loops() {
			for _, c := range loop {
				rows = append(rows, row{p, l, c})
			}
		}
	}
	m := len(rows)
	t = a.Table("curves")
	t.Set("plate", each(m, func(i int) int64 { return int64(rows[i].plate) }))
	t.Set("loop", each(m, func(i int) int64 { return int64(rows[i].loop) }))
	t.Set("kind", each(m, func(i int) int64 { return int64(rows[i].c.Kind) }))
	number := func(name string, at func(c outline.Curve) float64) {
		t.Set(name, each(m, func(i int) float64 { return at(rows[i].c) }))
	}
	number("x0", func(c outline.Curve) float64 { return c.P0.X })
	number("y0", func(c outline.Curve) float64 { return c.P0.Y })
	number("x1", func(c outline.Curve) float64 { return c.P1.X })
	number("y1", func(c outline.Curve) float64 { return c.P1.Y })
	pick := func(arc, cubic func(c outline.Curve) float64) func(c outline.Curve) float64 {
		return func(c outline.Curve) float64 {
			switch {
			case c.Kind == outline.KindArc && arc != nil:
				return arc(c)
			case c.Kind == outline.KindCubic && cubic != nil:
				return cubic(c)
			}
			return 0
		}
	}
	number("cx", pick(func(c outline.Curve) float64 { return c.Centre.X }, func(c outline.Curve) float64 { return c.C1.X }))
	number("cy", pick(func(c outline.Curve) float64 { return c.Centre.Y }, func(c outline.Curve) float64 { return c.C1.Y }))
	number("dx", pick(func(c outline.Curve) float64 { return c.Radius }, func(c outline.Curve) float64 { return c.C2.X }))
	number("dy", pick(nil, func(c outline.Curve) float64 { return c.C2.Y }))
	number("start", pick(func(c outline.Curve) float64 { return c.Start }, nil))
	number("sweep", pick(func(c outline.Curve) float64 { return c.Sweep }, nil))

	n = len(g.Patches)
	t = a.Table("patches")
	t.Set("name", each(n, func(i int) string { return g.Patches[i].Name }))
	t.Set("owner", each(n, func(i int) string { return g.Patches[i].Owner }))
	t.Set("plate", each(n, func(i int) int64 { return int64(g.Patches[i].Plate) }))
	t.Set("shape", each(n, func(i int) string { return string(g.Patches[i].Shape) }))
	t.Set("x", each(n, func(i int) float64 { return g.Patches[i].Centre.X }))
	t.Set("y", each(n, func(i int) float64 { return g.Patches[i].Centre.Y }))
	t.Set("radius", each(n, func(i int) float64 { return g.Patches[i].Radius }))
	t.Set("width", each(n, func(i int) float64 { return g.Patches[i].Width }))
	t.Set("height", each(n, func(i int) float64 { return g.Patches[i].Height }))
	t.Set("turn", each(n, func(i int) float64 { return g.Patches[i].Turn }))

	n = len(g.Bolts)
	t = a.Table("bolts")
	t.Set("name", each(n, func(i int) string { return g.Bolts[i].Name }))
	t.Set("group", each(n, func(i int) string { return g.Bolts[i].Group }))
	t.Set("patches", each(n, func(i int) []int64 { return ints(g.Bolts[i].Patches) }))
	setVecs(t, "point", n, func(i int) airframe.Vec { return g.Bolts[i].Point })
	setVecs(t, "axis", n, func(i int) airframe.Vec { return g.Bolts[i].Axis })
	t.Set("hole_radius", each(n, func(i int) float64 { return g.Bolts[i].HoleRadius }))
	t.Set("clamp_radius", each(n, func(i int) float64 { return g.Bolts[i].ClampRadius }))
	t.Set("inferred", each(n, func(i int) bool { return g.Bolts[i].Inferred }))

	n = len(g.Standoffs)
	t = a.Table("standoffs")
	t.Set("name", each(n, func(i int) string { return g.Standoffs[i].Name }))
	t.Set("lower", each(n, func(i int) int64 { return int64(g.Standoffs[i].Patches[0]) }))
	t.Set("upper", each(n, func(i int) int64 { return int64(g.Standoffs[i].Patches[1]) }))
	setVecs(t, "from", n, func(i int) airframe.Vec { return g.Standoffs[i].Ends[0] })
	setVecs(t, "to", n, func(i int) airframe.Vec { return g.Standoffs[i].Ends[1] })
	t.Set("outer", each(n, func(i int) float64 { return g.Standoffs[i].Outer }))
	t.Set("inner", each(n, func(i int) float64 { return g.Standoffs[i].Inner }))
	setContacts(a, g.Contacts)
	return a
}

// DecodeGeometry reads the artifact back; the fault names what contradicts.
func DecodeGeometry(a *artifact.Artifact) (*airframe.Geometry, error) {
	g := &airframe.Geometry{}
	t := a.Table("plates")
	for i := range t.Rows() {
		g.Plates = append(g.Plates, airframe.Plate{Name: t.Texts("name")[i], Thickness: t.Floats("thickness")[i], Frame: getFrame(t, i)})
	}
	t = a.Table("curves")
	loops := make([][]outline.Loop, len(g.Plates))
	for i := range t.Rows() {
		p, l := t.Ints("plate")[i], t.Ints("loop")[i]
		if p < 0 || p >= int64(len(g.Plates)) || l < 0 || l > int64(len(loops[p])) {
			return nil, malformed("geometry", "curve %d belongs to loop %d of plate %d, which is out of order or does not exist", i, l, p)
		}
		f := func(name string) float64 { return t.Floats(name)[i] }
		c := outline.Curve{P0: outline.Point{X: f("x0"), Y: f("y0")}, P1: outline.Point{X: f("x1"), Y: f("y1")}}
		switch t.Ints("kind")[i] {
		case int64(outline.KindLine):
		case int64(outline.KindArc):
			c.Kind, c.Centre = outline.KindArc, outline.Point{X: f("cx"), Y: f("cy")}
			c.Radius, c.Start, c.Sweep = f("dx"), f("start"), f("sweep")
		case int64(outline.KindCubic):
			c.Kind, c.C1, c.C2 = outline.KindCubic, outline.Point{X: f("cx"), Y: f("cy")}, outline.Point{X: f("dx"), Y: f("dy")}
		default:
			return nil, malformed("geometry", "curve %d is of kind %d", i, t.Ints("kind")[i])
		}
		if l == int64(len(loops[p])) {
			loops[p] = append(loops[p], nil)
		}
		loops[p][l] = append(loops[p][l], c)
	}
	for p, ls := range loops {
		if len(ls) == 0 {
			return nil, malformed("geometry", "plate %q has no outline", g.Plates[p].Name)
		}
		g.Plates[p].Region = outline.Region{Outer: ls[0], Holes: ls[1:]}
	}
	t = a.Table("patches")
	for i := range t.Rows() {
		p := t.Ints("plate")[i]
		if p < 0 || p >= int64(len(g.Plates)) {
			return nil, malformed("geometry", "patch %q is on plate %d, which does not exist", t.Texts("name")[i], p)
		}
		g.Patches = append(g.Patches, airframe.Patch{
			Name: t.Texts("name")[i], Owner: t.Texts("owner")[i], Plate: int(p), Shape: airframe.PatchShape(t.Texts("shape")[i]),
			Centre: outline.Point{X: t.Floats("x")[i], Y: t.Floats("y")[i]}, Radius: t.Floats("radius")[i],
			Width: t.Floats("width")[i], Height: t.Floats("height")[i], Turn: t.Floats("turn")[i],
		})
	}
	patch := func(owner string, v int64) (int, error) {
		if v < 0 || v >= int64(len(g.Patches)) {
			return 0, malformed("geometry", "%s refers to patch %d, which does not exist", owner, v)
		}
		return int(v), nil
	}
	t = a.Table("bolts")
	for i := range t.Rows() {
		b := airframe.Bolt{
			Name: t.Texts("name")[i], Group: t.Texts("group")[i], Point: getVec(t, "point", i), Axis: getVec(t, "axis", i),
			HoleRadius: t.Floats("hole_radius")[i], ClampRadius: t.Floats("clamp_radius")[i], Inferred: t.Truths("inferred")[i],
		}
		for _, v := range t.IntLists("patches")[i] {
			p, err := patch("bolt "+b.Name, v)
			if err != nil {
				return nil, err
			}
			b.Patches = append(b.Patches, p)
		}
		g.Bolts = append(g.Bolts, b)
	}
	t = a.Table("standoffs")
	for i := range t.Rows() {
		s := airframe.Standoff{Name: t.Texts("name")[i], Ends: [2]airframe.Vec{getVec(t, "from", i), getVec(t, "to", i)},
			Outer: t.Floats("outer")[i], Inner: t.Floats("inner")[i]}
		for e, name := range []string{"lower", "upper"} {
			p, err := patch("standoff "+s.Name, t.Ints(name)[i])
			if err != nil {
				return nil, err
			}
			s.Patches[e] = p
		}
		g.Standoffs = append(g.Standoffs, s)
	}
	var err error
	g.Contacts, err = getContacts(a, len(g.Plates))
	return g, err
}
