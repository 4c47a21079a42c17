package mesh

import (
	"context"
	"fmt"
	"math"
	"sort"
	"sync"

	"golang.org/x/sync/errgroup"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh/planar"
	"hushframe/core/mechanics/outline"
)

// Options steers Build. Size and Element are required.
type Options struct {
	// Size is the wanted side length of triangles (m), away from narrow parts and small features.
	Size float64
	// Sizes gives other wanted lengths (m) for single plates, by name.
	Sizes map[string]float64
	// Element is the element type of plates, Elements that of single plates, by name.
	Element  string
	Elements map[string]string
	// PerTurn is the least number of sides round a hole; 0 means 12.
	PerTurn int
	// Threads bounds the plates meshed at a time; 0 is one. It changes nothing in the result.
	Threads int
	// Progress, when set, is told the number of plates done; calls do not overlap.
	Progress func(done, total int)
}

// Torsion of a strip lives in a layer about a third of its thickness wide at the free edges. Where a plate is no wider
// than slender thicknesses a row of stretched triangles follows its edges, rowDepth thicknesses deep but no more than a
// quarter of the width, with sides along the edge of at most rowLength depths. Where there is no room for a row the sides
// are at most bareRatio thicknesses long. Measured on strips 2 to 10 thicknesses wide, quadratic triangles have a torsion
// constant 0.3 to 0.9 % too large, whatever the size beyond (see the test of torsion).
//
// Linear triangles get no row but sides of linearRatio thicknesses: 0.6 to 3 % too large, the worst at two thicknesses.
const (
	slender     = 10.0
	stocky      = 1.5 // below this width there is no row: near corners, where the width runs out
	rowDepth    = 0.5
	rowLength   = 3.0
	bareRatio   = 0.8
	linearRatio = 0.15
)

// mostCorners bounds the corner nodes of a plate: no solver of this program could use more.
const mostCorners = 300_000

// mostSnap bounds how far an outline of a patch may be moved, m: however large the elements, patches keep their shape.
const mostSnap = 1e-4

// linear is the element type that gets no rows.
const linear = "linear-triangle"

// beamsPerStandoff is the number of beam elements along a standoff: a beam element with cubic deflection has the first
// bending frequency of a clamped beam within 0.1 % from two elements on.
const beamsPerStandoff = 4

// Problem is an error of Build, with the part or patch it is about.
type Problem struct {
	Part  string // name of a plate, or empty
	Patch string // name of a patch, or empty
	// Contact is the name of a contact, or empty.
	Contact string
	Text    string
	// Unknown is true when Part names no plate, Size when the wanted size is to blame.
	Unknown, Size bool
}

func (p *Problem) Error() string {
	switch {
	case p.Contact != "":
		return fmt.Sprintf("contact %s: %s", p.Contact, p.Text)
	case p.Patch != "":
		return fmt.Sprintf("patch %s on plate %s: %s", p.Patch, p.Part, p.Text)
	case p.Part != "":
		return fmt.Sprintf("plate %s: %s", p.Part, p.Text)
	}
	return p.Text
}

// Build divides every plate into six-node triangles whose sides follow holes, edges and the outlines of patches, and
// every standoff into beams. The error is a *Problem or that of the context. Equal input gives equal output, bit for
// bit, whatever Threads.
func Build(ctx context.Context, g *airframe.Geometry, o Options) (*Mesh, error) {
	if !(o.Size > 0) || math.IsInf(o.Size, 1) {
		return nil, &Problem{Size: true, Text: fmt.Sprintf("the wanted size is %g m; it must be positive", o.Size)}
	}
	for _, name := range sortedKeys(o.Sizes) {
		if s := o.Sizes[name]; !(s > 0) || math.IsInf(s, 1) {
			return nil, &Problem{Part: name, Size: true, Text: fmt.Sprintf("the wanted size is %g m; it must be positive", s)}
		}
	}
	for _, name := range append(sortedKeys(o.Sizes), sortedKeys(o.Elements)...) {
		if !hasPlate(g, name) {
			return nil, &Problem{Part: name, Unknown: true, Text: "there is no such plate"}
		}
	}
	meshes, err := plateMeshes(ctx, g, o)
	if err != nil {
		return nil, err
	}
	m := &Mesh{Patches: make([]Patch, len(g.Patches))}
	for i := range g.Plates {
		if err := m.addPlate(g, i, meshes[i], o); err != nil {
			return nil, err
		}
	}
	for i := range g.Standoffs {
		m.addStandoff(&g.Standoffs[i])
	}
	for i := range g.Bolts {
		m.addBolt(&g.Bolts[i])
	}
	for i := range g.Contacts {
		if err := m.addContact(g, &g.Contacts[i]); err != nil {
			return nil, err
		}
	}
	return m, nil
}

// plateMeshes divides the plates side by side. Of several problems it reports that of the first plate.
func plateMeshes(ctx context.Context, g *airframe.Geometry, o Options) ([]*planar.Mesh, error) {
	meshes, problems := make([]*planar.Mesh, len(g.Plates)), make([]error, len(g.Plates))
	var group errgroup.Group
	group.SetLimit(max(1, o.Threads))
	var lock sync.Mutex
	done := 0
	for i := range g.Plates {
		group.Go(func() error {
			if err := ctx.Err(); err != nil {
				return err
			}
			meshes[i], problems[i] = plateMesh(ctx, g, i, o)
			lock.Lock()
			defer lock.Unlock()
			if done++; o.Progress != nil {
				o.Progress(done, len(g.Plates))
			}
			return nil
		})
	}
	if err := group.Wait(); err != nil {
		return nil, err
	}
	for _, err := range problems {
		if err != nil {
			return nil, err
		}
	}
	return meshes, nil
}

