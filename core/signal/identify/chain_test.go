package identify

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/known"
	"hushframe/core/signal/internal/noise"
)

// chain is the three-mass chain of the rows F-OMA-* of testdata/known/F_signals.json.
type chain struct {
	Masses  []float64          `json:"masses_kg"`
	Springs map[string]float64 `json:"springs_N_per_m"`
	Damping []float64          `json:"modal_damping"`
	Rate    float64            `json:"fs_Hz"`
	Samples int
	Rows    int `json:"block_rows"`
	Segment int
	Overlap int
}

func readChain(t testing.TB, id string) (chain, known.Row) {
	t.Helper()
	row := known.One(t, "F_signals.json", id)
	var c chain
	row.Decode(t, &c)
	return c, row
}

// modes returns natural frequencies in rad/s and mass-normalised shapes by column.
func (c chain) modes() ([]float64, *mat.Dense) {
	k1, k2, k3 := c.Springs["ground_1"], c.Springs["one_two"], c.Springs["two_three"]
	k := []float64{k1 + k2, -k2, 0, -k2, k2 + k3, -k3, 0, -k3, k3}
	sym := mat.NewSymDense(3, nil)
	for i := range 3 {
		for j := i; j < 3; j++ {
			sym.SetSym(i, j, k[3*i+j]/math.Sqrt(c.Masses[i]*c.Masses[j]))
		}
	}
	var e mat.EigenSym
	e.Factorize(sym, true)
	w := e.Values(nil)
	var phi mat.Dense
	e.VectorsTo(&phi)
	for i := range 3 {
		w[i] = math.Sqrt(w[i])
		for j := range 3 {
			phi.Set(i, j, phi.At(i, j)/math.Sqrt(c.Masses[i]))
		}
	}
	return w, &phi
}

// discrete returns the state matrices for forces held over a step: state x1 x2 x3 v1 v2 v3.
func (c chain) discrete() (ad, bd *mat.Dense) {
	w, phi := c.modes()
	// Modal velocity feedback phi·diag(2ζω)·phiᵀ·M and stiffness phi·diag(ω²)·phiᵀ·M are M⁻¹C and M⁻¹K.
	full := mat.NewDense(9, 9, nil)
	for i := range 3 {
		full.Set(i, 3+i, 1/c.Rate)
		full.Set(3+i, 6+i, 1/c.Masses[i]/c.Rate)
		for j := range 3 {
			var stiff, damp float64
			for m := range 3 {
				p := phi.At(i, m) * phi.At(j, m) * c.Masses[j]
				stiff += p * w[m] * w[m]
				damp += p * 2 * c.Damping[m] * w[m]
			}
			full.Set(3+i, j, -stiff/c.Rate)
			full.Set(3+i, 3+j, -damp/c.Rate)
		}
	}
	var e mat.Dense
	e.Exp(full)
	return mat.DenseCopyOf(e.Slice(0, 6, 0, 6)), mat.DenseCopyOf(e.Slice(0, 6, 6, 9))
}

// simulate returns the three velocities under the noise of the rows.
func (c chain) simulate() [][]float64 { return c.shaken(101, 202, 303) }

// shaken returns the three velocities under noise of any seeds.
func (c chain) shaken(sources ...noise.Source) [][]float64 {
	ad, bd := c.discrete()
	y := make([][]float64, 3)
	x, next := make([]float64, 6), make([]float64, 6)
	for range c.Samples {
		var f [3]float64
		for k := range sources {
			f[k] = sources[k].Gauss()
			y[k] = append(y[k], x[3+k])
		}
		for i := range next {
			next[i] = 0
			for j, v := range x {
				next[i] += ad.At(i, j) * v
			}
			for j, v := range f {
				next[i] += bd.At(i, j) * v
			}
		}
		x, next = next, x
	}
	return y
}

// best returns the least errors that the record of the rows allows within a band in Hz: velocities H = Σ φ·φᵀ·s/(s²+2ζω·s+ω²) under unit forces held over
// a step, whose density is |sin(πf/rate)/(πf/rate)|²/rate; the mild slope of that over a mode is left out of the residues.
func (c chain) best(t testing.TB, from, to float64) []Best {
	t.Helper()
	w, phi := c.modes()
	transfer := func(s complex128) [9]complex128 {
		var h [9]complex128
		for m := range 3 {
			by := s / (s*s + complex(2*c.Damping[m]*w[m], 0)*s + complex(w[m]*w[m], 0))
			for a := range 3 {
				for b := range 3 {
					h[3*a+b] += by * complex(phi.At(a, m)*phi.At(b, m), 0)
				}
			}
		}
		return h
	}
	force := func(f float64) complex128 {
		x := math.Pi * f / c.Rate
		return complex(math.Pow(math.Sin(x)/x, 2)/c.Rate, 0)
	}
	density := func(f float64) []complex128 {
		h := transfer(complex(0, 2*math.Pi*f))
		out := make([]complex128, 9)
		for a := range 3 {
			for b := range 3 {
				for q := range 3 {
					out[3*a+b] += h[3*a+q] * cmplx.Conj(h[3*b+q]) * force(f)
				}
			}
		}
		return out
	}
	var modes []Residue
	for m := range 3 {
		lambda := complex(-c.Damping[m]*w[m], w[m]*math.Sqrt(1-c.Damping[m]*c.Damping[m]))
		r := Residue{Lambda: lambda, Shape: make([]complex128, 3), Gain: make([]complex128, 3)}
		back := transfer(-lambda)
		for a := range 3 {
			r.Shape[a] = complex(phi.At(a, m), 0)
			for b := range 3 {
				r.Gain[a] += back[3*a+b] * complex(phi.At(b, m), 0) * force(w[m]/(2*math.Pi)) * lambda / (lambda - cmplx.Conj(lambda))
			}
		}
		modes = append(modes, r)
	}
	best, err := Bound(density, modes, from, to, 0.05, float64(c.Samples)/c.Rate, 2)
	if err != nil {
		t.Fatal(err)
	}
	return best
}

