package kinds

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/artifact"
)

// contactTable is the table of contacts in a geometry.
var contactTable = artifact.TableSpec{Name: "contacts", About: "faces pressed together, glued seams, keys: two plates tied over an area or along a line", Columns: columns(
	col("name", artifact.Text, "", "unique name"),
	col("kind", artifact.Text, "", "pressed, seam or key"),
	col("first", artifact.Int, "", "index of the first plate"), col("second", artifact.Int, "", "index of the second plate"),
	frameCols("axes of the springs"),
	col("shape", artifact.Text, "", "of a pressed contact: disc, rectangle, or empty for wherever the plates overlap"),
	col("x", artifact.Float, "m", "centre of the shape in the first plate's frame"), col("y", artifact.Float, "m", "centre of the shape in the first plate's frame"),
	col("radius", artifact.Float, "m", "of a disc"),
	col("width", artifact.Float, "m", "of a rectangle, along its x"), col("height", artifact.Float, "m", "of a rectangle, along its y"),
	col("turn", artifact.Float, "rad", "of a rectangle, from the plate's x axis"),
	vecCols("from", "m", "start of a line"), vecCols("to", "m", "end of a line"),
)}

func setContacts(a *artifact.Artifact, list []airframe.Contact) {
	n := len(list)
	t := a.Table("contacts")
	t.Set("name", each(n, func(i int) string { return list[i].Name }))
	t.Set("kind", each(n, func(i int) string { return string(list[i].Kind) }))
	t.Set("first", each(n, func(i int) int64 { return int64(list[i].Plates[0]) }))
	t.Set("second", each(n, func(i int) int64 { return int64(list[i].Plates[1]) }))
	setFrames(t, n, func(i int) airframe.Frame { return list[i].Axes })
	t.Set("shape", each(n, func(i int) string { return string(list[i].Shape) }))
	number := func(name string, at func(c *airframe.Contact) float64) {
		t.Set(name, each(n, func(i int) float64 { return at(&list[i]) }))
	}
	number("x", func(c *airframe.Contact) float64 { return c.Centre.X })
	number("y", func(c *airframe.Contact) float64 { return c.Centre.Y })
	number("radius", func(c *airframe.Contact) float64 { return c.Radius })
	number("width", func(c *airframe.Contact) float64 { return c.Width })
	number("height", func(c *airframe.Contact) float64 { return c.Height })
	number("turn", func(c *airframe.Contact) float64 { return c.Turn })
	setVecs(t, "from", n, func(i int) airframe.Vec { return list[i].Ends[0] })
	setVecs(t, "to", n, func(i int) airframe.Vec { return list[i].Ends[1] })
}

func getContacts(a *artifact.Artifact, plates int) ([]airframe.Contact, error) {
	var out []airframe.Contact
	t := a.Table("contacts")
	for i := range t.Rows() {
		f := func(name string) float64 { return t.Floats(name)[i] }
		c := airframe.Contact{
			Name: t.Texts("name")[i], Kind: airframe.ContactKind(t.Texts("kind")[i]), Axes: getFrame(t, i), Shape: airframe.PatchShape(t.Texts("shape")[i]),
			Centre: outline.Point{X: f("x"), Y: f("y")}, Radius: f("radius"), Width: f("width"), Height: f("height"), Turn: f("turn"),
			Ends: [2]airframe.Vec{getVec(t, "from", i), getVec(t, "to", i)},
		}
		for side, name := range []string{"first", "second"} {
			p := t.Ints(name)[i]
			if p < 0 || p >= int64(plates) {
				return nil, malformed("geometry", "contact %q ties plate %d, which does not exist", c.Name, p)
			}
			c.Plates[side] = int(p)
		}
		if c.Kind != airframe.Pressed && c.Kind != airframe.Seam && c.Kind != airframe.Key {
			return nil, malformed("geometry", "contact %q is of kind %q", c.Name, c.Kind)
		}
		out = append(out, c)
	}
	return out, nil
}

