package forced

import (
	"fmt"
	"math"
	"math/cmplx"
	"sort"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/modal"
)

// Pole is a natural motion e^{iλt} of the damped frame with its rotors
// spinning, λ = 2π Frequency (±√(1−ζ²) + iζ).
type Pole struct {
	Frequency float64 // |λ|/2π, Hz
	Damping   float64 // ζ, the damping ratio
	// Shape gives modal coordinates in the order of Vectors, of unit length;
	// their common phase is free.
	Shape []complex128
}

// Core is the system in fewer coordinates: all rigid and elastic vectors, and
// of the residual ones those combinations that answer to the gyroscopic moments
// of the rotors. Its poles are those of the system but for what inertia of
// the modes left out adds to that answer.
type Core struct {
	square []float64
	soft   []complex128 // what the stiffness has beyond square: losses, and laws taken at one frequency
	rate   []float64
	tilt   [][]float64
	// back[c] gives coordinate c in terms of the vectors in use.
	back     [][]float64
	momentum []float64
	// laws are over the coordinates, and soft holds them as they are at lawsAt, Hz; see CoreAt.
	laws   []law
	lawsAt float64
}

// Core condenses the system. It fails when the small eigenproblem does. It
// panics where stiffness depends on frequency; see CoreAt.
func (s *System) Core() (*Core, error) {
	if s.Varies() {
		panic("forced: poles of a system whose stiffness depends on frequency")
	}
	n := len(s.vectors)
	c := &Core{momentum: s.momentum}
	var left []int
	for i, v := range s.vectors {
		if s.basis.Kinds[v] == modal.Residual {
			left = append(left, i)
			continue
		}
		row := make([]float64, n)
		row[i] = 1
		c.back, c.square = append(c.back, row), append(c.square, s.square[i])
	}
	kept, err := s.answers(left)
	if err != nil {
		return nil, err
	}
	for _, row := range kept {
		k := 0.0
		for _, i := range left {
			k += s.square[i] * row[i] * row[i]
		}
		c.back, c.square = append(c.back, row), append(c.square, k)
	}
	for _, x := range c.project(s.loss, n) {
		c.soft = append(c.soft, complex(0, x))
	}
	if s.shift != nil {
		for i, x := range c.project(s.shift, n) {
			c.soft[i] += complex(x, 0)
		}
	}
	if s.rate != nil {
		c.rate = c.project(s.rate, n)
	}
	for _, row := range s.tilt {
		t := make([]float64, len(c.back))
		for a, b := range c.back {
			t[a] = inner(row, b)
		}
		c.tilt = append(c.tilt, t)
	}
	return c, nil
}

// answers gives orthonormal combinations of the residual vectors that span
// their static answer to a moment about every tilt axis, free of coupling in
// stiffness.
func (s *System) answers(left []int) ([][]float64, error) {
	n := len(s.vectors)
	var span [][]float64
	for _, t := range s.tilt {
		w := make([]float64, n)
		for _, i := range left {
			w[i] = t[i] / s.square[i]
		}
		whole := math.Sqrt(inner(w, w))
		for range 2 {
			for _, u := range span {
				f := inner(u, w)
				for i := range w {
					w[i] -= f * u[i]
				}
			}
		}
		if norm := math.Sqrt(inner(w, w)); norm > 1e-8*whole {
			for i := range w {
				w[i] /= norm
			}
			span = append(span, w)
		}
	}
	m := len(span)
	if m == 0 {
		return nil, nil
	}
	k := mat.NewSymDense(m, nil)
	for a := range m {
		for b := a; b < m; b++ {
			sum := 0.0
			for _, i := range left {
				sum += s.square[i] * span[a][i] * span[b][i]
			}
			k.SetSym(a, b, sum)
		}
	}
	var eig mat.EigenSym
	if !eig.Factorize(k, true) {
		return nil, fmt.Errorf("the residual vectors have no principal stiffnesses")
	}
	var q mat.Dense
	eig.VectorsTo(&q)
	out := make([][]float64, m)
	for a := range m {
		out[a] = make([]float64, n)
		for b := range m {
			for i, x := range span[b] {
				out[a][i] += q.At(b, a) * x
			}
		}
	}
	return out, nil
}

