package main

import (
	"context"
	"math"
	"testing"

	"hushframe/core/mechanics/modal"
)

// A mesh of 14 mm has the modes within half a per cent (TestFinerMesh of the demo measures it).
const coarse = "14 mm"

// Stiffness up and mass the same, no frequency may fall, mode by mode in order, and the other way round (Rayleigh's
// principle): bolts made rigid against bolts that give, and pressed faces against none. Each must also matter.
func TestJointsMoveModesTheirWay(t *testing.T) {
	ctx := context.Background()
	m, p, err := load(ctx, "frame.hcl", coarse)
	if err != nil {
		t.Fatal(err)
	}
	base, err := solve(ctx, m, p)
	if err != nil {
		t.Fatal(err)
	}
	for name, up := range map[string]bool{"bolts that give": true, "pressed faces": false} {
		for _, v := range structural {
			if v.name != name {
				continue
			}
			other, err := v.apply(ctx, m, p)
			if err != nil {
				t.Fatal(err)
			}
			most := 0.0
			for k := modal.RigidBodies; k < modal.RigidBodies+20; k++ {
				change := other.basis.Frequency[k]/base.basis.Frequency[k] - 1
				if !up {
					change = -change
				}
				if change < -1e-6 {
					t.Errorf("without %s mode %d goes from %.3f to %.3f Hz", name, k-modal.RigidBodies+1, base.basis.Frequency[k], other.basis.Frequency[k])
				}
				most = max(most, change)
			}
			if most < 0.01 {
				t.Errorf("without %s no mode moves by more than %.2f %%", name, 100*most)
			}
		}
	}
	if len(m.Contacts) == 0 || p.Bolts[0].Joint == "" {
		t.Error("a variant changed what it was given")
	}
}

// Without coupling each vector keeps its own loss; without laws a mount keeps the loss at its reference.
func TestWays(t *testing.T) {
	b := &modal.Basis{Kinds: make([]modal.VectorKind, 2), Frequency: []float64{1, 2}, Groups: []modal.LossGroup{{LossFactor: 0.1, Stiffness: []float64{3, 1, 1, 4}}}}
	alone := groups(b, way{laws: true})
	if k := alone[0].Stiffness; k[0] != 3 || k[1] != 0 || k[2] != 0 || k[3] != 4 || b.Groups[0].Stiffness[1] != 1 {
		t.Errorf("stiffness %v, of %v", k, b.Groups[0].Stiffness)
	}
	b.Groups[0].Law.Kind, b.Groups[0].Law.Reference, b.Groups[0].Law.Order, b.Groups[0].Law.LossFactor = "fractional", 100, 0.5, 0.3
	plain := groups(b, way{coupled: true})
	if math.Abs(plain[0].LossFactor-0.4) > 1e-12 || plain[0].Law.Varies() || !b.Groups[0].Law.Varies() {
		t.Errorf("without laws %+v, of %+v", plain[0], b.Groups[0])
	}
}

// Peaks are set beside the nearest ones.
func TestNearestPeak(t *testing.T) {
	r := response{{{100, -40}, {200, -10}, {300, -20}}}
	if l := r.near(0, peak{frequency: 230}); l != -10 {
		t.Errorf("beside 230 Hz a peak of %g dB", l)
	}
	s := strongest(r[0], 2)
	if len(s) != 2 || s[0].frequency != 200 || s[1].frequency != 300 {
		t.Errorf("the two strongest are %v", s)
	}
	if !math.IsNaN(r.near(1, peak{frequency: 100})) {
		t.Error("a level on an axis without peaks")
	}
}
