package sandpiper

import (
	"math"
	"testing"

	"hushframe/stages/kinds"
)

// TestFilters runs the recipe of the filters: the chosen chain meets its target and lags less than the one flown today, and what it is
// said to leave agrees, bin by bin, with its own curves where no rotor order lies.
func TestFilters(t *testing.T) {
	d := perform(t, "filters.hcl", map[string]string{"mesh_size": coarse})
	for _, v := range d.Result.Verdicts {
		if !v.Holds {
			t.Errorf("%+v", v)
		}
	}
	a, err := d.Artifact("chosen", "filtered")
	if err != nil {
		t.Fatal(err)
	}
	x, err := kinds.DecodeFiltered(a)
	if err != nil {
		t.Fatal(err)
	}
	if !x.Met || len(x.Filters) == 0 || len(x.Filters) > 3 {
		t.Errorf("met %v with %d filters", x.Met, len(x.Filters))
	}
	for _, axis := range x.Axes {
		for i, c := range x.Curves {
			if c.Frequency < 100 || c.Frequency > 200 { // below every order
				continue
			}
			if want := axis.Observed[i] * c.Power; math.Abs(axis.ObservedAfter[i]-want) > 1e-9*want {
				t.Errorf("%s at %.1f Hz: %g is left, %g times the curve is %g", axis.Axis, c.Frequency, axis.ObservedAfter[i], c.Power, want)
			}
		}
	}
}
