package identify

import (
	"errors"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// ErrDegenerate reports covariances from which no model follows: a channel that never changes, or a record too short.
var ErrDegenerate = errors.New("the covariances have no inverse: a channel never changes, a few spikes outweigh all else, or the record is too short")

// Weighting says how T is weighed before it is decomposed.
type Weighting uint8

const (
	// Canonical divides by the square roots of the covariances of future and past: weak modes count as much as strong.
	Canonical Weighting = iota
	// Unweighted takes T as it is, with every channel in its own unit.
	Unweighted
)

// Pole is one mode of one model. Only poles with positive imaginary part are kept.
type Pole struct {
	Lambda    complex128 // 1/s
	Frequency float64    // Hz
	Damping   float64    // ζ
	Shape     []complex128
	index     int // of the eigenvalue in its model
}

// Subspace is the decomposition of T, from which models of every order follow.
type Subspace struct {
	Rate     float64
	Channels int
	Rows     int // i
	// Singular are the singular values of the weighted T, falling.
	Singular []float64
	// right holds W2·V: T·right = O·√S.
	right *mat.Dense
	// observability is U·√S without weights, il × il.
	observability *mat.Dense
}

// Decompose builds T of i block rows from R_0 to R_{2i-1} (row-major l × l each) and decomposes it. It returns
// ErrDegenerate when the weights or the decomposition do not exist, and panics when there are too few lags.
func Decompose(r [][]float64, channels, rows int, rate float64, w Weighting) (*Subspace, error) {
	if rows < 2 || len(r) < 2*rows {
		panic("identify: subspace needs at least two block rows and covariances up to lag 2i-1")
	}
	t := toeplitz(r, channels, rows)
	s := &Subspace{Rate: rate, Channels: channels, Rows: rows}
	weighted := t
	var past *mat.TriDense
	if w == Canonical {
		var ok bool
		if past, ok = root(r, channels, rows); !ok {
			return nil, ErrDegenerate
		}
		// L⁻¹·T·L⁻ᵀ by two solves with triangles.
		var half, full mat.Dense
		if half.Solve(past, t) != nil {
			return nil, ErrDegenerate
		}
		if full.Solve(past, half.T()) != nil {
			return nil, ErrDegenerate
		}
		weighted = mat.DenseCopyOf(full.T())
	}
	var svd mat.SVD
	if !svd.Factorize(weighted, mat.SVDFull) {
		return nil, ErrDegenerate
	}
	s.Singular = svd.Values(nil)
	if !(s.Singular[0] > 0) {
		return nil, ErrDegenerate
	}
	var v mat.Dense
	svd.VTo(&v)
	if w == Canonical {
		var right mat.Dense
		if right.Solve(past.T(), &v) != nil {
			return nil, ErrDegenerate
		}
		v = right
	}
	s.right = &v
	s.observability = &mat.Dense{}
	s.observability.Mul(t, s.right)
	for j, v := range s.Singular {
		by := 0.0
		if v > 0 {
			by = 1 / math.Sqrt(v)
		}
		for i := range rows * channels {
			s.observability.Set(i, j, s.observability.At(i, j)*by)
		}
	}
	return s, nil
}

// rank counts the singular values of a canonically weighted T that noise alone does not reach: those above
// √(4·p/N·(1-p/N)) for T of p rows and N samples (K. W. Wachter, The limiting empirical measure of multiple discriminant
// ratios, Ann. Statist. 8, 1980).
func (s *Subspace) rank(counts [][]float64) int {
	n := 0.0
	for _, c := range counts {
		n += c[0]
	}
	p := float64(s.Rows*s.Channels) / n
	k := 0
	for k < len(s.Singular) && s.Singular[k] > 2*math.Sqrt(p*(1-p)) {
		k++
	}
	return k
}

// toeplitz fills block (a, b) with R_{i+a-b}.
func toeplitz(r [][]float64, l, rows int) *mat.Dense {
	t := mat.NewDense(rows*l, rows*l, nil)
	for a := range rows {
		for b := range rows {
			block := r[rows+a-b]
			for p := range l {
				for q := range l {
					t.Set(a*l+p, b*l+q, block[p*l+q])
				}
			}
		}
	}
	return t
}

// root returns the lower Cholesky factor of the covariance of (y[j], y[j+1], …, y[j+i-1]): that of the future, and that of the past,
// whose samples T takes in the same rising order.
func root(r [][]float64, l, rows int) (*mat.TriDense, bool) {
	n := rows * l
	f := mat.NewSymDense(n, nil)
	for a := range rows {
		for b := range rows {
			for x := range l {
				for y := range l {
					i, j := a*l+x, b*l+y
					if j < i {
						continue
					}
					// E y[j+a]·y[j+b]ᵀ = R_{a-b}, with R_{-k} = R_kᵀ.
					f.SetSym(i, j, r[b-a][y*l+x])
				}
			}
		}
	}
	// Covariances averaged over different numbers of pairs need not be positive definite, and a channel may hold hardly any noise: a
	// little on the diagonal mends both.
	for _, ridge := range []float64{0, 1e-9, 1e-7, 1e-5, 1e-3} {
		c := mat.NewSymDense(n, nil)
		c.CopySym(f)
		for i := range n {
			c.SetSym(i, i, f.At(i, i)*(1+ridge))
		}
		var chol mat.Cholesky
		if chol.Factorize(c) && chol.Cond() < 1e14 {
			var out mat.TriDense
			chol.LTo(&out)
			return &out, true
		}
	}
	return nil, false
}

// model is A of one order with its eigenvectors.
type model struct {
	order       int
	qr          mat.QR // of O without its last block row
	values      []complex128
	right, left *mat.CDense
	shapes      [][]complex128 // C·v of every eigenvector
}

// model returns the model of order n; ok is false where it does not exist.
func (s *Subspace) model(n int) (*model, bool) {
	if n > len(s.Singular) || n > (s.Rows-1)*s.Channels || s.Singular[n-1] <= 0 {
		return nil, false
	}
	m := &model{order: n, right: &mat.CDense{}, left: &mat.CDense{}}
	o, l := s.observability, s.Channels
	rows, _ := o.Dims()
	m.qr.Factorize(o.Slice(0, rows-l, 0, n))
	var a mat.Dense
	if m.qr.SolveTo(&a, false, o.Slice(l, rows, 0, n)) != nil {
		return nil, false // a condition beyond the digits: the order exceeds the rank
	}
	var eigen mat.Eigen
	if !eigen.Factorize(&a, mat.EigenBoth) {
		return nil, false
	}
	m.values = eigen.Values(nil)
	eigen.VectorsTo(m.right)
	eigen.LeftVectorsTo(m.left)
	for i := range m.values {
		shape := make([]complex128, l)
		for c := range shape {
			for j := range n {
				shape[c] += complex(o.At(c, j), 0) * m.right.At(j, i)
			}
		}
		m.shapes = append(m.shapes, shape)
	}
	return m, true
}

// inverse returns row k of the inverse of the matrix of eigenvectors, from the left one.
func (m *model) inverse(k int) []complex128 {
	row := make([]complex128, m.order)
	var product complex128
	for j := range row {
		row[j] = cmplx.Conj(m.left.At(j, k))
		product += row[j] * m.right.At(j, k)
	}
	for j := range row {
		row[j] /= product
	}
	return row
}

// Poles returns the modes of the model of order n with frequencies up to half the rate, by frequency; nil where the
// order exceeds the rank. Unstable poles are included, with negative damping.
func (s *Subspace) Poles(n int) []Pole {
	m, ok := s.model(n)
	if !ok {
		return nil
	}
	return s.poles(m)
}

func (s *Subspace) poles(m *model) []Pole {
	var out []Pole
	for i, mu := range m.values {
		if imag(mu) <= 0 || mu == 0 {
			continue
		}
		lambda := cmplx.Log(mu) * complex(s.Rate, 0)
		p := Pole{Lambda: lambda, Shape: m.shapes[i], index: i}
		p.Frequency, p.Damping = natural(lambda)
		out = append(out, p)
	}
	sortBy(out, func(p Pole) float64 { return p.Frequency })
	return out
}

// natural returns frequency in Hz and damping ratio of a pole in 1/s.
func natural(lambda complex128) (frequency, damping float64) {
	w := cmplx.Abs(lambda)
	return w / (2 * math.Pi), -real(lambda) / w
}