// project gives back · a · backᵀ for an n×n matrix.
func (c *Core) project(a []float64, n int) []float64 {
	m := len(c.back)
	half := make([]float64, m*n) // back · a
	for p, row := range c.back {
		for i, x := range row {
			if x == 0 {
				continue
			}
			for j := range n {
				half[p*n+j] += x * a[i*n+j]
			}
		}
	}
	out := make([]float64, m*m)
	for p := range m {
		for q, row := range c.back {
			out[p*m+q] = inner(half[p*n:p*n+n], row)
		}
	}
	return out
}

func inner(x, y []float64) float64 {
	sum := 0.0
	for i := range x {
		sum += x[i] * y[i]
	}
	return sum
}

// Poles gives the natural motions at the momenta given, one per gyroscopic
// coupling, with a frequency between above and below in Hz, ascending. Motion at 0 Hz and
// overcritically damped motion are not listed.
//
// The equation [Λ + S + iωC − ω²] q = 0, S the losses and what laws change, is solved as a first-order one for (√Λ q,
// q′); hysteretic damping stands for positive frequencies only, and so only
// their half of the eigenvalues counts. It fails when the iteration does not settle.
func (c *Core) Poles(momenta []float64, above, below float64) ([]Pole, error) {
	omega, err := c.natural(momenta, above, below)
	if err != nil {
		return nil, err
	}
	spin := c.spin(momenta)
	return c.motions(omega, func(complex128) []float64 { return spin }), nil
}

// natural gives the values of ω of Poles, without their shapes.
func (c *Core) natural(momenta []float64, above, below float64) ([]complex128, error) {
	m := len(c.square)
	at := make([]int, m) // place of √Λ q in the state, -1 for rigid vectors
	states := 0
	for i, k := range c.square {
		at[i] = -1
		if k > 0 {
			at[i] = states
			states++
		}
	}
	n := states + m
	a := make([]complex128, n*n)
	spin := c.spin(momenta)
	for i := range m {
		row := a[(states+i)*n : (states+i+1)*n]
		if at[i] >= 0 {
			root := math.Sqrt(c.square[i])
			a[at[i]*n+states+i] = complex(root, 0)
			row[at[i]] = complex(-root, 0)
		}
		for j := range m {
			row[states+j] = complex(-spin[i*m+j], 0)
			if at[j] >= 0 {
				row[at[j]] -= c.soft[i*m+j] / complex(math.Sqrt(c.square[j]), 0)
			}
		}
	}
	values, ok := eigenvalues(a, n)
	if !ok {
		return nil, fmt.Errorf("the natural motions of the spinning frame do not settle")
	}
	var omega []complex128
	for _, z := range values {
		omega = append(omega, z/1i)
	}
	return inRange(omega, above, below), nil
}

// inRange gives the values of ω that are in range and undercritically damped, ascending.
func inRange(omega []complex128, above, below float64) []complex128 {
	var kept []complex128
	for _, w := range omega {
		if f := cmplx.Abs(w) / (2 * math.Pi); real(w) > math.Abs(imag(w)) && f > above && f <= below {
			kept = append(kept, w)
		}
	}
	sort.Slice(kept, func(i, j int) bool { return cmplx.Abs(kept[i]) < cmplx.Abs(kept[j]) })
	return kept
}

// motions makes poles of values of ω in ascending order; spin gives the coefficient of velocity at each.
func (c *Core) motions(kept []complex128, spin func(complex128) []float64) []Pole {
	var out []Pole
	var shapes [][]complex128 // of the values equal to the present one
	for k, w := range kept {
		if k > 0 && cmplx.Abs(w-kept[k-1]) > 1e-8*cmplx.Abs(w) {
			shapes = shapes[:0]
		}
		x := c.shape(w, spin(w), shapes)
		shapes = append(shapes, x)
		out = append(out, Pole{Frequency: cmplx.Abs(w) / (2 * math.Pi), Damping: imag(w) / cmplx.Abs(w), Shape: c.expand(x)})
	}
	return out
}

