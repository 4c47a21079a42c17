package trial

import (
	"math"

	"hushframe/core/numeric/sparse"
)

// Sheet describes a Lattice: nx by ny square cells of the given size and beams of the given thickness (m).
type Sheet struct {
	Nx, Ny      int
	Cell, Thick float64
	// Massless leaves the rotation about z ("drilling") without inertia.
	Massless bool
	// Keep, when not nil, says which cells there are.
	Keep func(i, j int) bool
}

// Cross keeps the cells near the diagonals of an n by n sheet: four arms of the given width (in cells) with a body in the
// middle.
func Cross(n, width int) func(i, j int) bool {
	return func(i, j int) bool {
		x, y := 2*i+1-n, 2*j+1-n
		abs := func(v int) int { return max(v, -v) }
		return abs(x-y) <= 2*width || abs(x+y) <= 2*width || abs(x) < n/3 && abs(y) < n/3
	}
}

// Lattice is a thin sheet of slender beams with six unknowns at each node (three displacements, three rotations), free in
// space: the pattern, the conditioning and the null space of a plate of quadratic shell elements, with little code. Each
// cell has the nine nodes of a quadratic patch and two triangles of six nodes, and each triangle joins all its nodes
// pairwise.
type Lattice struct {
	K, M     *sparse.Symmetric
	NodeOf   []int32 // node of each unknown
	Coords   [][3]float64
	Elements [][]int32
}

// Rigid returns the six rigid motions: three translations along and three rotations about the axes.
func (l *Lattice) Rigid() [][]float64 {
	out := make([][]float64, 6)
	for c := range out {
		out[c] = make([]float64, l.K.N)
		for v, x := range l.Coords {
			if c < 3 {
				out[c][6*v+c] = 1
				continue
			}
			axis := [3]float64{}
			axis[c-3] = 1
			u := cross(axis, x)
			copy(out[c][6*v:], u[:])
			out[c][6*v+c] = 1
		}
	}
	return out
}

// Lattice assembles the matrices of the sheet.
func (sh Sheet) Lattice() *Lattice {
	l := &Lattice{}
	nx, ny, cell, thick := sh.Nx, sh.Ny, sh.Cell, sh.Thick
	number := map[[2]int]int{} // node at each half-cell place
	at := func(i, j int) int {
		key := [2]int{i, j}
		v, ok := number[key]
		if !ok {
			v = len(l.Coords)
			number[key] = v
			// A slight warp keeps the sheet from having exact symmetries that real ones lack.
			x, y := float64(i)*cell/2, float64(j)*cell/2
			l.Coords = append(l.Coords, [3]float64{x, y + 0.02*x, 0.05 * cell * math.Sin(3*x/(cell*float64(nx)))})
		}
		return v
	}
	var nodes [][]int
	for j := range ny {
		for i := range nx {
			if sh.Keep != nil && !sh.Keep(i, j) {
				continue
			}
			a, b, c, d := at(2*i, 2*j), at(2*i+2, 2*j), at(2*i+2, 2*j+2), at(2*i, 2*j+2)
			s, e, t, w, m := at(2*i+1, 2*j), at(2*i+2, 2*j+1), at(2*i+1, 2*j+2), at(2*i, 2*j+1), at(2*i+1, 2*j+1)
			nodes = append(nodes, []int{a, b, c, s, e, m}, []int{a, c, d, m, t, w})
		}
	}
	for _, ns := range nodes {
		var unknowns []int32
		for _, v := range ns {
			for c := range 6 {
				unknowns = append(unknowns, int32(6*v+c))
			}
		}
		l.Elements = append(l.Elements, unknowns)
	}
	n := 6 * len(l.Coords)
	l.NodeOf = make([]int32, n)
	for u := range l.NodeOf {
		l.NodeOf[u] = int32(u / 6)
	}
	stiff := sparse.NewAssembler(n, l.Elements)
	mass := stiff.Fork()
	for e, ns := range nodes {
		k, m := make([]float64, 36*37/2), make([]float64, 36*37/2)
		for a := range ns {
			for b := range a {
				addBeam(k, a, b, l.Coords[ns[a]], l.Coords[ns[b]], thick)
			}
			addLump(m, a, cell, thick, sh.Massless)
		}
		stiff.Add(e, k)
		mass.Add(e, m)
	}
	l.K, l.M = stiff.Matrix(), mass.Matrix()
	return l
}

// Young's modulus (Pa) and density (kg/m³) of a carbon sheet, the right size to make numbers as in the real work.
const (
	modulus = 60e9
	density = 1600.0
)

// addLump adds a sixth of the mass of a triangle at node a, with the rotary inertia of the sheet.
func addLump(m []float64, a int, cell, thick float64, massless bool) {
	lump := density * thick * cell * cell / 12
	for c := range 6 {
		v := lump
		if c >= 3 {
			v = lump * thick * thick / 12
		}
		if c == 5 && massless {
			v = 0
		}
		i := 6*a + c
		m[i*(i+1)/2+i] += v
	}
}

// addBeam adds a slender beam of square section between nodes a > b, by its natural deformations: with axis t and
// length h, the stretch t·(u_a-u_b), the twist t·(r_a-r_b), and in each of two transverse directions n the end
// rotations relative to the chord, whose stiffness is EI/h·[4 2; 2 4]. Rigid motions deform nothing.
func addBeam(k []float64, a, b int, xa, xb [3]float64, thick float64) {
	t := [3]float64{xa[0] - xb[0], xa[1] - xb[1], xa[2] - xb[2]}
	h := math.Sqrt(dot(t, t))
	for c := range t {
		t[c] /= h
	}
	n1 := cross(t, [3]float64{0, 0, 1})
	norm := math.Sqrt(dot(n1, n1))
	for c := range n1 {
		n1[c] /= norm
	}
	n2 := cross(t, n1)
	area, inertia := thick*thick, thick*thick*thick*thick/12
	row := func(ua, ub, ra, rb [3]float64) (r [12]float64) {
		copy(r[0:], ua[:])
		copy(r[3:], ra[:])
		copy(r[6:], ub[:])
		copy(r[9:], rb[:])
		return r
	}
	zero := [3]float64{}
	add := func(c float64, p, q [12]float64) {
		for i := range 12 {
			gi := 6*a + i
			if i >= 6 {
				gi = 6*b + i - 6
			}
			for j := range 12 {
				gj := 6*a + j
				if j >= 6 {
					gj = 6*b + j - 6
				}
				if gj <= gi {
					k[gi*(gi+1)/2+gj] += c * (p[i]*q[j] + q[i]*p[j]) / 2
				}
			}
		}
	}
	stretch := row(t, scaled(t, -1), zero, zero)
	add(modulus*area/h, stretch, stretch)
	twist := row(zero, zero, t, scaled(t, -1))
	add(0.4*modulus*2*inertia/h, twist, twist)
	for _, n := range [][3]float64{n1, n2} {
		// The chord turns about n by (t×(u_a-u_b))·n/h = (u_a-u_b)·(n×t)/h.
		s := scaled(cross(n, t), 1/h)
		p := row(scaled(s, -1), s, n, zero)
		q := row(scaled(s, -1), s, zero, n)
		add(4*modulus*inertia/h, p, p)
		add(4*modulus*inertia/h, q, q)
		add(4*modulus*inertia/h, p, q)
	}
}

func dot(a, b [3]float64) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func cross(a, b [3]float64) [3]float64 {
	return [3]float64{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

func scaled(a [3]float64, f float64) [3]float64 { return [3]float64{f * a[0], f * a[1], f * a[2]} }
