package forced

import (
	"math"
	"math/cmplx"

	"hushframe/core/numeric/dense"
)

// spectral is the matrix at rest in its own vectors: with A = diag(ω_v²) + iL over
// the vectors that are not rigid, complex and symmetric, A x_k = d_k x_k and
// x_jᵀ x_k = δ_jk, so that (A − ω²)⁻¹ = Σ x_k x_kᵀ / (d_k − ω²). Rigid-body
// vectors are vectors of their own with d = 0. It answers many rows and loads at a frequency by
// one product of real matrices.
type spectral struct {
	value  []complex128
	vector [][]complex128 // over the vectors in use
}

// The vectors are used when A x_k is d_k x_k to a part in 1/alike of d_k, and they are
// orthonormal to that; near equal values may leave them poorer.
const alike = 1e-8

// spectral gives it for the matrix without laws, or nil where the vectors are not good enough.
func (s *System) spectral() *spectral {
	n := len(s.vectors)
	a := s.lawless(0, make([]complex128, n*n))
	out := &spectral{}
	var elastic []int
	for i, k := range s.square {
		if k > 0 {
			elastic = append(elastic, i)
			continue
		}
		x := make([]complex128, n)
		x[i] = 1
		out.value, out.vector = append(out.value, 0), append(out.vector, x)
	}
	m := len(elastic)
	sub := make([]complex128, m*m)
	for p, i := range elastic {
		for q, j := range elastic {
			sub[p*m+q] = a[i*n+j]
		}
	}
	h := reduce(append([]complex128(nil), sub...), m)
	values, ok := eigenvalues(append([]complex128(nil), h.h...), m)
	if !ok {
		return nil
	}
	work := make([]complex128, m*m)
	for _, d := range values {
		x := make([]complex128, m)
		for i := range x { // no direction is missing, none is favoured
			x[i] = cmplx.Rect(1, float64(i*i))
		}
		for range 2 {
			if !h.solveAt(d*(1+1e-13), work, x) || !finite(x) {
				return nil
			}
			norm := 0.0
			for _, z := range x {
				norm = math.Hypot(norm, cmplx.Abs(z))
			}
			for i := range x {
				x[i] /= complex(norm, 0)
			}
		}
		x = h.turnBack(x)
		root := cmplx.Sqrt(product(x, x))
		if cmplx.Abs(root) < 1e-3 { // no vector of its own
			return nil
		}
		whole := make([]complex128, n)
		for p, i := range elastic {
			x[p] /= root
			whole[i] = x[p]
		}
		for p := range m {
			off := product(sub[p*m:p*m+m], x) - d*x[p]
			if !(cmplx.Abs(off) <= alike*cmplx.Abs(d)) {
				return nil
			}
		}
		out.value, out.vector = append(out.value, d), append(out.vector, whole)
	}
	for j, x := range out.vector {
		for k, y := range out.vector[:j+1] {
			want := complex(0, 0)
			if j == k {
				want = 1
			}
			if !(cmplx.Abs(product(x, y)-want) <= alike) {
				return nil
			}
		}
	}
	return out
}

// along gives rows in the spectral vectors: x_kᵀ row.
func (p *spectral) along(rows [][]float64) [][]complex128 {
	out := make([][]complex128, len(rows))
	for i, row := range rows {
		out[i] = make([]complex128, len(p.vector))
		for k, x := range p.vector {
			out[i][k] = along(row, x)
		}
	}
	return out
}

// bilinear gives rowᵀ (A − ω²)⁻¹ load for all rows and loads at one frequency
// after another. It is not safe for concurrent use.
type bilinear struct {
	p         *spectral
	rows      [][]complex128
	loads     []float64 // per load: real parts, then imaginary ones
	count     int
	left, out []float64
}

func (p *spectral) bilinear(rows, loads [][]float64) *bilinear {
	n := len(p.value)
	b := &bilinear{p: p, rows: p.along(rows), count: len(loads), left: make([]float64, 4*len(rows)*n), out: make([]float64, 2*len(rows)*len(loads))}
	for _, x := range p.along(loads) {
		for _, z := range x {
			b.loads = append(b.loads, real(z))
		}
		for _, z := range x {
			b.loads = append(b.loads, imag(z))
		}
	}
	return b
}

// at fills to[row][load]; false when the matrix is singular.
func (b *bilinear) at(omega float64, to [][]complex128) bool {
	n, m := len(b.p.value), len(b.rows)
	w := make([]complex128, n)
	for k, d := range b.p.value {
		if z := d - complex(omega*omega, 0); z == 0 {
			return false
		} else {
			w[k] = -1 / z // the product below is taken away
		}
	}
	for i, row := range b.rows {
		re, im := b.left[2*n*i:2*n*(i+1)], b.left[2*n*(m+i):2*n*(m+i+1)]
		for k, z := range row {
			z *= w[k]
			re[k], re[n+k] = real(z), -imag(z)
			im[k], im[n+k] = imag(z), real(z)
		}
	}
	clear(b.out)
	dense.SubMulT(2*m, b.count, 2*n, b.left, 2*n, b.loads, 2*n, b.out, b.count)
	for i := range m {
		for j := range b.count {
			to[i][j] = complex(b.out[i*b.count+j], b.out[(m+i)*b.count+j])
		}
	}
	return true
}

// receptor gives rowᵀ B⁻¹ load for all rows and loads, B the dynamic stiffness at rest
// with the laws at the frequency: Woodbury's identity over the ways in which their
// groups stretch. It is not safe for concurrent use.
type receptor struct {
	plain       *bilinear
	rows, loads int
	laws        []*law // of each stretch
	all         [][]complex128
	left        []complex128
	sides       [][]complex128
}

// receptor makes one; p is the spectral form of s.
func (s *System) receptor(p *spectral, rows, loads [][]float64) *receptor {
	r := &receptor{rows: len(rows), loads: len(loads)}
	rows, loads = append([][]float64{}, rows...), append([][]float64{}, loads...)
	for i := range s.laws {
		for _, u := range s.laws[i].factors {
			rows, loads, r.laws = append(rows, u), append(loads, u), append(r.laws, &s.laws[i])
		}
	}
	r.plain = p.bilinear(rows, loads)
	for range rows {
		r.all = append(r.all, make([]complex128, len(loads)))
	}
	r.left = make([]complex128, len(r.laws)*len(r.laws))
	for range r.loads {
		r.sides = append(r.sides, make([]complex128, len(r.laws)))
	}
	return r
}

// at fills to[row][load]; false when the matrix is singular.
func (r *receptor) at(omega float64, to [][]complex128) bool {
	if !r.plain.at(omega, r.all) {
		return false
	}
	// (I + C P) X = C U B⁻¹ load with C the laws less one and P = U B⁻¹ Uᵀ, B without laws.
	m := len(r.laws)
	var last *law
	var c complex128
	for i, l := range r.laws {
		if l != last {
			last, c = l, l.law.At(omega/(2*math.Pi))-1
		}
		y := r.all[r.rows+i]
		for j := range m {
			r.left[i*m+j] = c * y[r.loads+j]
		}
		r.left[i*m+i]++
		for j, x := range r.sides {
			x[i] = c * y[j]
		}
	}
	if m > 0 && !factorSolve(r.left, m, r.sides...) {
		return false
	}
	for i := range r.rows {
		y := r.all[i]
		for j, x := range r.sides {
			h := y[j]
			for k, z := range y[r.loads:] {
				h -= z * x[k]
			}
			to[i][j] = h
		}
	}
	return true
}
