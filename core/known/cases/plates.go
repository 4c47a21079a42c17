package cases

import (
	"encoding/json"
	"math"
	"strings"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
)

// plate is a problem of one flat plate.
type plate struct {
	assembly.Problem
	grid  *known.Grid
	nodes int // per element
}

func newPlate(grid *known.Grid, kind element.Type, section laminate.Section) *plate {
	p := &plate{grid: grid, nodes: kind.Describe().Nodes}
	for _, x := range grid.Points {
		p.Nodes = append(p.Nodes, assembly.Vec{x[0], x[1], 0})
	}
	p.Groups = []assembly.Group{{Name: "plate", Kind: assembly.PartGroup}}
	p.Plates = []assembly.PlatePart{{Type: kind, Axes: assembly.Global, Section: section, Elements: grid.Triangles}}
	return p
}

func components(text string) (c [6]bool) {
	for _, r := range text {
		if r >= 'x' {
			c[r-'x'] = true
		} else {
			c[r-'X'+3] = true
		}
	}
	return c
}

// everywhere holds components of all nodes: "xyZ" leaves bending, "zXY" motion in the plane.
func (p *plate) everywhere(text string) {
	for v := range p.Nodes {
		p.Supports = append(p.Supports, assembly.Support{Node: int32(v), Fixed: components(text)})
	}
}

// support holds an edge as its word or letter says: clamped, simply supported (hard: deflection and
// tangential rotation zero) or free. tangential is the letter of the rotation about the normal of the
// edge.
func (p *plate) support(t known.T, edge, how, tangential string) {
	t.Helper()
	var held string
	switch how[:1] {
	case "c", "C":
		held = "xyzXYZ"
	case "s", "S":
		held = "z" + tangential
	case "f", "F":
		return
	default:
		t.Fatalf("edge %s: %q", edge, how)
	}
	for _, v := range p.grid.Sets[edge] {
		p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components(held)})
	}
}

// edges holds the four sides of a rectangle: a map by side, or a text of one letter per side.
func (p *plate) edges(t known.T, raw json.RawMessage) {
	t.Helper()
	sides := []string{"x=0", "y=0", "x=a", "y=b"}
	how := map[string]string{}
	var text string
	if json.Unmarshal(raw, &how) != nil {
		if err := json.Unmarshal(raw, &text); err != nil {
			t.Fatal(err)
		}
		if strings.HasPrefix(text, "all simply") {
			text = "SSSS"
		}
		for i, s := range sides {
			how[s] = text[i : i+1]
		}
	}
	for i, s := range sides {
		p.support(t, s, how[s], string("XY"[i%2]))
	}
}

// free tells how many rigid motions are left when only bending, or only motion in the plane, is.
func free(raw json.RawMessage) int {
	if strings.ContainsAny(strings.ToLower(strings.ReplaceAll(string(raw), "free", "f")), "cs") {
		return 0
	}
	return 3
}

