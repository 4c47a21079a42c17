package assembly_test

import (
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/mesh"
)

// A refined airframe has four times the triangles, twice the beams, the same mass to rounding, no side with
// more than two triangles, and in each patch the nodes that lie in its square.
func TestRefine(t *testing.T) {
	m, p := known.Airframe(0.02)
	r := assembly.Refine(m)
	if len(r.Triangles) != 4*len(m.Triangles) || len(r.Beams) != 2*len(m.Beams) || len(r.TrianglePart) != len(r.Triangles) || len(r.BeamPart) != len(r.Beams) {
		t.Errorf("%d triangles of %d, %d beams of %d", len(r.Triangles), len(m.Triangles), len(r.Beams), len(m.Beams))
	}
	sides := map[[3]int32]int{}
	for _, e := range r.Triangles {
		for i := range 3 {
			a, b := e[i], e[(i+1)%3]
			sides[[3]int32{min(a, b), max(a, b), e[3+i]}]++
			for k := range 3 {
				if d := r.Nodes[e[3+i]][k] - (r.Nodes[a][k]+r.Nodes[b][k])/2; math.Abs(d) > 1e-15 {
					t.Fatalf("a mid-side node lies %g m off its straight side", d)
				}
			}
		}
	}
	corners := map[[2]int32]int32{}
	for s, n := range sides {
		key := [2]int32{s[0], s[1]}
		if mid, ok := corners[key]; ok && mid != s[2] || n > 2 {
			t.Fatalf("side %v comes %d times", s, n)
		}
		corners[key] = s[2]
	}
	for k, patch := range r.Patches {
		in := map[int32]bool{}
		for _, v := range patch.Nodes {
			in[v] = true
		}
		low, high := airframe.Vec{1, 1, 1}, airframe.Vec{-1, -1, -1}
		for _, v := range m.Patches[k].Nodes {
			for c := range 3 {
				low[c], high[c] = min(low[c], m.Nodes[v][c]), max(high[c], m.Nodes[v][c])
			}
		}
		for _, e := range r.Triangles {
			for _, v := range e {
				inside := true
				for c := range 3 {
					inside = inside && r.Nodes[v][c] > low[c]-1e-9 && r.Nodes[v][c] < high[c]+1e-9
				}
				if inside != in[v] && r.Parts[patch.Part].Frame.Origin[2] == r.Nodes[v][2] {
					t.Fatalf("patch %s: node %d at %v: inside %v, listed %v", patch.Name, v, r.Nodes[v], inside, in[v])
				}
			}
		}
	}
	a, err := assembly.FromAirframe(m, p, builtin)
	if err != nil {
		t.Fatal(err)
	}
	b, err := assembly.FromAirframe(r, p, builtin)
	if err != nil {
		t.Fatal(err)
	}
	before, after := assemble(t, &a.Problem), assemble(t, &b.Problem)
	if math.Abs(after.Mass/before.Mass-1) > 1e-12 {
		t.Errorf("the mass went from %g to %g kg", before.Mass, after.Mass)
	}
}

// Curved sides keep their shape: the area of a ring, its rims parabolas, to rounding.
func TestRefineCurvedSides(t *testing.T) {
	g := known.Ring(0.002, 0.006, 2, 8)
	m := &mesh.Mesh{Parts: make([]mesh.Part, 1)}
	for _, x := range g.Points {
		m.Nodes = append(m.Nodes, airframe.Vec{x[0], x[1], 0})
	}
	m.Triangles, m.TrianglePart = g.Triangles, make([]int32, len(g.Triangles))
	mass := func(m *mesh.Mesh) float64 {
		p := newPlate(g, byName(t, "quadratic-triangle"), aluminium(t, 0.002))
		p.Nodes, p.Plates[0].Elements = m.Nodes, m.Triangles
		return assemble(t, &p.Problem).Mass
	}
	r := assembly.Refine(m)
	if x, y := mass(m), mass(r); math.Abs(y/x-1) > 1e-12 {
		t.Errorf("the mass went from %.15g to %.15g kg", x, y)
	}
}
