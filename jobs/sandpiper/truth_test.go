package sandpiper

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	"hushframe/stages/kinds"
)

// truth is what fly wrote beside the recording.
type truth struct {
	Modes []struct {
		Frequency float64    `json:"frequency_hz"`
		Damping   float64    `json:"damping_ratio"`
		Direction [3]float64 `json:"gyro_direction_roll_pitch_yaw"`
	} `json:"modes_at_hover_speed"`
	Rotors []struct {
		Speed float64 `json:"mean_hover_rpm"`
	} `json:"rotors"`
}

// readTruth reads what fly wrote.
func readTruth(t *testing.T) truth {
	t.Helper()
	data, err := os.ReadFile("flights/hover-03-truth.json")
	if err != nil {
		t.Fatal(err)
	}
	var tr truth
	if err := json.Unmarshal(data, &tr); err != nil {
		t.Fatal(err)
	}
	return tr
}

// TestPairsAreTrueModes holds the comparison to the hidden truth: at least
// three observed peaks that were paired are true modes on the axis on which
// the truth turns the gyro; no paired one is a rotor order; and the nominal
// model is visibly wrong, as it was made to be.
func TestPairsAreTrueModes(t *testing.T) {
	tr := readTruth(t)
	d := perform(t, "baseline.hcl", map[string]string{"mesh_size": coarse})
	a, err := d.Artifact("check", "comparison")
	if err != nil {
		t.Fatal(err)
	}
	c, err := kinds.DecodeComparison(a)
	if err != nil {
		t.Fatal(err)
	}
	axes := map[string]int{"roll": 0, "pitch": 1, "yaw": 2}
	// A peak that is surely paired is structure, whatever unmasked order lies over it.
	for _, p := range c.Pairs {
		for _, v := range c.Verdicts {
			if v.Axis == p.Axis && v.Frequency == p.Observed && p.Confidence > 0.5 && v.Verdict != kinds.VerdictStructure {
				t.Errorf("%s: the peak at %.1f Hz is paired and yet taken for %s: %s", v.Axis, v.Frequency, v.Verdict, v.Reason)
			}
		}
	}
	right, wrong := 0, 0
	var errors []float64
	for _, p := range c.Pairs {
		axis := axes[p.Axis]
		best, at := math.Inf(1), -1
		for i, m := range tr.Modes {
			// A tenth of the direction is felt on this axis.
			if e := math.Abs(p.Observed/m.Frequency - 1); e < best && math.Abs(m.Direction[axis]) > 0.04 {
				best, at = e, i
			}
		}
		t.Logf("%s: observed %.1f Hz is true mode %d at %.1f Hz; predicted %.1f Hz", p.Axis, p.Observed, at+1, tr.Modes[at].Frequency, p.Predicted)
		if best < 0.015 {
			right++
		}
		errors = append(errors, math.Abs(p.Error))
		for _, r := range tr.Rotors {
			for _, order := range []float64{1, 2, 3} {
				if f := order * r.Speed / 60; math.Abs(p.Observed/f-1) < 0.02 && best > 0.005 {
					wrong++
					t.Errorf("%s: the observed peak at %.1f Hz is order %g of a rotor", p.Axis, p.Observed, order)
				}
			}
		}
	}
	if right < 3 {
		t.Errorf("%d of %d pairs are true modes on the right axis", right, len(c.Pairs))
	}
	visible := 0
	for _, e := range errors {
		if e > 0.03 {
			visible++
		}
	}
	if visible < 3 {
		t.Errorf("only %d predicted peaks differ from the flight by more than 3 %%: %v", visible, errors)
	}
}

// TestFlightPairs holds the modes found in flight and paired with the model to
// the truth: at least seven pairs, each of a true mode of that gyro direction
// within 1.5 % of its frequency.
func TestFlightPairs(t *testing.T) {
	tr := readTruth(t)
	d := perform(t, "flight.hcl", map[string]string{"mesh_size": coarse})
	a, err := d.Artifact("check", "comparison")
	if err != nil {
		t.Fatal(err)
	}
	c, err := kinds.DecodeComparison(a)
	if err != nil {
		t.Fatal(err)
	}
	if len(c.ModePairs) < 7 {
		t.Errorf("%d pairs of modes", len(c.ModePairs))
	}
	predicted := modes(t, d).Survey.Modes
	for _, p := range c.ModePairs {
		turn := predicted[p.Mode-1].Rotation
		best := math.Inf(1)
		for _, m := range tr.Modes {
			var dot, norm float64
			for i, x := range m.Direction {
				dot += x * turn[i]
				norm += turn[i] * turn[i]
			}
			if dot*dot > 0.9*norm {
				best = math.Min(best, math.Abs(p.Observed/m.Frequency-1))
			}
		}
		if best > 0.015 {
			t.Errorf("the mode found at %.1f Hz is %.1f %% from the nearest true mode of its direction", p.Observed, 100*best)
		}
	}
}
