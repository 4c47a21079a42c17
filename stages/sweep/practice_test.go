package sweep

import (
	"math"
	"strings"
	"testing"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Rows H-*: common practice, no source. The made-up frame has modes at 150, 230
// and 300 Hz; its rotors turn at 1700 rad/s.
func TestCommonPractice(t *testing.T) {
	m, p := frame()
	r, out := run(t, m, p, nil)
	want := map[string]struct {
		value float64
		holds bool
	}{
		"modes reach on":  {1.5, true},
		"structural band": {150, true},
		"below 100 Hz":    {150, true},
		"number of modes": {3, false},
		"order 1":         {1700 / 2 / math.Pi, true},
	}
	seen := 0
	for _, x := range r.Practice {
		w, ok := want[x.Name]
		if !ok {
			continue
		}
		seen++
		if math.Abs(x.Value-w.value) > 0.01*w.value || x.Holds != w.holds {
			t.Errorf("%+v, want %+v", x, w)
		}
	}
	if seen != len(want) {
		t.Errorf("%d of %d rules among %+v", seen, len(want), r.Practice)
	}
	last := out.Summary[len(out.Summary)-1]
	if last.Title != "Common practice" || len(last.Rows) != len(r.Practice) {
		t.Errorf("summary ends with %+v", last)
	}
	// Without residual vectors, or with modes that end at 700 Hz, rules break or cannot be judged.
	without, _ := run(t, m, p, stage.Arguments{"residual": false})
	m.UpTo = 700
	short, _ := run(t, m, p, nil)
	for _, x := range append(without.Practice[:1], short.Practice[0]) {
		if x.Name != "modes reach on" || x.Holds {
			t.Errorf("%+v", x)
		}
	}
	for _, x := range short.Practice {
		if x.Name == "number of modes" {
			t.Errorf("counted modes that were not sought: %+v", x)
		}
	}
}

// The rules of separation are judged where the gyro feels both neighbours.
func TestPracticeOfSeparation(t *testing.T) {
	r := &kinds.Response{Separations: []kinds.ResponseSeparation{
		{Gap: 3, LowerAlone: [3]float64{1, 0, 0}, UpperAlone: [3]float64{1e-6, 0, 0}, Amplification: [3]float64{1, 1, 1}}, // one of them is not felt
		{Gap: 17, LowerAlone: [3]float64{0, 2, 0}, UpperAlone: [3]float64{0, 1, 0}, Amplification: [3]float64{1, 2, 1}},
		{Gap: 44, LowerAlone: [3]float64{0, 0, 3}, UpperAlone: [3]float64{0, 0, 1}, Amplification: [3]float64{1, 1, 0.9}},
	}}
	if got := smallestGap(r); got != 17 {
		t.Errorf("smallest gap %g", got)
	}
	if got, want := pureness(r), -10*math.Log10(0.9); math.Abs(got-want) > 1e-12 {
		t.Errorf("neighbours add %g dB, want %g", got, want)
	}
	if got := smallestGap(&kinds.Response{}); !math.IsNaN(got) {
		t.Errorf("gap of nothing %g", got)
	}
}

// By hand for the made-up frame: modes 1 to 3 give under forces along z at both
// rotors, the residual vector under forces along x; give is Σ φ_gyro φ_rotor/ω² per input. Rigid and
// static densities at a frequency follow from it and 1 kg with 0.01 kg·m².
func TestGiveAndRigidBody(t *testing.T) {
	m, p := frame()
	r, out := run(t, m, p, nil)
	per := func(f float64) float64 { return 1 / math.Pow(2*math.Pi*f, 2) }
	roll := 20 * 3 * per(150) * math.Sqrt2
	a, b := 30*2*per(230)+15*1*per(300), 30*2*per(230)-15*1*per(300) // modes 2 and 3 at rotors a and b
	for axis, want := range []float64{roll, math.Hypot(a, b), 40 * 4 * per(1800) * math.Sqrt2} {
		if got := r.Axes[axis].GiveForce; math.Abs(got-want) > 1e-9*want {
			t.Errorf("%s gives %g rad/N, want %g", r.Axes[axis].Axis, got, want)
		}
		if r.Axes[axis].GiveMoment != 0 {
			t.Errorf("%s gives %g under moments", r.Axes[axis].Axis, r.Axes[axis].GiveMoment)
		}
	}
	k := len(r.Frequency) / 2
	omega := 2 * math.Pi * r.Frequency[k]
	// Roll of the rigid body: moments y Fz − z Fy with z = 0 and y = ±0.1, and Mx itself.
	rigid := 2*r.Force*math.Pow(0.1/0.01/omega, 2) + 2*r.Moment*math.Pow(1/0.01/omega, 2)
	if got := r.Rigid[0][k]; math.Abs(got-rigid) > 1e-9*rigid {
		t.Errorf("rigid body has %g, want %g", got, rigid)
	}
	static := 2*r.Force*math.Pow(omega*(20*3*per(150)-0.1/0.01/omega/omega), 2) + 2*r.Moment*math.Pow(1/0.01/omega, 2)
	if got := r.Static[0][k]; math.Abs(got-static) > 1e-9*static {
		t.Errorf("with its give the body has %g, want %g", got, static)
	}
	if r.FirstMode != 150 {
		t.Errorf("first mode at %g Hz", r.FirstMode)
	}
	found := false
	for _, s := range out.Summary {
		found = found || s.Title == "Motion without resonance" && len(s.Rows) == 3 && strings.Contains(s.Text, "150.0 Hz")
	}
	if !found {
		t.Error("the motion without resonance is not shown")
	}
}