// Rows B-THIN-*, B-THICK-* and B-SQ-*: rectangles, bending only. Quadratic triangles on a mesh of half
// the row's density keep a third of its tolerance.
func rectangles(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	var c struct {
		A, B, Nu  float64
		Ratio     float64 `json:"h_over_a"`
		Am        float64 `json:"a_m"`
		Bm        float64 `json:"b_m"`
		Thickness float64 `json:"thickness_m"`
		E         float64 `json:"E_Pa"`
		Rho       float64 `json:"rho_kgm3"`
		Theory    string
		Edges     json.RawMessage
	}
	row.Decode(t, &c)
	dimensional, thinned := c.E > 0, 1.0
	if dimensional {
		c.A, c.B = c.Am, c.Bm
		if c.Theory == "Kirchhoff" && c.Thickness > 0.02*c.A {
			// Thin-plate theory of a thick plate: that of a thin one, where frequencies go with the thickness.
			thinned = c.Thickness / (0.005 * c.A)
			c.Thickness /= thinned
		}
	} else {
		c.E, c.Rho = 1e9, 1000
		c.Thickness = c.Ratio * c.A
		if c.Ratio == 0 {
			c.Thickness = 0.001 * c.A // thin: the shear-deformable free edge differs by about h/a
		}
	}
	section, err := laminate.Homogeneous(laminate.Isotropic(c.E, c.Nu, c.Rho), c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	const along = 12
	across := int(math.Round(along * c.B / c.A))
	if c.B > c.A {
		across = along
	}
	p := newPlate(known.Rectangle(c.A, c.B, along, across, 0), kind, section)
	p.everywhere("xyZ")
	p.edges(t, c.Edges)
	unit := c.A * c.A * math.Sqrt(section.Mass/section.D[0][0])
	if dimensional {
		unit = thinned / (2 * math.Pi)
	}
	return scaled(elastic(t, &p.Problem, len(row.Values), free(c.Edges)), unit)
}

// Rows B-INPLANE-* and B-TAPER-MEMBRANE: motion in the plane.
func membranes(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	var c struct {
		A, B, Nu float64
		Edges    json.RawMessage
	}
	row.Decode(t, &c)
	e, rho, unit := 1e9, 1000.0, 0.0
	var grid *known.Grid
	if row.ID == "B-TAPER-MEMBRANE" {
		e, rho, unit = 200e9, 8000, 1/(2*math.Pi)
		grid = known.Rectangle(10, 5, 20, 10, 0)
		grid.Map(func(x, y float64) (float64, float64) { return x, (y - 2.5) * (1 - 0.8*x/10) })
		c.Nu, c.Edges = 0.3, json.RawMessage(`"CFFF"`)
	} else {
		grid = known.Rectangle(c.A, c.B, 16, int(16*c.B), 0)
		unit = c.A * math.Sqrt(rho*(1-c.Nu*c.Nu)/e)
	}
	section, err := laminate.Homogeneous(laminate.Isotropic(e, c.Nu, rho), 0.05, 0)
	if err != nil {
		t.Fatal(err)
	}
	p := newPlate(grid, kind, section)
	p.everywhere("zXY")
	p.edges(t, c.Edges)
	return scaled(elastic(t, &p.Problem, len(row.Values), free(c.Edges)), unit)
}

// Rows B-RHOMB-*: skew elements, clamped.
func rhombs(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	var c struct {
		Thickness float64 `json:"thickness_m"`
	}
	row.Decode(t, &c)
	section, err := laminate.Homogeneous(laminate.Isotropic(200e9, 0.3, 8000), c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	grid := known.Rectangle(10, 10, 16, 16, 0)
	grid.Map(func(x, y float64) (float64, float64) { return x + y*math.Sqrt2/2, y * math.Sqrt2 / 2 })
	p := newPlate(grid, kind, section)
	p.everywhere("xyZ")
	p.edges(t, json.RawMessage(`"CCCC"`))
	return scaled(elastic(t, &p.Problem, len(row.Values), 0), 1/(2*math.Pi))
}

// Rows B-CIRC-*, B-ANNULUS-*, B-DISC-*: curved sides on coarse rings. Modes with diameters are double.
func rounds(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	var c struct {
		Radius, Nu float64
		Edge       string
		Inner      float64 `json:"inner_radius_m"`
		Outer      float64 `json:"outer_radius_m"`
		Thickness  float64 `json:"thickness_m"`
		E          float64 `json:"E_Pa"`
		Rho        float64 `json:"rho_kgm3"`
		OuterEdge  string  `json:"outer_edge"`
	}
	row.Decode(t, &c)
	thin := c.Radius > 0
	if thin {
		c.Outer, c.Thickness, c.E, c.Rho, c.OuterEdge = c.Radius, 0.002*c.Radius, 1e9, 1000, c.Edge
	}
	section, err := laminate.Homogeneous(laminate.Isotropic(c.E, c.Nu, c.Rho), c.Thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	grid := known.Ring(c.Inner, c.Outer, 7, 32)
	p := newPlate(grid, kind, section)
	p.everywhere("xyZ")
	for _, v := range grid.Sets["outer"] {
		// In axes x outward, y along the edge: the tangential rotation β_y = -θ_x.
		x := grid.Points[v]
		r := math.Hypot(x[0], x[1])
		axes := assembly.Axes{{x[0] / r, x[1] / r, 0}, {-x[1] / r, x[0] / r, 0}, {0, 0, 1}}
		switch c.OuterEdge {
		case "C":
			p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components("zXY")})
		case "S":
			p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components("zX"), Axes: &axes})
		}
	}
	rigid := 0
	if c.OuterEdge == "F" {
		rigid = 3
	}
	all := elastic(t, &p.Problem, 2*len(row.Values)+6, rigid)
	unit := 1 / (2 * math.Pi)
	if thin {
		unit = c.Outer * c.Outer * math.Sqrt(section.Mass/section.D[0][0])
	}
	// The rows leave out some modes of many diameters, so each value is looked for; it must come
	// alone without diameters and twice with.
	var got []float64
	for k, want := range row.Values {
		best, count := all[0], 0
		for _, w := range all {
			if math.Abs(unit*w-want) < math.Abs(unit*best-want) {
				best = w
			}
		}
		for _, w := range all {
			if math.Abs(w/best-1) < 1e-3 {
				count++
			}
		}
		if double := strings.Contains(row.Labels[k], "double"); double != (count == 2) {
			t.Errorf("row %s: %s comes %d times, as %g", row.ID, row.Labels[k], count, unit*best)
		}
		got = append(got, unit*best)
	}
	return got
}

