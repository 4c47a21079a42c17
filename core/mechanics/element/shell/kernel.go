package shell

import (
	"math"

	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
)

// drilling is the stiffness of the drilling penalty as a share of the mean in-plane shear stiffness.
// It decides nothing but how loosely θ_z follows the in-plane rotation.
const drilling = 1e-4

// drillingStiffness is the kernel's share of the mean of A_66 over all directions of the axes.
func (k *kernel) drillingStiffness(s *laminate.Section) float64 {
	return k.drilling * (s.A[0][0] + s.A[1][1] - 2*s.A[0][1] + 4*s.A[2][2]) / 8
}

// flat is how far nodes may lie off the common plane, as a share of the longest side.
const flat = 1e-6

const (
	maxNodes  = 6
	maxPoints = 6
	maxInner  = 5*maxNodes + 2
)

// kernel computes one element at a time. Its inner unknowns are, for n nodes,
//
//	u0 v0 u1 v1 …   w0 w1 …   β_x0 β_y0 β_x1 β_y1 …   bubble β_x β_y
//
// that is 2n + n + 2n + 2; drilling rotations are kept apart.
type kernel struct {
	f        *formulation
	inner    int     // 5n + 2
	drilling float64 // see drilling
	// Geometry at the integration points.
	area   [maxPoints]float64 // weight times Jacobian
	gx, gy [maxPoints][maxNodes + 1]float64
	shear  [maxPoints][2][3*maxNodes + 2]float64 // γ_xz, γ_yz from w and β
	// Stiffness over inner unknowns (lower triangle) and over drilling.
	k          [maxInner][maxInner]float64
	drill      [maxNodes][maxNodes]float64
	drillPlane [maxNodes][2 * maxNodes]float64
	bubble     [2][maxInner - 2]float64 // bubble amplitude = -bubble · inner
}

func newKernel(f *formulation, drilling float64) *kernel {
	return &kernel{f: f, inner: 5*f.nodes + 2, drilling: drilling}
}

func (k *kernel) deflStart() int  { return 2 * k.f.nodes }
func (k *kernel) fibreStart() int { return 3 * k.f.nodes }

// locate evaluates the geometry of an element with coordinates xyz, three per node.
func (k *kernel) locate(xyz []float64) (reason string) {
	n := k.f.nodes
	longest := 0.0
	for a := range 3 {
		b := (a + 1) % 3
		longest = max(longest, math.Hypot(xyz[3*b]-xyz[3*a], xyz[3*b+1]-xyz[3*a+1]))
	}
	for a := range n {
		if !(abs(xyz[3*a+2]-xyz[2]) <= flat*longest) {
			return "its nodes do not lie in one plane"
		}
	}
	for p := range k.f.points {
		pt := &k.f.points[p]
		xr, xs, yr, ys := jacobian(&pt.at, xyz, n)
		det := xr*ys - xs*yr
		if !(det > 0) {
			return "it is folded or turned over: corners run clockwise, or a mid-side node lies too far off its chord"
		}
		k.area[p] = pt.weight * det
		for a := range n + 1 {
			k.gx[p][a] = (pt.dr[a]*ys - pt.ds[a]*yr) / det
			k.gy[p][a] = (pt.ds[a]*xr - pt.dr[a]*xs) / det
		}
	}
	k.tieShear(xyz)
	return ""
}

func jacobian(a *at, xyz []float64, n int) (xr, xs, yr, ys float64) {
	for i := range n {
		x, y := xyz[3*i]-xyz[0], xyz[3*i+1]-xyz[1]
		xr += a.dr[i] * x
		xs += a.ds[i] * x
		yr += a.dr[i] * y
		ys += a.ds[i] * y
	}
	return
}

