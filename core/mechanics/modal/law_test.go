package modal_test

import (
	"math"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
)

// The loss of a mode takes the law of a mount at the frequency of the mode: half of its energy in a solid whose loss
// factor peaks there at (4-1)/(2·√4) = 0.75 with 1.6 times the stiffness at rest (Zener 1948), half in a part of 0.01.
func TestLossByLaw(t *testing.T) {
	const f = 120.0
	w := 2 * math.Pi * f
	b := &modal.Basis{
		Kinds: []modal.VectorKind{modal.Elastic}, Frequency: []float64{f},
		Groups: []modal.LossGroup{{Name: "plate", Stiffness: []float64{w * w / 2}}, {Name: "mount", Stiffness: []float64{w * w / 2}}},
	}
	b.Dampen([]float64{0.01, 0}, []airframe.Law{{}, {Kind: airframe.Solid, Reference: 1e-9, Rise: 4, PeakAt: f}}, 0.002)
	s := &modal.Survey{Modes: []modal.Mode{{Number: 1, Frequency: f}}}
	s.Complete(b, nil, 10, 500)
	if want := (0.01+1.6*0.75)/2 + 0.002; math.Abs(s.Modes[0].Loss-want) > 1e-9 {
		t.Errorf("loss factor %g, want %g", s.Modes[0].Loss, want)
	}
}
