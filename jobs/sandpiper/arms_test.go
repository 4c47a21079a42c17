package sandpiper

import (
	"math"
	"strings"
	"testing"

	"hushframe/stages/kinds"
)

// Thicker arms: the arms weigh 6/5 of before (a plate of equal outline weighs in proportion to its thickness), nothing
// else but the standoffs that became shorter does, modes are followed with high assurance, and those that bend arms rise.
func TestArms(t *testing.T) {
	d := perform(t, "arms.hcl", nil)
	for _, v := range d.Result.Verdicts {
		if !v.Holds {
			t.Errorf("%s: %s", v.Name, v.Shown)
		}
	}
	a, err := d.Artifact("thicker", "difference")
	if err != nil {
		t.Fatal(err)
	}
	x, err := kinds.DecodeDifference(a)
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range x.Masses {
		ratio := m.Mass[1] / m.Mass[0]
		switch {
		case strings.HasPrefix(m.Name, "arm_"):
			if math.Abs(ratio-1.2) > 1e-5 { // the meshes are not quite the same
				t.Errorf("%s weighs %.6f of before", m.Name, ratio)
			}
		case math.Abs(ratio-1) > 1e-6 && !strings.HasPrefix(m.Name, "waist-"):
			t.Errorf("%s weighs %.6f of before", m.Name, ratio)
		}
	}
	arms, alike := 0, 0
	for _, m := range x.Modes {
		if m.Assurance > 0.8 {
			alike++
		}
		if shift := m.Frequency[1]/m.Frequency[0] - 1; strings.HasPrefix(m.Part, "arm_") {
			arms++
			if shift < 0.03 || shift > 0.2 { // 6/5 would be bending alone
				t.Errorf("mode %d in %s rises by %.1f %%", m.Number[0], m.Part, 100*shift)
			}
		}
	}
	if arms < 5 || alike < len(x.Modes)*2/3 || x.SharedBefore < 0.97 {
		t.Errorf("%d modes of arms, %d of %d alike, %.3f of the mass shared", arms, alike, len(x.Modes), x.SharedBefore)
	}
	for _, axis := range kinds.AxisNames {
		if b, ok := x.Whole(axis); !ok || math.Abs(b.Change) > 3 {
			t.Errorf("%s changes by %+.1f dB in all", axis, b.Change)
		}
	}
}