// Rows F-OMA-TRUE, F-OMA-DISCRETE and F-OMA-SIM: the test's own chain is that of the rows.
func TestChain(t *testing.T) {
	c, row := readChain(t, "F-OMA-TRUE")
	w, phi := c.modes()
	got := []float64{w[0] / (2 * math.Pi), w[1] / (2 * math.Pi), w[2] / (2 * math.Pi)}
	for m := range 3 {
		largest := 0.0
		for i := range 3 {
			if v := phi.At(i, m); math.Abs(v) > math.Abs(largest) {
				largest = v
			}
		}
		for i := range 3 {
			got = append(got, phi.At(i, m)/largest)
		}
	}
	row.Check(t, 1, got...)

	c, row = readChain(t, "F-OMA-DISCRETE")
	ad, bd := c.discrete()
	row.Check(t, 1, ad.At(0, 0), ad.At(0, 3), ad.At(3, 0), ad.At(5, 5), bd.At(0, 0), bd.At(3, 0), bd.At(5, 1))

	c, row = readChain(t, "F-OMA-SIM")
	y := c.simulate()
	square := func(v []float64) float64 {
		sum := 0.0
		for _, x := range v {
			sum += x * x
		}
		return sum / float64(len(v))
	}
	row.Check(t, 1, y[0][1], y[1][1], y[2][1], y[0][1000], y[2][1000], y[1][len(y[1])-1], square(y[0]), square(y[1]), square(y[2]))

	// Row F-OMA-COV: P = Ad·P·Adᵀ + Bd·Bdᵀ by its series.
	_, row = readChain(t, "F-OMA-COV")
	var p, q mat.Dense
	q.Mul(bd, bd.T())
	p.CloneFrom(&q)
	a := mat.DenseCopyOf(ad)
	for range 40 { // doubling: P ← P + A·P·Aᵀ, A ← A²
		var left, both, square mat.Dense
		left.Mul(a, &p)
		both.Mul(&left, a.T())
		p.Add(&p, &both)
		square.Mul(a, a)
		a.CloneFrom(&square)
	}
	row.Check(t, 1, p.At(3, 3), p.At(4, 4), p.At(5, 5))
}

// Row F-OMA-SSI: the unweighted algorithm of the row, and with it the covariances and the subspace.
func TestSubspaceReference(t *testing.T) {
	c, row := readChain(t, "F-OMA-SSI")
	record := Record{Rate: c.Rate, Runs: [][][]float64{c.simulate()}}
	cov := Covariances(record, 2*c.Rows-1, 1, 1)
	s, err := Decompose(cov.Mean(-1), 3, c.Rows, c.Rate, Unweighted)
	if err != nil {
		t.Fatal(err)
	}
	var f, z []float64
	for _, p := range s.Poles(6) {
		f, z = append(f, p.Frequency), append(z, p.Damping)
	}
	if len(f) != 3 {
		t.Fatalf("frequencies %v", f)
	}
	row.Check(t, 1, append(f, z...)...)
	// The sums do not depend on groups or threads beyond rounding.
	for k, r := range Covariances(record, 2*c.Rows-1, 7, 2).Mean(-1) {
		for i, v := range cov.Mean(-1)[k] {
			if math.Abs(v-r[i]) > 1e-12*math.Abs(cov.Mean(-1)[0][0]) {
				t.Fatalf("lag %d: %g in groups, %g whole", k, r[i], v)
			}
		}
	}
}

// Row F-OMA-FREEDECAY. With two groups the pairs of the first are as many at every lag up to half the record, so that its
// sums are C·A^k·P·Cᵀ exactly.
func TestFreeDecay(t *testing.T) {
	c, row := readChain(t, "F-OMA-FREEDECAY")
	ad, _ := c.discrete()
	x := mat.NewVecDense(6, []float64{0, 0, 0.001, 0, 0, 0})
	y := make([][]float64, 3)
	for range 400 {
		for k := range y {
			y[k] = append(y[k], x.AtVec(k))
		}
		var next mat.VecDense
		next.MulVec(ad, x)
		x = &next
	}
	cov := Covariances(Record{Rate: c.Rate, Runs: [][][]float64{y}}, 79, 2, 1)
	s, err := Decompose(cov.Mean(1), 3, 40, c.Rate, Unweighted)
	if err != nil {
		t.Fatal(err)
	}
	var f, z []float64
	for _, p := range s.Poles(6) {
		f, z = append(f, p.Frequency), append(z, p.Damping)
	}
	row.Check(t, 1, append(f, z...)...)
}
