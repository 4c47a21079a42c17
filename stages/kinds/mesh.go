package kinds

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/pipeline/artifact"
)

// MeshKind is a whole airframe in elements.
var MeshKind = artifact.Kind{
	Name: "mesh", Version: 2,
	About: "nodes, triangles of the plates, beams of the standoffs, and the node sets of patches",
	Tables: []artifact.TableSpec{
		{Name: "nodes", About: "nodes in airframe axes", Columns: vecCols("at", "m", "place")},
		{Name: "parts", About: "plates and standoffs", Columns: columns(
			col("name", artifact.Text, "", "name"), col("standoff", artifact.Truth, "", "true for a standoff"), col("element", artifact.Text, "", "element type"),
			col("options", artifact.Text, "", "options of an element type from outside as JSON, empty for none"),
			col("thickness", artifact.Float, "m", "of a plate"), col("outer", artifact.Float, "m", "diameter of a standoff"), col("inner", artifact.Float, "m", "diameter of a standoff"),
			frameCols("mid-surface frame"),
		)},
		{Name: "triangles", About: "corners counterclockwise seen from the part's +z, then mid-side nodes of 0-1, 1-2, 2-0", Columns: columns(
			col("part", artifact.Int, "", "index of the part, ascending"),
			col("n0", artifact.Int, "", "corner"), col("n1", artifact.Int, "", "corner"), col("n2", artifact.Int, "", "corner"),
			col("n3", artifact.Int, "", "mid-side of 0-1"), col("n4", artifact.Int, "", "mid-side of 1-2"), col("n5", artifact.Int, "", "mid-side of 2-0"),
		)},
		{Name: "beams", About: "two-node beams of the standoffs", Columns: columns(
			col("part", artifact.Int, "", "index of the part"), col("n0", artifact.Int, "", "lower node"), col("n1", artifact.Int, "", "upper node"),
		)},
		{Name: "edges", About: "boundary edges of plates, material on the left seen from +z", Columns: columns(
			col("part", artifact.Int, "", "index of the part"), col("n0", artifact.Int, "", "corner"), col("mid", artifact.Int, "", "mid-side"), col("n1", artifact.Int, "", "corner"),
		)},
		{Name: "patches", About: "node sets that move as one body", Columns: columns(
			col("name", artifact.Text, "", "name"), col("owner", artifact.Text, "", "what it belongs to"), col("part", artifact.Int, "", "index of the part"),
			col("nodes", artifact.IntList, "", "nodes, ascending"), vecCols("centre", "m", "centre on the mid-surface"),
		)},
		{Name: "links", About: "what joins patches: bolts and standoffs", Columns: columns(
			col("name", artifact.Text, "", "name"), col("group", artifact.Text, "", "joint group"), col("kind", artifact.Text, "", "bolt or standoff"),
			col("patches", artifact.IntList, "", "patches from bottom to top"), col("nodes", artifact.IntList, "", "beam end nodes of a standoff"),
			vecCols("point", "m", "middle"), vecCols("axis", "1", "axis"),
		)},
		meshContactTables[0], meshContactTables[1],
	},
}

// EncodeMesh makes the artifact of a mesh.
func EncodeMesh(m *mesh.Mesh) *artifact.Artifact {
	a := artifact.New(MeshKind)
	setVecs(a.Table("nodes"), "at", len(m.Nodes), func(i int) airframe.Vec { return m.Nodes[i] })
	n := len(m.Parts)
	t := a.Table("parts")
	t.Set("name", each(n, func(i int) string { return m.Parts[i].Name }))
	t.Set("standoff", each(n, func(i int) bool { return m.Parts[i].Standoff }))
	t.Set("element", each(n, func(i int) string { return m.Parts[i].Element }))
	t.Set("options", each(n, func(i int) string { return m.Parts[i].Options }))
	t.Set("thickness", each(n, func(i int) float64 { return m.Parts[i].Thickness }))
	t.Set("outer", each(n, func(i int) float64 { return m.Parts[i].Outer }))
	t.Set("inner", each(n, func(i int) float64 { return m.Parts[i].Inner }))
	setFrames(t, n, func(i int) airframe.Frame { return m.Parts[i].Frame })

	t = a.Table("triangles").Set("part", ints(m.TrianglePart))
	for c, name := range triangleNodes {
		t.Set(name, each(len(m.Triangles), func(i int) int64 { return int64(m.Triangles[i][c]) }))
	}
	t = a.Table("beams").Set("part", ints(m.BeamPart))
	for c, name := range []string{"n0", "n1"} {
		t.Set(name, each(len(m.Beams), func(i int) int64 { return int64(m.Beams[i][c]) }))
	}
	t = a.Table("edges").Set("part", ints(m.EdgePart))
	for c, name := range edgeNodes {
		t.Set(name, each(len(m.Edges), func(i int) int64 { return int64(m.Edges[i][c]) }))
	}
	n = len(m.Patches)
	t = a.Table("patches")
	t.Set("name", each(n, func(i int) string { return m.Patches[i].Name }))
	t.Set("owner", each(n, func(i int) string { return m.Patches[i].Owner }))
	t.Set("part", each(n, func(i int) int64 { return int64(m.Patches[i].Part) }))
	t.Set("nodes", each(n, func(i int) []int64 { return ints(m.Patches[i].Nodes) }))
	setVecs(t, "centre", n, func(i int) airframe.Vec { return m.Patches[i].Centre })
	n = len(m.Links)
	t = a.Table("links")
	t.Set("name", each(n, func(i int) string { return m.Links[i].Name }))
	t.Set("group", each(n, func(i int) string { return m.Links[i].Group }))
	t.Set("kind", each(n, func(i int) string { return m.Links[i].Kind }))
	t.Set("patches", each(n, func(i int) []int64 { return ints(m.Links[i].Patches) }))
	t.Set("nodes", each(n, func(i int) []int64 { return ints(m.Links[i].Nodes) }))
	setVecs(t, "point", n, func(i int) airframe.Vec { return m.Links[i].Point })
	setVecs(t, "axis", n, func(i int) airframe.Vec { return m.Links[i].Axis })
	setMeshContacts(a, m.Contacts)
	return a
}