// tieShear evaluates the assumed shear strains at the integration points.
func (k *kernel) tieShear(xyz []float64) {
	n := k.f.nodes
	width := 3*n + 2
	var rows [8][3*maxNodes + 2]float64
	for i := range k.f.samples {
		s := &k.f.samples[i]
		xr, xs, yr, ys := jacobian(&s.at, xyz, n)
		for _, c := range s.into {
			row := &rows[c.functional]
			for a := range n {
				row[a] += c.r*s.dr[a] + c.s*s.ds[a]
			}
			tx, ty := c.r*xr+c.s*xs, c.r*yr+c.s*ys
			for a := range n + 1 {
				row[n+2*a] += s.value[a] * tx
				row[n+2*a+1] += s.value[a] * ty
			}
		}
	}
	for p := range k.f.points {
		pt := &k.f.points[p]
		xr, xs, yr, ys := jacobian(&pt.at, xyz, n)
		det := xr*ys - xs*yr
		for f := range k.f.functionals {
			er, es := pt.assumed[0][f], pt.assumed[1][f]
			x, y := (er*ys-es*yr)/det, (es*xr-er*xs)/det
			if f == 0 {
				for j := range width {
					k.shear[p][0][j], k.shear[p][1][j] = x*rows[f][j], y*rows[f][j]
				}
				continue
			}
			row, gx, gy := rows[f][:width], k.shear[p][0][:width], k.shear[p][1][:width]
			for j, v := range row {
				gx[j] += x * v
				gy[j] += y * v
			}
		}
	}
}

// stiffness integrates k, drill and drillPlane for the located element and condenses the bubble.
func (k *kernel) stiffness(s *laminate.Section) {
	n := k.f.nodes
	for i := range k.inner {
		k.k[i] = [maxInner]float64{}
	}
	k.drill, k.drillPlane = [maxNodes][maxNodes]float64{}, [maxNodes][2 * maxNodes]float64{}
	fibre, defl, coupled := k.fibreStart(), k.deflStart(), !s.Uncoupled()
	drill := k.drillingStiffness(s)
	for p := range k.f.points {
		w := k.area[p]
		gx, gy := &k.gx[p], &k.gy[p]
		for b := range n + 1 {
			// Stress resultants of unit amplitudes at node b: columns u and v.
			am, dm := columns(&s.A, w, gx[b], gy[b]), columns(&s.D, w, gx[b], gy[b])
			if b < n {
				for a := b; a < n; a++ {
					addPair(&k.k, 2*a, 2*b, gx[a], gy[a], &am)
				}
				if coupled {
					bm := columns(&s.B, w, gx[b], gy[b])
					for a := range n + 1 {
						addPair(&k.k, fibre+2*a, 2*b, gx[a], gy[a], &bm)
					}
				}
			}
			for a := b; a < n+1; a++ {
				addPair(&k.k, fibre+2*a, fibre+2*b, gx[a], gy[a], &dm)
			}
		}
		sx, sy := &k.shear[p][0], &k.shear[p][1]
		width := 3*n + 2
		var qx, qy [3*maxNodes + 2]float64
		for i := range width {
			qx[i], qy[i] = w*(s.Shear[0][0]*sx[i]+s.Shear[0][1]*sy[i]), w*(s.Shear[1][0]*sx[i]+s.Shear[1][1]*sy[i])
			x, y, row := sx[i], sy[i], k.k[defl+i][defl:][:i+1]
			for j := range row {
				row[j] += x*qx[j] + y*qy[j]
			}
		}
		k.addDrilling(p, w*drill)
	}
	k.condense()
}

// columns returns w·C·{ε of a unit u, ε of a unit v} for gradients gx, gy.
func columns(c *[3][3]float64, w, gx, gy float64) (m [3][2]float64) {
	for i := range 3 {
		m[i][0] = w * (c[i][0]*gx + c[i][2]*gy)
		m[i][1] = w * (c[i][1]*gy + c[i][2]*gx)
	}
	return m
}

// addPair adds the 2×2 block of nodes with gradients gx, gy (rows) and resultants m (columns). On
// the diagonal it also writes above it, which nobody reads.
func addPair(k *[maxInner][maxInner]float64, row, col int, gx, gy float64, m *[3][2]float64) {
	k[row][col] += gx*m[0][0] + gy*m[2][0]
	k[row][col+1] += gx*m[0][1] + gy*m[2][1]
	k[row+1][col] += gy*m[1][0] + gx*m[2][0]
	k[row+1][col+1] += gy*m[1][1] + gx*m[2][1]
}

// addDrilling adds c (θ_z - ½(v,x - u,y))² at point p.
func (k *kernel) addDrilling(p int, c float64) {
	n := k.f.nodes
	value := k.f.points[p].value
	var plane [2 * maxNodes]float64
	for a := range n {
		plane[2*a], plane[2*a+1] = k.gy[p][a]/2, -k.gx[p][a]/2
	}
	for i := range 2 * n {
		by, row := c*plane[i], k.k[i][:i+1]
		for j := range row {
			row[j] += by * plane[j]
		}
	}
	for a := range n {
		by, drill, row := c*value[a], k.drill[a][:a+1], k.drillPlane[a][:2*n]
		for b := range drill {
			drill[b] += by * value[b]
		}
		for j := range row {
			row[j] += by * plane[j]
		}
	}
}

