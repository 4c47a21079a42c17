package forced

import (
	"math"
	"slices"

	"hushframe/core/numeric/dense"
)

// receptor gives rowᵀ B⁻¹ load for all rows and loads at one frequency after another, B the dynamic stiffness at rest
// with the laws at the frequency: a product of real matrices by the spectral form, then Woodbury's identity over the
// ways in which the groups with laws stretch. Equal rows, and equal loads, are answered once. It is not safe for concurrent use.
type receptor struct {
	p            *spectral
	rowOf, colOf []int  // place of each row and load among the distinct ones
	rows, loads  int    // distinct ones
	laws         []*law // of each stretch
	// Distinct rows, then stretches, in the spectral vectors; loads, then stretches, as real parts and then imaginary ones.
	along    [][]complex128
	loaded   dense.Panels
	weighted []float64
	// out is the product: real parts of all rows, then imaginary ones, over loads and stretches.
	out      []float64
	middle   []complex128 // equations of the stretches with a side for each load
	answers  dense.Panels
	stretchy []float64
}

// distinct lists the different ones among rows, and where each row is in it.
func distinct(rows [][]float64) (different [][]float64, at []int) {
	for _, row := range rows {
		k := slices.IndexFunc(different, func(x []float64) bool { return slices.Equal(x, row) })
		if k < 0 {
			k = len(different)
			different = append(different, row)
		}
		at = append(at, k)
	}
	return different, at
}

// receptor makes one; p is the spectral form of s.
func (s *System) receptor(p *spectral, rows, loads [][]float64) *receptor {
	r := &receptor{p: p}
	rows, r.rowOf = distinct(rows)
	loads, r.colOf = distinct(loads)
	r.rows, r.loads = len(rows), len(loads)
	for i := range s.laws {
		for _, u := range s.laws[i].factors {
			rows, loads, r.laws = append(rows, u), append(loads, u), append(r.laws, &s.laws[i])
		}
	}
	n, m := len(p.value), len(r.laws)
	r.along = p.along(rows)
	r.loaded.Reset(len(loads), 2*n)
	for j, x := range p.along(loads) {
		to := r.loaded.Row(j)
		for k, z := range x {
			to[dense.Columns*k], to[dense.Columns*(n+k)] = real(z), imag(z)
		}
	}
	r.weighted, r.out = make([]float64, 4*len(rows)*n), make([]float64, 2*len(rows)*len(loads))
	r.middle = make([]complex128, m*(m+r.loads))
	r.answers.Reset(r.loads, 2*m)
	r.stretchy = make([]float64, 4*r.rows*m)
	return r
}

// at fills to[row][load]; false when the matrix is singular.
func (r *receptor) at(omega float64, to [][]complex128) bool {
	if !r.lawless(omega) || !r.stretch(omega) {
		return false
	}
	columns, below := r.loads+len(r.laws), len(r.along)*(r.loads+len(r.laws))
	for i, row := range r.rowOf {
		re := r.out[row*columns : row*columns+r.loads]
		im := r.out[below+row*columns : below+row*columns+r.loads]
		for j, c := range r.colOf {
			to[i][j] = complex(re[c], im[c])
		}
	}
	return true
}

// lawless fills out with the laws at their reference: Σ (xᵀrow)(xᵀload) / (d − ω²).
func (r *receptor) lawless(omega float64) bool {
	n, m := len(r.p.value), len(r.along)
	for k, d := range r.p.value {
		z := d - complex(omega*omega, 0)
		if z == 0 {
			return false
		}
		w := -1 / z // the product below is taken away
		for i, row := range r.along {
			z := row[k] * w
			re, im := r.weighted[2*n*i:2*n*(i+1)], r.weighted[2*n*(m+i):2*n*(m+i+1)]
			re[k], re[n+k] = real(z), -imag(z)
			im[k], im[n+k] = imag(z), real(z)
		}
	}
	clear(r.out)
	dense.SubMul(2*m, r.weighted, 2*n, &r.loaded, r.out, r.loads+len(r.laws))
	return true
}

// stretch brings the laws in. (I + C P) X = C U B⁻¹ load with C the laws less one and P = U B⁻¹ Uᵀ, B without
// laws; then oᵀB⁻¹Uᵀ X is taken away from the answers.
func (r *receptor) stretch(omega float64) bool {
	m, columns, below := len(r.laws), r.loads+len(r.laws), len(r.along)*(r.loads+len(r.laws))
	if m == 0 {
		return true
	}
	var last *law
	var c complex128
	for i, l := range r.laws {
		if l != last {
			last, c = l, l.law.At(omega/(2*math.Pi))-1
		}
		at := (r.rows + i) * columns
		re, im := r.out[at:at+columns], r.out[below+at:below+at+columns]
		row := r.middle[i*columns : (i+1)*columns]
		for j := range m {
			row[j] = c * complex(re[r.loads+j], im[r.loads+j])
		}
		row[i]++
		for j := range r.loads {
			row[m+j] = c * complex(re[j], im[j])
		}
	}
	if !eliminate(r.middle, m, columns) {
		return false
	}
	for j := range r.loads {
		to := r.answers.Row(j)
		for i := range m {
			z := r.middle[i*columns+m+j]
			to[dense.Columns*i], to[dense.Columns*(m+i)] = real(z), imag(z)
		}
	}
	for i := range r.rows {
		re := r.out[i*columns+r.loads : (i+1)*columns]
		im := r.out[below+i*columns+r.loads : below+(i+1)*columns]
		a, b := r.stretchy[2*m*i:2*m*(i+1)], r.stretchy[2*m*(r.rows+i):2*m*(r.rows+i+1)]
		for j := range m {
			a[j], a[m+j] = re[j], -im[j]
			b[j], b[m+j] = im[j], re[j]
		}
	}
	dense.SubMul(r.rows, r.stretchy, 2*m, &r.answers, r.out, columns)
	dense.SubMul(r.rows, r.stretchy[2*m*r.rows:], 2*m, &r.answers, r.out[below:], columns)
	return true
}
