package scene

import (
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
	"hushframe/stages/report/pack"
)

// Frame is the frame as it is drawn. Indices of nodes count the nodes drawn.
type Frame struct {
	Nodes  pack.Floats   `json:"nodes"` // x, y, z of each, m
	Parts  []Part        `json:"parts"`
	Bodies []Body        `json:"bodies"`
	Sites  []Site        `json:"sites"`
	Centre []pack.Number `json:"centre,omitempty"` // of gravity, m
}

// Part is a plate (triangles and boundary edges) or a standoff (lines).
type Part struct {
	Name      string       `json:"name"`
	Standoff  bool         `json:"standoff"`
	Thickness float64      `json:"thickness"` // m, or the outer diameter of a standoff
	Normal    [3]float64   `json:"normal"`
	Triangles pack.Indices `json:"triangles"`
	Edges     pack.Indices `json:"edges"`
	Lines     pack.Indices `json:"lines"`
}

// Body is a rigid body, drawn as a box of half sides Half or, for a rotor, as a drum; it moves with a site.
type Body struct {
	Name   string     `json:"name"`
	Kind   string     `json:"kind"`
	Site   int        `json:"site"`
	Centre [3]float64 `json:"centre"`
	Half   [3]float64 `json:"half"`
	Spin   int        `json:"spin"`
	Mass   float64    `json:"mass"` // kg
}

// Site is a point whose motion is known in every vector.
type Site struct {
	Name  string     `json:"name"`
	Kind  string     `json:"kind"`
	Point [3]float64 `json:"point"`
}

// Shapes are the vectors of the basis at the nodes drawn and at the sites.
type Shapes struct {
	Kinds []modal.VectorKind `json:"kinds"`
	Step  pack.Floats        `json:"step"`  // worth of one step of each vector, m per unit of the modal coordinate
	Nodes pack.Steps         `json:"nodes"` // vector after vector, x, y, z of each node
	Sites pack.Floats        `json:"sites"` // site after site, vector after vector, ux, uy, uz, rx, ry, rz
}

// mostShape bounds the bytes of packed shapes, and finest and coarsest the lengths (m) of edges drawn.
const (
	mostShape = 1_600_000
	finest    = 2e-3
	coarsest  = 40e-3
)

// pickSurface takes the finest surface whose shapes stay within the bound.
func pickSurface(m *mesh.Mesh, vectors int) *draw.Surface {
	for length := finest; ; length *= 1.5 {
		s := draw.NewSurface(m, length)
		if nodes := drawnNodes(s); 6*len(nodes)*vectors <= mostShape || length > coarsest {
			return s
		}
	}
}

// drawnNodes lists the nodes of the mesh that a surface uses, by first use.
func drawnNodes(s *draw.Surface) []int32 {
	var out []int32
	seen := map[int32]bool{}
	use := func(n int32) {
		if !seen[n] {
			seen[n] = true
			out = append(out, n)
		}
	}
	for _, p := range s.Parts {
		for _, t := range p.Triangles {
			for _, n := range t {
				use(n)
			}
		}
		for _, e := range p.Edges {
			use(e[0])
			use(e[1])
		}
		for _, l := range p.Lines {
			use(l[0])
			use(l[1])
		}
	}
	return out
}

// newFrame packs the frame and, where modes belong to the mesh, their shapes and the density of their strain energy.
func newFrame(m *mesh.Mesh, p *airframe.Properties, modes *kinds.Modes) (*Frame, *Shapes, *Density) {
	vectors := 1
	fits := modes != nil && len(modes.Basis.Shapes) > 0 && len(modes.Basis.Shapes[0]) == 3*len(m.Nodes)
	if fits {
		vectors = len(modes.Basis.Shapes)
	}
	surface := pickSurface(m, vectors)
	nodes := drawnNodes(surface)
	index := make(map[int32]int32, len(nodes))
	f := &Frame{}
	for i, n := range nodes {
		index[n] = int32(i)
		f.Nodes = append(f.Nodes, m.Nodes[n][:]...)
	}
	for _, sp := range surface.Parts {
		part := Part{Name: sp.Name}
		for i := range m.Parts {
			if mp := &m.Parts[i]; mp.Name == sp.Name && mp.Standoff == (len(sp.Triangles) == 0) {
				part.Standoff, part.Thickness, part.Normal = mp.Standoff, mp.Thickness, mp.Frame.Z
				if mp.Standoff {
					part.Thickness = mp.Outer
				}
			}
		}
		for _, t := range sp.Triangles {
			part.Triangles = append(part.Triangles, index[t[0]], index[t[1]], index[t[2]])
		}
		for _, e := range sp.Edges {
			part.Edges = append(part.Edges, index[e[0]], index[e[1]])
		}
		for _, l := range sp.Lines {
			part.Lines = append(part.Lines, index[l[0]], index[l[1]])
		}
		f.Parts = append(f.Parts, part)
	}
	if modes != nil {
		for _, s := range modes.Basis.Sites {
			f.Sites = append(f.Sites, Site{s.Name, s.Kind, s.Point})
		}
		f.Centre = pack.Numbers(modes.Centre[:])
	}
	if p != nil {
		f.Bodies = bodies(p, f.Sites)
	}
	if !fits {
		return f, nil, nil
	}
	return f, packShapes(modes.Basis, nodes), newDensity(m, modes, nodes)
}

func packShapes(b *modal.Basis, nodes []int32) *Shapes {
	s := &Shapes{Kinds: b.Kinds}
	values := make([]float64, 3*len(nodes))
	for _, shape := range b.Shapes {
		for i, n := range nodes {
			copy(values[3*i:3*i+3], shape[3*n:3*n+3])
		}
		steps, step := pack.Stepped(values)
		s.Nodes, s.Step = append(s.Nodes, steps...), append(s.Step, step)
	}
	for _, site := range b.Sites {
		for _, q := range site.Motion {
			s.Sites = append(s.Sites, q[:]...)
		}
	}
	return s
}

// smallBody is the sum of half sides (m) below which a body is a screw and not drawn.
const smallBody = 4e-3

// bodies lists what is worth drawing besides plates, as the homogeneous box or upright drum of the same inertia.
func bodies(p *airframe.Properties, sites []Site) []Body {
	spin := map[string]int{}
	for _, r := range p.Rotors {
		spin[r.Name] = r.Spin
	}
	var out []Body
	for i := range p.Bodies {
		b := &p.Bodies[i]
		x := Body{Name: b.Name, Kind: b.Kind, Site: -1, Centre: b.Centre, Mass: b.Mass}
		for k, s := range sites {
			if s.Name == b.Name {
				x.Site = k
			}
		}
		if !(b.Mass > 0) {
			continue
		}
		if b.Kind == "rotor" {
			across, axial := (b.Inertia[0]+b.Inertia[1])/2, b.Inertia[2]
			r := math.Sqrt(math.Max(0, 2*axial/b.Mass))
			h := math.Sqrt(math.Max(0, 12*across/b.Mass-3*r*r)) / 2
			x.Half, x.Spin = [3]float64{r, r, h}, spin[b.Name]
		} else {
			for d := range x.Half {
				square := 6 / b.Mass * (b.Inertia[(d+1)%3] + b.Inertia[(d+2)%3] - b.Inertia[d])
				x.Half[d] = math.Sqrt(math.Max(0, square)) / 2
			}
		}
		if x.Half[0]+x.Half[1]+x.Half[2] >= smallBody {
			out = append(out, x)
		}
	}
	return out
}
