package forced

import (
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
)

// lawful gives a frame of which one group follows a law.
func lawful() *modal.Basis {
	b := frame(20, 5, 21)
	b.Groups[1].Law = airframe.Law{Kind: airframe.Solid, Reference: 30, Rise: 6, PeakAt: 150}
	b.Groups[1].LossFactor = 0.002 // the floor
	return b
}

// At each frequency the stiffness is that of the law: all ways of solving agree with the
// equation written out with the group's own complex stiffness, spinning and at rest.
func TestLawsHoldAtEachFrequency(t *testing.T) {
	b := lawful()
	n := len(b.Frequency)
	list := spinners(b, 0.4, -0.3)
	c := full(b, list)
	s := build(t, b, Options{Gyroscopic: list})
	frequency := []float64{0.5, 60, 111, 230, 420}
	tr, err := s.Transfer(t.Context(), frequency, 2)
	if err != nil {
		t.Fatal(err)
	}
	rest, err := s.Spun([]float64{0, 0}).Rest(t.Context(), frequency, nil, 2)
	if err != nil {
		t.Fatal(err)
	}
	spun, err := rest.Transfer([]float64{0.4, -0.3})
	if err != nil {
		t.Fatal(err)
	}
	constant := build(t, func() *modal.Basis { b := lawful(); b.Groups[1].Law = airframe.Law{}; return b }(), Options{Gyroscopic: list})
	moved := 0.0
	for k, f := range frequency {
		omega := 2 * math.Pi * f
		for j := range s.Inputs() {
			q, err := s.Drive(f, j)
			if err != nil {
				t.Fatal(err)
			}
			// [Σ r_g K_g + iωC − ω²] q = load, row by row.
			for v := range n {
				sum := -complex(omega*omega, 0) * q[v]
				size := cmplx.Abs(sum)
				for g := range b.Groups {
					for w := range n {
						x := b.Groups[g].At(f) * complex(b.Groups[g].Stiffness[v*n+w], 0) * q[w]
						sum, size = sum+x, size+cmplx.Abs(x)
					}
				}
				for w := range n {
					sum += complex(0, omega*c[v*n+w]) * q[w]
				}
				if want := complex(s.load[j][v], 0); cmplx.Abs(sum-want) > 1e-10*size+1e-12 {
					t.Fatalf("%g Hz, input %d, row %d: %v, want %v", f, j, v, sum, want)
				}
			}
			for axis := range 3 {
				want := complex(0, omega) * along(s.gyro[axis], q)
				if !within(tr.Rate[axis][j][k], want, 1e-8) || !within(spun.Rate[axis][j][k], want, 1e-8) {
					t.Errorf("%g Hz, input %d, axis %d: %v and %v, want %v", f, j, axis, tr.Rate[axis][j][k], spun.Rate[axis][j][k], want)
				}
			}
			force := complexRow(s.load[j])
			groups, more := s.Dissipation(f, q)
			for _, p := range groups {
				more += p
			}
			if in := s.PowerIn(f, force, q); math.Abs(in-more) > 1e-6*in { // rigid motion hides most digits at 0.5 Hz
				t.Errorf("%g Hz, input %d: %g W in, %g W dissipated", f, j, in, more)
			}
		}
		frozen, err := s.Frozen(f).Transfer(t.Context(), []float64{f}, 1)
		if err != nil {
			t.Fatal(err)
		}
		other, err := constant.Transfer(t.Context(), []float64{f}, 1)
		if err != nil {
			t.Fatal(err)
		}
		for axis := range 3 {
			for j := range s.Inputs() {
				if !within(frozen.Rate[axis][j][0], tr.Rate[axis][j][k], 1e-8) {
					t.Errorf("%g Hz, input %d, axis %d: frozen %v, want %v", f, j, axis, frozen.Rate[axis][j][0], tr.Rate[axis][j][k])
				}
				moved = max(moved, cmplx.Abs(other.Rate[axis][j][0]/tr.Rate[axis][j][k]-1))
			}
		}
	}
	if moved < 0.1 {
		t.Errorf("the law changes the response by %g at most, which tests nothing", moved)
	}
}

// A mass on a mount that stiffens: it rings where ω² m equals the storage stiffness at
// that frequency, and the sampling is close there.
func TestResonanceOfAMountThatStiffens(t *testing.T) {
	l := airframe.Law{Kind: airframe.Table, Frequency: []float64{10, 1000}, Storage: []float64{1, 4}, Loss: []float64{2e-4, 2e-4}}
	b := &modal.Basis{Kinds: allElastic(1), Frequency: []float64{100}, Sites: []modal.Site{
		{Name: "a", Kind: "rotor", Motion: [][6]float64{{1, 0, 0, 0, 0, 0}}}, {Name: "g", Kind: "gyro", Motion: [][6]float64{{0, 0, 0, 1, 0, 0}}}}}
	b.Groups = []modal.LossGroup{{Name: "m", Kind: "mount", Law: l, Stiffness: []float64{sq(2 * math.Pi * 100)}}}
	s := build(t, b, Options{})
	// f = 100 √r(f) with r = 1 + 3 log(f/10)/log(100), by fixed point.
	f := 100.0
	for range 100 {
		f = 100 * math.Sqrt(1+3*math.Log(f/10)/math.Log(100))
	}
	grid := Grid(20, 900, 5, s.Resonances(1))
	tr, err := s.Transfer(t.Context(), grid, 1)
	if err != nil {
		t.Fatal(err)
	}
	source := Broadband{Force: 1}
	peaks, err := s.Peaks(tr.Broadband(source), source, 1.05)
	if err != nil {
		t.Fatal(err)
	}
	found := false
	for _, p := range peaks {
		// On one degree of freedom the motion at resonance is 1/(k η), its rate ω times that.
		k := real(l.At(f)) * sq(2*math.Pi*100)
		if math.Abs(p.Frequency/f-1) < 1e-4 {
			found = true
			if want := sq(2 * math.Pi * f / (k * 2e-4)); math.Abs(p.Density/want-1) > 1e-3 {
				t.Errorf("the peak has %g, want %g", p.Density, want)
			}
		}
	}
	if !found {
		t.Errorf("no peak at %g Hz among %+v", f, peaks)
	}
	core, err := s.Frozen(f).Core()
	if err != nil {
		t.Fatal(err)
	}
	poles, err := core.Poles(nil, 1, 900)
	if err != nil {
		t.Fatal(err)
	}
	if len(poles) != 1 || math.Abs(poles[0].Frequency/f-1) > 1e-6 || math.Abs(poles[0].Damping-1e-4) > 1e-7 {
		t.Errorf("poles %+v, want one at %g Hz", poles, f)
	}
	if got := s.Damping()[0]; math.Abs(got-2e-4) > 1e-12 {
		t.Errorf("loss factor %g", got)
	}
}