var (
	triangleNodes = []string{"n0", "n1", "n2", "n3", "n4", "n5"}
	edgeNodes     = []string{"n0", "mid", "n1"}
)

// DecodeMesh reads the artifact back; the fault names what contradicts.
func DecodeMesh(a *artifact.Artifact) (*mesh.Mesh, error) {
	m := &mesh.Mesh{}
	t := a.Table("nodes")
	m.Nodes = each(t.Rows(), func(i int) airframe.Vec { return getVec(t, "at", i) })
	t = a.Table("parts")
	for i := range t.Rows() {
		m.Parts = append(m.Parts, mesh.Part{Name: t.Texts("name")[i], Standoff: t.Truths("standoff")[i], Element: t.Texts("element")[i], Options: t.Texts("options")[i],
			Thickness: t.Floats("thickness")[i], Outer: t.Floats("outer")[i], Inner: t.Floats("inner")[i], Frame: getFrame(t, i)})
	}
	var err error
	// index collects the first fault, so that the reads below stay one line each.
	index := func(what string, s []int64, limit int) []int32 {
		out, e := nodeIndices("mesh", what, s, limit)
		if err == nil {
			err = e
		}
		return out
	}
	nodes, parts := len(m.Nodes), len(m.Parts)
	t = a.Table("triangles")
	m.TrianglePart = index("part of a triangle", t.Ints("part"), parts)
	m.Triangles = make([][6]int32, t.Rows())
	for c, name := range triangleNodes {
		for i, v := range index("node of a triangle", t.Ints(name), nodes) {
			m.Triangles[i][c] = v
		}
	}
	t = a.Table("beams")
	m.BeamPart = index("part of a beam", t.Ints("part"), parts)
	m.Beams = make([][2]int32, t.Rows())
	for c, name := range []string{"n0", "n1"} {
		for i, v := range index("node of a beam", t.Ints(name), nodes) {
			m.Beams[i][c] = v
		}
	}
	t = a.Table("edges")
	m.EdgePart = index("part of an edge", t.Ints("part"), parts)
	m.Edges = make([][3]int32, t.Rows())
	for c, name := range edgeNodes {
		for i, v := range index("node of an edge", t.Ints(name), nodes) {
			m.Edges[i][c] = v
		}
	}
	t = a.Table("patches")
	part := index("part of a patch", t.Ints("part"), parts)
	for i := range t.Rows() {
		if err != nil {
			return nil, err
		}
		m.Patches = append(m.Patches, mesh.Patch{Name: t.Texts("name")[i], Owner: t.Texts("owner")[i], Part: part[i],
			Nodes: index("node of a patch", t.IntLists("nodes")[i], nodes), Centre: getVec(t, "centre", i)})
	}
	t = a.Table("links")
	for i := range t.Rows() {
		m.Links = append(m.Links, mesh.Link{Name: t.Texts("name")[i], Group: t.Texts("group")[i], Kind: t.Texts("kind")[i],
			Patches: index("patch of a link", t.IntLists("patches")[i], len(m.Patches)), Nodes: index("node of a link", t.IntLists("nodes")[i], nodes),
			Point: getVec(t, "point", i), Axis: getVec(t, "axis", i)})
	}
	if err != nil {
		return nil, err
	}
	if err := getMeshContacts(a, m); err != nil {
		return nil, err
	}
	return m, nil
}
