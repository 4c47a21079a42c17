package identify

import (
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// One mode seen by one channel as y = (s+c)/(s²+a·s+b)·w with white w. The residuals of prediction w = (s²+a·s+b)/(s+c)·y have the derivatives
// s/A·w, 1/A·w and -1/C·w by a, b and c, so that the information of T seconds is T times their covariance (K. J. Åström, Maximum likelihood
// and prediction error methods, Automatica 16, 1980): ½/a, 0, -c/A(c); ½/(ab), -1/A(c); ½/c, where A(c) = c²+ac+b. The bound must meet the inverse
// of this, for a narrow mode and for a broad one.
func TestBoundOfOneMode(t *testing.T) {
	for _, zeta := range []float64{0.02, 0.15} {
		const f0, seconds = 10.0, 50.0
		w0 := 2 * math.Pi * f0
		a, b, c := 2*zeta*w0, w0*w0, 0.7*w0
		ac := c*c + a*c + b
		information := mat.NewSymDense(3, []float64{1 / (2 * a), 0, -c / ac, 0, 1 / (2 * a * b), -1 / ac, -c / ac, -1 / ac, 1 / (2 * c)})
		var chol mat.Cholesky
		var covariance mat.SymDense
		if !chol.Factorize(information) || chol.InverseTo(&covariance) != nil {
			t.Fatal("no inverse")
		}
		variance := func(byA, byB float64) float64 {
			return (byA*byA*covariance.At(0, 0) + 2*byA*byB*covariance.At(0, 1) + byB*byB*covariance.At(1, 1)) / seconds
		}
		// f = √b/2π; ζ = a/(2√b).
		wantF, wantZ := math.Sqrt(variance(0, 1/(4*math.Pi*w0))), math.Sqrt(variance(1/(2*w0), -a/(4*b*w0)))

		lambda := complex(-zeta*w0, w0*math.Sqrt(1-zeta*zeta))
		transfer := func(s complex128) complex128 {
			return (s + complex(c, 0)) / ((s - lambda) * (s - cmplx.Conj(lambda)))
		}
		// The residue of H(s)·H(-s) at λ.
		gain := (lambda + complex(c, 0)) / (lambda - cmplx.Conj(lambda)) * transfer(-lambda)
		density := func(f float64) []complex128 {
			h := transfer(complex(0, 2*math.Pi*f))
			return []complex128{complex(real(h)*real(h)+imag(h)*imag(h), 0)}
		}
		got, err := Bound(density, []Residue{{lambda, []complex128{2}, []complex128{gain / 2}}}, 0, 1000, 0.01, seconds, 2)
		if err != nil {
			t.Fatal(err)
		}
		if r := got[0].Frequency / wantF; math.Abs(r-1) > 0.03 {
			t.Errorf("ζ = %g: frequency to %.6g Hz, closed form %.6g", zeta, got[0].Frequency, wantF)
		}
		if r := got[0].Damping / wantZ; math.Abs(r-1) > 0.03 {
			t.Errorf("ζ = %g: damping to %.6g, closed form %.6g", zeta, got[0].Damping, wantZ)
		}
	}
	if _, err := Bound(func(float64) []complex128 { return []complex128{0} }, []Residue{{-1 + 20i, []complex128{1}, []complex128{1}}}, 1, 5, 0.1, 1, 1); !errors.Is(err, ErrNoInformation) {
		t.Errorf("a channel without signal: %v", err)
	}
}

// A second mode that is unknown as well makes the first less known, the more the nearer it lies; four times the time halves every error; turning the
// channels changes nothing.
func TestBoundOfTwoModes(t *testing.T) {
	with := func(second, seconds float64, mix bool) []Best {
		t.Helper()
		turn := func(v ...complex128) []complex128 {
			if mix {
				return []complex128{0.6*v[0] - 0.8*v[1], 0.8*v[0] + 0.6*v[1]}
			}
			return v
		}
		modes := []Residue{{complex(-3, 100), turn(1, 0.3), turn(100, 20)}, {complex(-4, second), turn(1, 0.5), turn(90, 40)}}
		density := func(f float64) []complex128 {
			s := complex(0, 2*math.Pi*f)
			out := []complex128{1, 0, 0, 1}
			for _, m := range modes {
				for a := range 2 {
					for b := range 2 {
						v := func(a, b int) complex128 {
							p := m.Shape[a] * m.Gain[b]
							return p/(s-m.Lambda) + cmplx.Conj(p)/(s-cmplx.Conj(m.Lambda))
						}
						out[2*a+b] += v(a, b) + cmplx.Conj(v(b, a))
					}
				}
			}
			return out
		}
		got, err := Bound(density, modes, 1, 100, 0.02, seconds, 2)
		if err != nil {
			t.Fatal(err)
		}
		return got
	}
	near, far, long, turned := with(106, 30, false), with(180, 30, false), with(106, 120, false), with(106, 30, true)
	if !(near[0].Frequency > 1.2*far[0].Frequency && near[0].Damping > 1.2*far[0].Damping) {
		t.Errorf("near %+v, far %+v", near[0], far[0])
	}
	for m := range near {
		if math.Abs(long[m].Frequency/near[m].Frequency-0.5) > 1e-6 || math.Abs(turned[m].Damping/near[m].Damping-1) > 1e-3 {
			t.Errorf("mode %d: %+v, in four times the time %+v, turned %+v", m, near[m], long[m], turned[m])
		}
	}
}