// Rows B-ORTHO-* and B-LAM-*: orthotropic plates and laminates, with coupling of bending, twist and
// stretching, in-plane motion included.
func laminates(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	var c struct {
		A          float64 `json:"a_m"`
		B          float64 `json:"b_m"`
		Thickness  float64 `json:"thickness_m"`
		Properties known.Constants
		Edges      json.RawMessage
		Theory     string
	}
	row.Decode(t, &c)
	plies, ortho := row.Plies(t), strings.HasPrefix(row.ID, "B-ORTHO-")
	if ortho {
		plies = []laminate.Ply{{Material: c.Properties.Material(), Thickness: c.Thickness}}
	}
	section, err := laminate.FactoredStack(plies, 5.0/6)
	if err != nil {
		t.Fatal(err)
	}
	if c.Theory == "Kirchhoff" { // no transverse shear, no rotary inertia
		for i := range 2 {
			section.Shear[i][i] *= 1e4
		}
		section.Rotary = 0
	}
	across := max(6, int(math.Round(14*c.B/c.A)))
	ys := known.Even(0, c.B, across)
	if c.B < 4*section.Thickness { // an arm: graded to its free edges
		for j, y := range ys {
			ys[j] = c.B / 2 * (1 + math.Sin(math.Pi*(y/c.B-0.5)))
		}
	}
	p := newPlate(known.Lattice(known.Even(0, c.A, 14), ys, 0), kind, section)
	rigid := 0
	if ortho {
		p.everywhere("xyZ")
	} else {
		rigid = 2 * free(c.Edges)
	}
	p.edges(t, c.Edges)
	return scaled(elastic(t, &p.Problem, len(row.Values), rigid), 1/(2*math.Pi))
}

// Rows B-NAVIER-*: lowest frequency of each wave pair, looked for among the lowest modes.
func navierFrequencies(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	p, section := navier(t, row, kind)
	all := scaled(elastic(t, &p.Problem, 9, 0), math.Sqrt(section.Mass/section.Thickness/1e9)/section.Thickness)
	var got []float64
	for _, want := range row.Values {
		best := all[0]
		for _, v := range all {
			if math.Abs(v-want) < math.Abs(best-want) {
				best = v
			}
		}
		got = append(got, best)
	}
	return got
}

