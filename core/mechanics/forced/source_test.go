package forced

import (
	"math"
	"math/cmplx"
	"testing"
)

// In step, rotors act as one source: the density is that of the sum of their
// transfer functions. Between, it is linear in the coefficient, and bands hold.
func TestCorrelatedRotors(t *testing.T) {
	b := frame(12, 2, 6)
	s := build(t, b, Options{Gyroscopic: spinners(b, 0.2, -0.3)})
	grid := Grid(60, 900, 2, s.Resonances(1))
	tr, err := s.Transfer(t.Context(), grid, 2)
	if err != nil {
		t.Fatal(err)
	}
	source := Broadband{Force: 1e-6, Moment: 1e-9}
	free := tr.Broadband(source)
	with := func(gamma float64) (*Spectrum, Broadband) {
		x := source
		x.Together = []Correlation{{0, 400, gamma}}
		return tr.Broadband(x), x
	}
	step, inStep := with(1)
	half, _ := with(0.5)
	against, _ := with(-1) // two rotors: the least coefficient
	for axis := range 3 {
		for k, f := range grid {
			if f >= 400 {
				if step.Density[axis][k] != free.Density[axis][k] {
					t.Fatalf("correlated at %g Hz, beyond the band", f)
				}
				continue
			}
			want := 0.0
			for c := range 6 {
				sum := tr.Rate[axis][c][k] + tr.Rate[axis][6+c][k]
				want += source.density(Input{Component: c}) * sq(cmplx.Abs(sum))
			}
			one, none, less := step.Density[axis][k], free.Density[axis][k], against.Density[axis][k]
			if math.Abs(one-want) > 1e-9*none || math.Abs(half.Density[axis][k]-(one+none)/2) > 1e-9*none || less < 0 || math.Abs(less-(2*none-one)) > 1e-9*none {
				t.Fatalf("axis %d, %g Hz: in step %g, want %g; half %g, alone %g, against %g", axis, f, one, want, half.Density[axis][k], none, less)
			}
		}
	}
	peaks, err := s.Peaks(step, inStep, 1.26)
	if err != nil {
		t.Fatal(err)
	}
	if len(peaks) < 5 {
		t.Fatalf("%d peaks", len(peaks))
	}
	for _, p := range peaks {
		at, err := s.Transfer(t.Context(), []float64{p.Frequency}, 1)
		if err != nil {
			t.Fatal(err)
		}
		sum := 0.0
		for _, x := range p.Shares {
			sum += x
		}
		if want := at.Broadband(inStep).Density[p.Axis][0]; math.Abs(p.Density-want) > 1e-9*want || math.Abs(sum-1) > 1e-9 {
			t.Errorf("peak at %g Hz: density %g, want %g; shares add up to %g", p.Frequency, p.Density, want, sum)
		}
	}
}

// A table of momenta by frequency is what one system per frequency gives.
func TestMomentaByFrequency(t *testing.T) {
	b := frame(12, 2, 6)
	rest := build(t, b, Options{Gyroscopic: spinners(b, 0, 0)})
	frequency, momenta := []float64{90, 200, 330}, [][]float64{{0, 0}, {0.2, -0.3}, {-0.4, 0.1}}
	all, err := rest.TransferSpun(t.Context(), frequency, momenta, 2)
	if err != nil {
		t.Fatal(err)
	}
	for k, f := range frequency {
		one, err := rest.Spun(momenta[k]).Transfer(t.Context(), []float64{f}, 1)
		if err != nil {
			t.Fatal(err)
		}
		for j := range rest.Inputs() {
			if !within(all.Rate[1][j][k], one.Rate[1][j][0], 1e-9) {
				t.Errorf("%g Hz, input %d: %v, want %v", f, j, all.Rate[1][j][k], one.Rate[1][j][0])
			}
		}
	}
}
