package assembly

import (
	"slices"

	"hushframe/core/mechanics/mesh"
)

// Refine returns the mesh with every triangle cut in four and every beam in two. Nodes of m keep their
// numbers; mid-side nodes become corners. New nodes lie on the quadratic sides, so that the shape does
// not change, and belong to a patch where all nodes of the side, or of the triangle, do.
func Refine(m *mesh.Mesh) *mesh.Mesh {
	out := &mesh.Mesh{Nodes: slices.Clone(m.Nodes), Parts: m.Parts, Links: m.Links, Contacts: slices.Clone(m.Contacts)}
	patches := make([][]int32, len(m.Nodes)) // that each node is in
	for k, p := range m.Patches {
		for _, v := range p.Nodes {
			patches[v] = append(patches[v], int32(k))
		}
		p.Nodes = slices.Clone(p.Nodes)
		out.Patches = append(out.Patches, p)
	}
	node := func(at Vec, of ...int32) int32 {
		v := int32(len(out.Nodes))
		out.Nodes = append(out.Nodes, at)
		for _, k := range patches[of[0]] {
			if !slices.ContainsFunc(of[1:], func(n int32) bool { return !slices.Contains(patches[n], k) }) {
				out.Patches[k].Nodes = append(out.Patches[k].Nodes, v)
			}
		}
		return v
	}
	halves := map[[2]int32]int32{} // new node between a corner and a mid-side node
	half := func(a, mid, b int32) int32 {
		key := [2]int32{a, mid}
		v, ok := halves[key]
		if !ok {
			v = node(mixed(m.Nodes, []int32{a, mid, b}, 3./8, 3./4, -1./8), a, mid, b)
			halves[key] = v
		}
		return v
	}
	for e, t := range m.Triangles {
		var near, far, inner [3]int32 // on side i next to corner i and next to corner i+1; facing corner i
		for i := range 3 {
			j := (i + 1) % 3
			near[i], far[i] = half(t[i], t[3+i], t[j]), half(t[j], t[3+i], t[i])
		}
		for i := range 3 {
			// Half-way between the mid-side nodes next to corner i: half from each of these, a quarter from the third, an
			// eighth less of each of the other two corners.
			j, k := (i+1)%3, (i+2)%3
			inner[i] = node(mixed(m.Nodes, []int32{t[3+i], t[3+k], t[3+j], t[j], t[k]}, 1./2, 1./2, 1./4, -1./8, -1./8), t[:]...)
		}
		for i := range 3 {
			k := (i + 2) % 3
			out.Triangles = append(out.Triangles, [6]int32{t[i], t[3+i], t[3+k], near[i], inner[i], far[k]})
		}
		out.Triangles = append(out.Triangles, [6]int32{t[3], t[4], t[5], inner[1], inner[2], inner[0]})
		for range 4 {
			out.TrianglePart = append(out.TrianglePart, m.TrianglePart[e])
		}
	}
	for i := range out.Contacts {
		points := slices.Clone(out.Contacts[i].Points)
		for p := range points {
			for side := range 2 {
				points[p].Triangle[side], points[p].Local[side] = child(points[p].Triangle[side], points[p].Local[side])
			}
		}
		out.Contacts[i].Points = points
	}
	for e, b := range m.Beams {
		v := int32(len(out.Nodes))
		out.Nodes = append(out.Nodes, mixed(m.Nodes, b[:], 1./2, 1./2))
		out.Beams = append(out.Beams, [2]int32{b[0], v}, [2]int32{v, b[1]})
		out.BeamPart = append(out.BeamPart, m.BeamPart[e], m.BeamPart[e])
	}
	for e, s := range m.Edges {
		out.Edges = append(out.Edges, [3]int32{s[0], half(s[0], s[1], s[2]), s[1]}, [3]int32{s[1], half(s[2], s[1], s[0]), s[2]})
		out.EdgePart = append(out.EdgePart, m.EdgePart[e], m.EdgePart[e])
	}
	return out
}

// mixed is a weighted sum of places.
func mixed(nodes []Vec, list []int32, weights ...float64) (at Vec) {
	for i, v := range list {
		at = add(at, scale(weights[i], nodes[v]))
	}
	return at
}

// child finds a place of a triangle in the four it is cut into: three at corners 0, 1, 2, whose own corners
// run corner, next mid-side, last mid-side, and the one in the middle.
func child(triangle int32, local [2]float64) (int32, [2]float64) {
	l := [3]float64{1 - local[0] - local[1], local[0], local[1]}
	for i := range 3 {
		if l[i] >= 0.5 {
			return 4*triangle + int32(i), [2]float64{2 * l[(i+1)%3], 2 * l[(i+2)%3]}
		}
	}
	// Corners of the middle one are the mid-side nodes of 0-1, 1-2, 2-0, where the coordinate of the facing corner is 0.
	return 4*triangle + 3, [2]float64{1 - 2*l[0], 1 - 2*l[1]}
}