// navier builds the unit square of a row, E2 = 1 GPa, density 1000: hard supports, in the plane too:
// for cross-plies the tangential displacement is held on each side, for angle-plies the normal one.
func navier(t known.T, row known.Row, kind element.Type) (*plate, laminate.Section) {
	t.Helper()
	var c struct {
		Plies  []float64 `json:"plies_bottom_to_top_deg"`
		Plies2 []float64 `json:"plies_deg"`
		E1     float64   `json:"E1_over_E2"`
		G12    float64   `json:"G12_over_E2"`
		G13    float64   `json:"G13_over_E2"`
		G23    float64   `json:"G23_over_E2"`
		Nu12   float64
		Edges  string
		Ratio  float64 `json:"a_over_h"`
	}
	row.Decode(t, &c)
	if c.Ratio == 0 {
		c.Ratio = number(t, row.ID[strings.LastIndex(row.ID, "-ah")+3:])
	}
	const e2 = 1e9
	m := laminate.Material{E1: c.E1 * e2, E2: e2, G12: c.G12 * e2, G13: c.G13 * e2, G23: c.G23 * e2, Nu12: c.Nu12, Density: 1000}
	angles := append(c.Plies, c.Plies2...)
	var plies []laminate.Ply
	for _, a := range angles {
		plies = append(plies, laminate.Ply{Material: m, Thickness: 1 / c.Ratio / float64(len(angles)), Angle: a * math.Pi / 180})
	}
	section, err := laminate.FactoredStack(plies, 5.0/6)
	if err != nil {
		t.Fatal(err)
	}
	p := newPlate(known.Rectangle(1, 1, 12, 12, 0), kind, section)
	p.edges(t, json.RawMessage(`"SSSS"`))
	normal := strings.Contains(c.Edges, "normal in-plane displacement zero")
	for i, side := range []string{"x=0", "y=0", "x=a", "y=b"} {
		held := "yx"[i%2 : i%2+1]
		if normal {
			held = "xy"[i%2 : i%2+1]
		}
		for _, v := range p.grid.Sets[side] {
			p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components(held)})
		}
	}
	return p, section
}

// Rows B-STATIC-*: the same plates under a sinusoidal pressure, solved with the factor at hand.
func sinusoidalPressure(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	p, section := navier(t, row, kind)
	s := assemble(t, &p.Problem)
	// Consistent load: the mass matrix over the density times the pressure at the nodes.
	shape := make([]float64, s.N)
	for v, x := range p.grid.Points {
		if u := s.NodeUnknowns(int32(v))[2]; u >= 0 {
			shape[u] = math.Sin(math.Pi*x[0]) * math.Sin(math.Pi*x[1]) / section.Mass
		}
	}
	load := make([]float64, s.N)
	s.M.MulVec(load, shape)
	u := static(t, s, load)
	for v, x := range p.grid.Points {
		if x == [2]float64{0.5, 0.5} {
			w := u[s.NodeUnknowns(int32(v))[2]]
			h := section.Thickness
			return []float64{100 * w * 1e9 * h * h * h}
		}
	}
	t.Fatalf("row %s: there is no node in the middle", row.ID)
	return nil
}

// Rows B-POINTMASS-*: a thin supported square with a mass on one node, the only place where one node
// will do: the plate is so thin that its shear dimple is beyond the digits.
func pointMasses(t known.T, row known.Row) []float64 {
	kind := byName(t, "quadratic-triangle")
	var c struct {
		A, B  float64
		Ratio string  `json:"mass_ratio"`
		X     float64 `json:"x0_over_a"`
		Y     float64 `json:"y0_over_b"`
	}
	row.Decode(t, &c)
	_, text, _ := strings.Cut(c.Ratio, ")=")
	section, err := laminate.Homogeneous(laminate.Isotropic(1e9, 0.3, 1000), 0.001, 0)
	if err != nil {
		t.Fatal(err)
	}
	p := newPlate(known.Rectangle(c.A, c.B, 16, 16, 0), kind, section)
	p.edges(t, json.RawMessage(`"SSSS"`))
	for v, x := range p.grid.Points {
		if math.Abs(x[0]-c.X*c.A)+math.Abs(x[1]-c.Y*c.B) < 1e-9 {
			p.Bodies = []assembly.Body{{Name: "mass", Nodes: []int32{int32(v)}, Inertia: []assembly.Inertia{{
				Mass: number(t, text) * section.Mass * c.A * c.B, Centre: p.Nodes[v],
				Tensor: [6]float64{1e-9, 1e-9, 1e-9}, // the turn of a single node about z is free: one rigid motion
			}}}}
		}
	}
	for _, side := range []string{"x=0", "y=0", "x=a", "y=b"} { // motion in the plane is far above
		for _, v := range p.grid.Sets[side] {
			p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components("xyZ")})
		}
	}
	return scaled(elastic(t, &p.Problem, len(row.Values), 1), math.Sqrt(section.Mass/section.D[0][0]))
}
