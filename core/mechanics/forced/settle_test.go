package forced

import (
	"math"
	"math/cmplx"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
)

// A settled motion is a natural motion of the frame with its laws frozen at the frequency of that motion,
// spinning and at rest, and it does not matter where the search begins.
func TestSettledMotionsAreThoseOfTheirOwnFrequency(t *testing.T) {
	b := lawful()
	s := build(t, b, Options{Gyroscopic: spinners(b, 0.4, -0.3)})
	for _, momenta := range [][]float64{{0, 0}, {0.4, -0.3}} {
		var first []Pole
		moved := 0.0
		for _, from := range []float64{150, 60, 300} {
			core, err := s.CoreAt(from)
			if err != nil {
				t.Fatal(err)
			}
			poles, err := core.Poles(momenta, 1, 500)
			if err != nil {
				t.Fatal(err)
			}
			settled := core.SettleAll(poles, momenta, nil)
			if len(settled) != len(poles) || len(poles) < 5 {
				t.Fatalf("from %g Hz: %d of %d poles settled", from, len(settled), len(poles))
			}
			for k, p := range settled {
				moved = max(moved, math.Abs(p.Frequency/poles[k].Frequency-1))
				own, err := s.Frozen(p.Frequency).Core()
				if err != nil {
					t.Fatal(err)
				}
				near, err := own.Poles(momenta, 0.9*p.Frequency, 1.1*p.Frequency)
				if err != nil {
					t.Fatal(err)
				}
				found := false
				for _, q := range near {
					found = found || math.Abs(q.Frequency/p.Frequency-1) < 1e-8 && math.Abs(q.Damping-p.Damping) < 1e-8 && Likeness(q.Shape, p.Shape) > 1-1e-8
				}
				if !found {
					t.Errorf("from %g Hz: %g Hz, %g is no natural motion of the frame frozen there: %+v", from, p.Frequency, p.Damping, near)
				}
			}
			if first == nil {
				first = settled
				continue
			}
			for _, p := range settled {
				found := false
				for _, q := range first {
					found = found || math.Abs(q.Frequency/p.Frequency-1) < 1e-8
				}
				if !found && p.Frequency < 400 { // some may come in from above 500 Hz
					t.Errorf("from %g Hz a motion at %g Hz, from 150 Hz none", from, p.Frequency)
				}
			}
		}
		if moved < 0.02 {
			t.Errorf("laws move motions by %g at most, which tests nothing", moved)
		}
	}
}

// Where the rotors turn with the motion its momentum follows it: the settled pole makes the dynamic stiffness at its
// own frequency singular.
func TestSettledSynchronousMotion(t *testing.T) {
	b := lawful()
	s := build(t, b, Options{Gyroscopic: spinners(b, 0.4, -0.3)})
	core, err := s.CoreAt(150)
	if err != nil {
		t.Fatal(err)
	}
	ratio := []float64{3e-4, -2e-4}
	poles, err := core.Synchronous(ratio, 1, 500)
	if err != nil {
		t.Fatal(err)
	}
	settled := core.SettleAll(poles, nil, ratio)
	if len(settled) < 5 {
		t.Fatalf("%d of %d settled", len(settled), len(poles))
	}
	for _, p := range settled {
		omega := 2 * math.Pi * p.Frequency * math.Sqrt(1-p.Damping*p.Damping)
		turning := []float64{ratio[0] * omega, ratio[1] * omega}
		own, err := s.Frozen(p.Frequency).Core()
		if err != nil {
			t.Fatal(err)
		}
		near, err := own.Poles(turning, 0.9*p.Frequency, 1.1*p.Frequency)
		if err != nil {
			t.Fatal(err)
		}
		found := false
		for _, q := range near {
			found = found || math.Abs(q.Frequency/p.Frequency-1) < 1e-8 && math.Abs(q.Damping-p.Damping) < 1e-8
		}
		if !found {
			t.Errorf("%g Hz, %g: %+v", p.Frequency, p.Damping, near)
		}
	}
}

// A mass on a mount that stiffens settles where ω² m is the storage stiffness at that frequency, from
// far below and far above; with a law that is constant it stays.
func TestSettleOneMass(t *testing.T) {
	l := airframe.Law{Kind: airframe.Table, Frequency: []float64{10, 1000}, Storage: []float64{1, 4}, Loss: []float64{2e-4, 2e-4}}
	b := &modal.Basis{Kinds: allElastic(1), Frequency: []float64{100}, Sites: []modal.Site{
		{Name: "a", Kind: "rotor", Motion: [][6]float64{{1, 0, 0, 0, 0, 0}}}, {Name: "g", Kind: "gyro", Motion: [][6]float64{{0, 0, 0, 1, 0, 0}}}}}
	b.Groups = []modal.LossGroup{{Name: "m", Kind: "mount", Law: l, Stiffness: []float64{sq(2 * math.Pi * 100)}}}
	s := build(t, b, Options{})
	f := 100.0
	for range 100 {
		f = 100 * math.Sqrt(1+3*math.Log(f/10)/math.Log(100))
	}
	for _, from := range []float64{12, 100, 900} {
		core, err := s.CoreAt(from)
		if err != nil {
			t.Fatal(err)
		}
		poles, err := core.Poles(nil, 1, 900)
		if err != nil || len(poles) != 1 {
			t.Fatalf("%d poles, %v", len(poles), err)
		}
		p, ok := core.Settle(poles[0], nil, nil)
		if !ok || math.Abs(p.Frequency/f-1) > 1e-7 || math.Abs(p.Damping-1e-4) > 1e-7 || math.Abs(cmplx.Abs(p.Shape[0])-1) > 1e-12 {
			t.Errorf("from %g Hz: %+v, %v; want %g Hz", from, p, ok, f)
		}
	}
}