// element returns the element type of a plate.
func (o *Options) element(plate string) string {
	if e, ok := o.Elements[plate]; ok {
		return e
	}
	return o.Element
}

func plateMesh(ctx context.Context, g *airframe.Geometry, i int, o Options) (*planar.Mesh, error) {
	p := &g.Plates[i]
	size := o.Size
	if s, ok := o.Sizes[p.Name]; ok {
		size = s
	}
	// Equilateral triangles of the wanted size have this many corners.
	if corners := p.Region.Area() / (math.Sqrt(3) / 2 * size * size); corners > mostCorners {
		return nil, &Problem{Part: p.Name, Size: true, Text: fmt.Sprintf("sides of %g m would need about %.0f nodes, more than %d", size, corners, mostCorners)}
	}
	var lines []outline.Loop
	for k := range g.Patches {
		if g.Patches[k].Plate == i {
			lines = append(lines, patchLoop(&g.Patches[k]))
		}
	}
	narrow := func(width float64) bool { return width <= slender*p.Thickness }
	options := planar.Options{
		Size:    func(outline.Point) float64 { return size },
		Lines:   lines,
		PerTurn: o.PerTurn,
		Snap:    min(size/100, mostSnap),

		MaxVertices: mostCorners,
		Stop:        ctx.Err,
	}
	ratio := linearRatio
	if o.element(p.Name) != linear {
		ratio = bareRatio
		options.Row = func(_ outline.Point, width float64) (depth, length float64) {
			if !narrow(width) || width < stocky*p.Thickness || size <= rowDepth*p.Thickness {
				return 0, 0
			}
			depth = min(rowDepth*p.Thickness, width/4)
			return depth, rowLength * depth
		}
	}
	options.EdgeSize = func(_ outline.Point, width float64) float64 {
		if narrow(width) {
			return min(size, ratio*p.Thickness)
		}
		return size
	}
	m, err := planar.Triangulate(p.Region, options)
	switch {
	case ctx.Err() != nil:
		return nil, ctx.Err()
	case err != nil:
		return nil, &Problem{Part: p.Name, Text: err.Error()}
	case !m.Complete:
		return nil, &Problem{Part: p.Name, Size: true, Text: fmt.Sprintf("sides of %g m would need more than %d nodes", size, mostCorners)}
	}
	return m, nil
}

func patchLoop(p *airframe.Patch) outline.Loop {
	if p.Shape == airframe.Disc {
		return outline.Loop{outline.Circle(p.Centre, p.Radius, true)}
	}
	return outline.Rectangle(p.Centre, p.Width, p.Height, p.Turn)
}

// addPlate appends plate i and fills in its patches.
func (m *Mesh) addPlate(g *airframe.Geometry, i int, pm *planar.Mesh, o Options) error {
	p := &g.Plates[i]
	part, first := int32(len(m.Parts)), int32(len(m.Nodes))
	m.Parts = append(m.Parts, Part{Name: p.Name, Element: o.element(p.Name), Thickness: p.Thickness, Frame: p.Frame})
	for _, n := range pm.Nodes {
		m.Nodes = append(m.Nodes, inSpace(p.Frame, n))
	}
	for _, t := range pm.Triangles {
		for c := range t {
			t[c] += first
		}
		m.Triangles = append(m.Triangles, t)
		m.TrianglePart = append(m.TrianglePart, part)
	}
	for _, e := range pm.Edges {
		m.Edges = append(m.Edges, [3]int32{e.Nodes[0] + first, e.Nodes[1] + first, e.Nodes[2] + first})
		m.EdgePart = append(m.EdgePart, part)
	}
	line := int32(0)
	for k := range g.Patches {
		patch := &g.Patches[k]
		if patch.Plate != i {
			continue
		}
		nodes := nodesWithin(pm, line, first)
		if len(nodes) == 0 {
			return &Problem{Part: p.Name, Patch: patch.Name, Text: "no material of the plate lies inside it"}
		}
		m.Patches[k] = Patch{Name: patch.Name, Owner: patch.Owner, Part: part, Nodes: nodes, Centre: inSpace(p.Frame, patch.Centre)}
		line++
	}
	return nil
}

// nodesWithin returns the nodes of all triangles inside a mesh line, ascending, with first added.
func nodesWithin(pm *planar.Mesh, line, first int32) []int32 {
	in := make([]bool, len(pm.Nodes))
	for t, within := range pm.Within {
		for _, l := range within {
			if l == line {
				for _, n := range pm.Triangles[t] {
					in[n] = true
				}
			}
		}
	}
	var nodes []int32
	for n, yes := range in {
		if yes {
			nodes = append(nodes, int32(n)+first)
		}
	}
	return nodes
}

func inSpace(f airframe.Frame, p outline.Point) airframe.Vec {
	var v airframe.Vec
	for d := range v {
		v[d] = f.Origin[d] + p.X*f.X[d] + p.Y*f.Y[d]
	}
	return v
}

func hasPlate(g *airframe.Geometry, name string) bool {
	for i := range g.Plates {
		if g.Plates[i].Name == name {
			return true
		}
	}
	return false
}

func sortedKeys[V any](m map[string]V) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	return keys
}
