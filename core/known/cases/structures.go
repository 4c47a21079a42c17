package cases

import (
	"math"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/beam"
	"hushframe/core/mechanics/laminate"
)

// aluminium of the rows below, with a thickness.
func aluminium(t known.T, thickness float64) laminate.Section {
	t.Helper()
	s, err := laminate.Homogeneous(laminate.Isotropic(70e9, 0.33, 2700), thickness, 0)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Row C-PLATE-TIPBODY: a rigid body with an offset centre on the whole edge of a cantilever.
func plateWithTipBody(t known.T, row known.Row) []float64 {
	p := newPlate(known.Rectangle(0.08, 0.02, 20, 6, 0), byName(t, "quadratic-triangle"), aluminium(t, 0.003))
	p.support(t, "x=0", "clamped", "")
	p.Bodies = []assembly.Body{{Name: "tip", Nodes: p.grid.Sets["x=a"], Inertia: []assembly.Inertia{{
		Mass: 0.03, Centre: assembly.Vec{0.086, 0.013, 0.01}, Tensor: [6]float64{4e-6, 4e-6, 3e-6},
	}}}}
	return scaled(elastic(t, &p.Problem, len(row.Values), 0), 1/(2*math.Pi))
}

// panel adds a rectangle spanned from a corner by sides along two directions, its nodes merged with
// those at the same place, and returns its grid's nodes in the problem.
func (f *frame) panel(t known.T, group string, g *known.Grid, axes assembly.Axes, origin assembly.Vec, section laminate.Section) []int32 {
	f.Groups = append(f.Groups, assembly.Group{Name: group, Kind: assembly.PartGroup})
	part := assembly.PlatePart{Group: len(f.Groups) - 1, Type: byName(t, "quadratic-triangle"), Axes: axes, Section: section}
	number := make([]int32, len(g.Points))
	for i, x := range g.Points {
		var at assembly.Vec
		for k := range 3 {
			at[k] = origin[k] + x[0]*axes[0][k] + x[1]*axes[1][k]
		}
		number[i] = -1
		for v, old := range f.Nodes {
			if math.Abs(old[0]-at[0])+math.Abs(old[1]-at[1])+math.Abs(old[2]-at[2]) < 1e-9 {
				number[i] = int32(v)
			}
		}
		if number[i] < 0 {
			number[i] = f.point(at[0], at[1], at[2])
		}
	}
	for _, e := range g.Triangles {
		for k := range e {
			e[k] = number[e[k]]
		}
		part.Elements = append(part.Elements, e)
	}
	f.Plates = append(f.Plates, part)
	return number
}

// Rows C-FOLD-90-CANT and C-CHANNEL-FREE: plates that meet at an angle, where drilling rotations carry
// moments.
func foldedPlates(t known.T, row known.Row) []float64 {
	var c struct {
		Line   [][2]float64 `json:"polyline_yz_m"`
		Length float64      `json:"extruded_along_x_m"`
	}
	row.Decode(t, &c)
	rigid := 6
	if row.ID == "C-FOLD-90-CANT" {
		rigid = 0
	}
	var f frame
	for i := range len(c.Line) - 1 {
		a, b := c.Line[i], c.Line[i+1]
		wide := math.Hypot(b[0]-a[0], b[1]-a[1])
		y := assembly.Vec{0, (b[0] - a[0]) / wide, (b[1] - a[1]) / wide}
		axes := assembly.Axes{{1, 0, 0}, y, {0, -y[2], y[1]}}
		f.panel(t, "panel", known.Rectangle(c.Length, wide, 16, int(math.Ceil(wide/0.0061)), 0), axes, assembly.Vec{0, a[0], a[1]}, aluminium(t, 0.002))
	}
	if rigid == 0 {
		for v, x := range f.Nodes {
			if x[0] < 1e-9 {
				f.hold(int32(v), "xyzXYZ")
			}
		}
	}
	return scaled(elastic(t, &f.Problem, len(row.Values), rigid), 1/(2*math.Pi))
}

// Row C-STACK-ALU: two plates on four standoffs, each end in a rigid footprint.
func stackOnStandoffs(t known.T, row known.Row) []float64 {
	const a, b, side, height = 0.05, 0.04, 0.006, 0.025
	lines := func(length float64, n int) []float64 {
		v := known.Even(0, side, 3)
		v = append(v, known.Even(side, length-side, n)[1:]...)
		return append(v, known.Even(length-side, length, 3)[1:]...)
	}
	g := known.Lattice(lines(a, 14), lines(b, 10), 0)
	var f frame
	levels := [2][]int32{}
	for i, thickness := range []float64{0.002, 0.0015} {
		levels[i] = f.panel(t, "plate", g, assembly.Global, assembly.Vec{0, 0, height * float64(i)}, aluminium(t, thickness))
	}
	section := beam.Tube(0.005, 0, 70e9, 0.33, 2700)
	for _, c := range [][2]float64{{0, 0}, {a - side, 0}, {0, b - side}, {a - side, b - side}} {
		ends := [2]int32{}
		for i := range levels {
			x, y := c[0]+side/2, c[1]+side/2
			ends[i] = f.point(x, y, height*float64(i))
			nodes := []int32{ends[i]}
			for k, q := range g.Points {
				if math.Abs(q[0]-x) < side/2+1e-9 && math.Abs(q[1]-y) < side/2+1e-9 {
					nodes = append(nodes, levels[i][k])
				}
			}
			f.body("foot", nodes)
		}
		f.member("standoff", section, assembly.Vec{0, 1, 0}, ends[0], ends[1], 8)
	}
	return scaled(elastic(t, &f.Problem, len(row.Values), 6), 1/(2*math.Pi))
}

// Row C-BOARD-MOUNTS: a body on springs over small footprints of a clamped plate.
func boardOnMounts(t known.T, row known.Row) []float64 {
	const a, b, q, side = 0.06, 0.05, 0.01525, 0.005
	lines := func(length float64, n int) []float64 {
		half := length / 2
		v := known.Even(-half, -q-side/2, n)
		v = append(v, known.Even(-q-side/2, -q+side/2, 2)[1:]...)
		v = append(v, known.Even(-q+side/2, q-side/2, 8)[1:]...)
		v = append(v, known.Even(q-side/2, q+side/2, 2)[1:]...)
		return append(v, known.Even(q+side/2, half, n)[1:]...)
	}
	p := newPlate(known.Lattice(lines(a, 4), lines(b, 3), 0), byName(t, "quadratic-triangle"), aluminium(t, 0.002))
	p.support(t, "x=0", "clamped", "")
	p.Groups = append(p.Groups, assembly.Group{Name: "mounts", Kind: assembly.MountGroup})
	p.Bodies = []assembly.Body{{Name: "board", Inertia: []assembly.Inertia{{Mass: 0.012, Centre: assembly.Vec{0, 0, 0.004}, Tensor: [6]float64{2e-6, 2e-6, 3.5e-6}}}}}
	for _, c := range [][2]float64{{q, q}, {-q, q}, {-q, -q}, {q, -q}} {
		var nodes []int32
		for k, x := range p.grid.Points {
			if math.Abs(x[0]-c[0]) < side/2+1e-9 && math.Abs(x[1]-c[1]) < side/2+1e-9 {
				nodes = append(nodes, int32(k))
			}
		}
		p.Bodies = append(p.Bodies, assembly.Body{Name: "pad", Nodes: nodes})
		p.Springs = append(p.Springs, assembly.Spring{Group: 1, A: len(p.Bodies) - 1, B: 0, Point: assembly.Vec{c[0], c[1], 0},
			Axes: assembly.Global, Stiffness: [6]float64{6000, 6000, 14000}})
	}
	return scaled(elastic(t, &p.Problem, len(row.Values), 0), 1/(2*math.Pi))
}
