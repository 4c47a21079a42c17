package shell

// formulation is what tells one triangle from another: shape functions at the points that matter,
// and the map from sampled covariant shear strains to assumed ones.
type formulation struct {
	nodes  int
	slots  []slot  // of the packed stiffness
	points []point // integration points of the stiffness
	masses []weighted
	// samples are the points where covariant shear strains are taken; each adds r·e_r + s·e_s to one
	// of the functionals. The assumed strains at an integration point are linear in the functionals.
	samples     []sample
	functionals int
}

type weighted struct {
	at
	weight float64
}

type point struct {
	weighted
	assumed [2][]float64 // e_r and e_s from the functionals
}

type sample struct {
	at
	into []contribution
}

type contribution struct {
	functional int
	r, s       float64
}

func newFormulation(nodes int, shape func(r, s float64) at) *formulation {
	f := &formulation{nodes: nodes, slots: slots(nodes)}
	for _, p := range degree4() {
		f.points = append(f.points, point{weighted: weighted{shape(p.r, p.s), p.weight}})
	}
	for _, p := range degree6() {
		f.masses = append(f.masses, weighted{shape(p.r, p.s), p.weight})
	}
	return f
}

// linear returns the three-node formulation.
func linear() *formulation {
	f := newFormulation(3, linearAt)
	// Tying points of the paper, offset d of D, E and F included.
	const d = 1e-4
	const (
		constR = iota
		constS
		slope
		count
	)
	f.functionals = count
	f.samples = []sample{
		{linearAt(1.0/6, 2.0/3), []contribution{{constS, -1.0 / 3, 2.0 / 3}}},                            // A
		{linearAt(2.0/3, 1.0/6), []contribution{{constR, 2.0 / 3, -1.0 / 3}}},                            // B
		{linearAt(1.0/6, 1.0/6), []contribution{{constR, 1.0 / 3, 1.0 / 3}, {constS, 1.0 / 3, 1.0 / 3}}}, // C
		{linearAt(1.0/3+d, 1.0/3-2*d), []contribution{{slope, -1, 0}}},                                   // D
		{linearAt(1.0/3-2*d, 1.0/3+d), []contribution{{slope, 0, 1}}},                                    // E
		{linearAt(1.0/3+d, 1.0/3+d), []contribution{{slope, 1, -1}}},                                     // F
	}
	for i, p := range degree4() {
		f.points[i].assumed = [2][]float64{{1, 0, p.s - 1.0/3}, {0, 1, 1.0/3 - p.r}}
	}
	return f
}

// quadratic returns the six-node formulation.
func quadratic() *formulation {
	f := newFormulation(6, quadraticAt)
	f.functionals = 8
	near, far := 0.5-sqrt12, 0.5+sqrt12
	side := func(functional int, r, s, along, across float64) {
		f.samples = append(f.samples, sample{quadraticAt(r, s), []contribution{{functional, along, across}}})
	}
	for i, g := range []float64{near, far} {
		side(i, g, 0, 1, 0)
		side(2+i, 1-g, g, -1, 1)
		side(4+i, 0, g, 0, 1)
	}
	for _, p := range degree4() {
		f.samples = append(f.samples, sample{quadraticAt(p.r, p.s), []contribution{{6, 2 * p.weight, 0}, {7, 0, 2 * p.weight}}})
	}

	// The functionals of the eight basis fields give a square matrix; its inverse takes functionals
	// to coefficients.
	fields := func(r, s float64) [2][8]float64 {
		return [2][8]float64{
			{1, r, s, 0, 0, 0, r * s, s * s},
			{0, 0, 0, 1, r, s, -r * r, -r * s},
		}
	}
	var m [8][8]float64
	row := func(functional int, r, s, along, across float64) {
		e := fields(r, s)
		for k := range 8 {
			m[functional][k] += along*e[0][k] + across*e[1][k]
		}
	}
	for i, g := range []float64{near, far} {
		row(i, g, 0, 1, 0)
		row(2+i, 1-g, g, -1, 1)
		row(4+i, 0, g, 0, 1)
	}
	for _, p := range degree4() {
		row(6, p.r, p.s, 2*p.weight, 0)
		row(7, p.r, p.s, 0, 2*p.weight)
	}
	inv := inverse8(m)
	for i, p := range degree4() {
		e := fields(p.r, p.s)
		for c := range 2 {
			f.points[i].assumed[c] = make([]float64, 8)
			for j := range 8 {
				for k := range 8 {
					f.points[i].assumed[c][j] += e[c][k] * inv[k][j]
				}
			}
		}
	}
	return f
}

// sqrt12 is 1/(2√3): the Gauss points of a side lie at ½ ± sqrt12.
const sqrt12 = 0.28867513459481288225

// inverse8 inverts by Gauss–Jordan elimination with row pivoting; the matrix is known to be regular.
func inverse8(m [8][8]float64) (inv [8][8]float64) {
	for i := range 8 {
		inv[i][i] = 1
	}
	for c := range 8 {
		p := c
		for r := c + 1; r < 8; r++ {
			if abs(m[r][c]) > abs(m[p][c]) {
				p = r
			}
		}
		m[c], m[p] = m[p], m[c]
		inv[c], inv[p] = inv[p], inv[c]
		d := 1 / m[c][c]
		for k := range 8 {
			m[c][k] *= d
			inv[c][k] *= d
		}
		for r := range 8 {
			if r == c {
				continue
			}
			x := m[r][c]
			for k := range 8 {
				m[r][k] -= x * m[c][k]
				inv[r][k] -= x * inv[c][k]
			}
		}
	}
	return inv
}

func abs(x float64) float64 { return max(x, -x) }