// spin gives the coefficient of velocity, m×m.
func (c *Core) spin(momenta []float64) []float64 {
	if len(momenta) != len(c.momentum) {
		panic(fmt.Sprintf("forced: %d angular momenta for %d rotors", len(momenta), len(c.momentum)))
	}
	m := len(c.square)
	g := make([]float64, m*m)
	copy(g, c.rate)
	for r, h := range momenta {
		first, second := c.tilt[2*r], c.tilt[2*r+1]
		for i := range m {
			for j := range m {
				g[i*m+j] += h * (first[i]*second[j] - second[i]*first[j])
			}
		}
	}
	return g
}

// shape gives the null vector of the dynamic stiffness at a pole by inverse
// iteration, square to other shapes of the same pole.
func (c *Core) shape(omega complex128, spin []float64, others [][]complex128) []complex128 {
	m := len(c.square)
	x := make([]complex128, m)
	for i := range x { // no direction is missing, none is favoured
		x[i] = cmplx.Rect(1, float64(i*i))
	}
	// Off the pole by little, so that the matrix has an inverse.
	omega *= 1 + 1e-10
	a := make([]complex128, m*m)
	for range 2 {
		for i := range m {
			for j := range m {
				a[i*m+j] = c.soft[i*m+j] + 1i*omega*complex(spin[i*m+j], 0)
			}
			a[i*m+i] += complex(c.square[i], 0) - omega*omega
		}
		if !factorSolve(a, m, x) || !finite(x) {
			break
		}
		for _, y := range others {
			var f complex128
			for i := range x {
				f += cmplx.Conj(y[i]) * x[i]
			}
			for i := range x {
				x[i] -= f * y[i]
			}
		}
		norm := 0.0
		for _, z := range x {
			norm = math.Hypot(norm, cmplx.Abs(z))
		}
		for i := range x {
			x[i] /= complex(norm, 0)
		}
	}
	return x
}

// expand gives modal coordinates in those of the system.
func (c *Core) expand(x []complex128) []complex128 {
	q := make([]complex128, len(c.back[0]))
	for i, row := range c.back {
		for v, y := range row {
			if y != 0 {
				q[v] += x[i] * complex(y, 0)
			}
		}
	}
	return q
}

// Synchronous gives the poles at which the rotors turn with the motion: each
// coupling has the momentum ratio times the pole's own angular frequency (ratio
// is Jp times its speed over ω, kg·m², signed by spin). With it the equation is
// one in ω²: [Λ + S] q = ω² [I − i Σ ratio (a bᵀ − b aᵀ)] q. Velocity terms other
// than gyroscopic ones must be absent.
func (c *Core) Synchronous(ratio []float64, above, below float64) ([]Pole, error) {
	if c.rate != nil {
		panic("forced: synchronous poles of a system with dampers")
	}
	m := len(c.square)
	spin := c.spin(ratio)
	mass := make([]complex128, m*m)
	sides := make([][]complex128, m) // columns of Λ + S
	for j := range m {
		sides[j] = make([]complex128, m)
		for i := range m {
			sides[j][i] = c.soft[i*m+j]
			mass[i*m+j] = complex(0, -spin[i*m+j])
		}
		sides[j][j] += complex(c.square[j], 0)
		mass[j*m+j]++
	}
	if !factorSolve(mass, m, sides...) {
		return nil, fmt.Errorf("the rotors' inertia cancels that of the frame")
	}
	a := make([]complex128, m*m)
	for j, x := range sides {
		for i := range m {
			a[i*m+j] = x[i]
		}
	}
	values, ok := eigenvalues(a, m)
	if !ok {
		return nil, fmt.Errorf("the critical speeds do not settle")
	}
	omega := make([]complex128, len(values))
	for k, z := range values {
		omega[k] = cmplx.Sqrt(z) // real part not negative
	}
	return c.motions(inRange(omega, above, below), func(w complex128) []float64 {
		momenta := make([]float64, len(ratio))
		for r, x := range ratio {
			momenta[r] = x * real(w)
		}
		return c.spin(momenta)
	}), nil
}