// meshContactTables are those of a mesh.
var meshContactTables = []artifact.TableSpec{
	{Name: "contacts", About: "plates tied at points", Columns: columns(
		col("name", artifact.Text, "", "name"), col("first", artifact.Int, "", "index of the first part"), col("second", artifact.Int, "", "index of the second part"),
		col("area", artifact.Truth, "", "points stand for areas, not for lengths"),
		frameCols("axes of the springs"),
	)},
	{Name: "contact_points", About: "points of the contacts, in the order of these", Columns: columns(
		col("contact", artifact.Int, "", "row of contacts, ascending"), vecCols("at", "m", "place"),
		col("measure", artifact.Float, "m^2 or m", "area or length that the point stands for"),
		col("first", artifact.Int, "", "triangle of the first part"), col("first_1", artifact.Float, "1", "area coordinate of corner 1 there"), col("first_2", artifact.Float, "1", "that of corner 2"),
		col("second", artifact.Int, "", "triangle of the second part"), col("second_1", artifact.Float, "1", "area coordinate of corner 1 there"), col("second_2", artifact.Float, "1", "that of corner 2"),
	)},
}

var contactSides = [2]string{"first", "second"}

func setMeshContacts(a *artifact.Artifact, list []mesh.Contact) {
	n := len(list)
	t := a.Table("contacts")
	t.Set("name", each(n, func(i int) string { return list[i].Name }))
	for side, name := range contactSides {
		t.Set(name, each(n, func(i int) int64 { return int64(list[i].Parts[side]) }))
	}
	t.Set("area", each(n, func(i int) bool { return list[i].Area }))
	setFrames(t, n, func(i int) airframe.Frame { return list[i].Axes })
	var of []int
	var points []mesh.ContactPoint
	for i := range list {
		for _, p := range list[i].Points {
			of, points = append(of, i), append(points, p)
		}
	}
	t, n = a.Table("contact_points"), len(points)
	t.Set("contact", ints(of))
	setVecs(t, "at", n, func(i int) airframe.Vec { return points[i].At })
	t.Set("measure", each(n, func(i int) float64 { return points[i].Measure }))
	for side, name := range contactSides {
		t.Set(name, each(n, func(i int) int64 { return int64(points[i].Triangle[side]) }))
		t.Set(name+"_1", each(n, func(i int) float64 { return points[i].Local[side][0] }))
		t.Set(name+"_2", each(n, func(i int) float64 { return points[i].Local[side][1] }))
	}
}

func getMeshContacts(a *artifact.Artifact, m *mesh.Mesh) error {
	t := a.Table("contacts")
	for i := range t.Rows() {
		c := mesh.Contact{Name: t.Texts("name")[i], Area: t.Truths("area")[i], Axes: getFrame(t, i)}
		for side, name := range contactSides {
			part, err := nodeIndices("mesh", "part of a contact", t.Ints(name)[i:i+1], len(m.Parts))
			if err != nil {
				return err
			}
			c.Parts[side] = part[0]
		}
		m.Contacts = append(m.Contacts, c)
	}
	t = a.Table("contact_points")
	of, err := nodeIndices("mesh", "contact of a point", t.Ints("contact"), len(m.Contacts))
	if err != nil {
		return err
	}
	var triangles [2][]int32
	for side, name := range contactSides {
		if triangles[side], err = nodeIndices("mesh", "triangle of a contact", t.Ints(name), len(m.Triangles)); err != nil {
			return err
		}
	}
	for i := range t.Rows() {
		p := mesh.ContactPoint{At: getVec(t, "at", i), Measure: t.Floats("measure")[i], Triangle: [2]int32{triangles[0][i], triangles[1][i]}}
		c := &m.Contacts[of[i]]
		for side, name := range contactSides {
			p.Local[side] = [2]float64{t.Floats(name + "_1")[i], t.Floats(name + "_2")[i]}
			if part := m.TrianglePart[p.Triangle[side]]; part != c.Parts[side] {
				return malformed("mesh", "a point of contact %q lies in triangle %d of another part", c.Name, p.Triangle[side])
			}
		}
		c.Points = append(c.Points, p)
	}
	return nil
}