// condense removes the two bubble amplitudes, the last inner unknowns.
func (k *kernel) condense() {
	b := k.inner - 2
	p, q, r := k.k[b][b], k.k[b+1][b], k.k[b+1][b+1]
	det := p*r - q*q
	for j := range b {
		x, y := k.k[b][j], k.k[b+1][j]
		k.bubble[0][j], k.bubble[1][j] = (r*x-q*y)/det, (p*y-q*x)/det
	}
	for i := range b {
		x, y := k.k[b][i], k.k[b+1][i]
		row, first, second := k.k[i][:i+1], k.bubble[0][:i+1], k.bubble[1][:i+1]
		for j := range row {
			row[j] -= x*first[j] + y*second[j]
		}
	}
}

// place returns the inner index of component c (u, v, w, θ_x, θ_y) of node a of n, and its sign.
func place(n, a, c int) (int, float64) {
	switch c {
	case 0, 1:
		return 2*a + c, 1
	case 2:
		return 2*n + a, 1
	case 3: // β_y = -θ_x
		return 3*n + 2*a + 1, -1
	default: // β_x = θ_y
		return 3*n + 2*a, 1
	}
}

// slot is where an entry of the packed stiffness comes from.
type slot struct {
	from     source
	row, col int8
	sign     float64
}

type source int8

const (
	zero source = iota
	inner
	drill
	drillPlane
)

// slots lists, in the order of the interface, where the stiffness of an element of n nodes comes from.
func slots(n int) []slot {
	const dof = element.NodeUnknowns
	var all []slot
	for i := range dof * n {
		a, ci := i/dof, i%dof
		for j := range i + 1 {
			b, cj := j/dof, j%dof
			x := slot{sign: 1}
			switch {
			case ci == 5 && cj == 5:
				x.from, x.row, x.col = drill, int8(a), int8(b)
			case ci == 5 && cj < 2:
				x.from, x.row, x.col = drillPlane, int8(a), int8(2*b+cj)
			case cj == 5 && ci < 2:
				x.from, x.row, x.col = drillPlane, int8(b), int8(2*a+ci)
			case ci < 5 && cj < 5:
				row, si := place(n, a, ci)
				col, sj := place(n, b, cj)
				x = slot{inner, int8(max(row, col)), int8(min(row, col)), si * sj}
			}
			all = append(all, x)
		}
	}
	return all
}

// pack writes the stiffness in the order of the interface.
func (k *kernel) pack(out []float64) {
	for i := range k.f.slots {
		x := &k.f.slots[i]
		switch x.from {
		case inner:
			out[i] = x.sign * k.k[x.row][x.col]
		case drill:
			out[i] = k.drill[x.row][x.col]
		case drillPlane:
			out[i] = k.drillPlane[x.row][x.col]
		default:
			out[i] = 0
		}
	}
}

// mass writes the consistent mass of an element with coordinates xyz.
func (k *kernel) mass(xyz []float64, s *laminate.Section, out []float64) {
	const dof = element.NodeUnknowns
	n := k.f.nodes
	var nn [maxNodes][maxNodes]float64 // ∫ N_a N_b dA
	for i := range k.f.masses {
		pt := &k.f.masses[i]
		xr, xs, yr, ys := jacobian(&pt.at, xyz, n)
		w := pt.weight * (xr*ys - xs*yr)
		for a := range n {
			for b := range a + 1 {
				nn[a][b] += w * pt.value[a] * pt.value[b]
			}
		}
	}
	clear(out)
	for a := range n {
		for b := range n {
			m := nn[max(a, b)][min(a, b)]
			if b <= a {
				for c := range 3 {
					out[element.Packed(dof*a+c)+dof*b+c] = s.Mass * m
				}
				for c := 3; c < 5; c++ {
					out[element.Packed(dof*a+c)+dof*b+c] = s.Rotary * m
				}
			}
			if s.Coupling == 0 {
				continue
			}
			out[lower(dof*a, dof*b+4)] = s.Coupling * m    // u with β_x = θ_y
			out[lower(dof*a+1, dof*b+3)] = -s.Coupling * m // v with β_y = -θ_x
		}
	}
}

// lower is the place of entry (i, j) or (j, i) in a packed lower triangle.
func lower(i, j int) int { return element.Packed(max(i, j)) + min(i, j) }
