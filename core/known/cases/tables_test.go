package cases

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"hushframe/core/known"
)

// elsewhere are the rows of the families' files that no family solves: where they are checked, or why not.
var elsewhere = map[string]string{
	"A-STATIC-CANT":   "core/mechanics/element/beam",
	"C-PATCH-":        "core/mechanics/element/shell",
	"C-ELEMENT-RIGID": "core/mechanics/element/shell",
	"D-SDOF-":         "core/mechanics/forced",
	"D-MILES-":        "core/mechanics/forced",
	"D-TWODOF-A-PROP": "core/mechanics/forced", // its natural motions have a family
	"D-TWODOF-A-HYST": "core/mechanics/forced",
	"D-TWODOF-A-NONP": "core/mechanics/forced",
	"D-ABSORBER-":     "core/mechanics/forced",
	"D-FFBEAM-RESID":  "core/mechanics/forced",
}

// No row of beams, plates, shells or harmonic response is forgotten, and each is solved once.
func TestEveryRowIsSolved(t *testing.T) {
	solved := map[string]int{}
	for _, f := range Families() {
		rows, err := f.Select(read(t, f.File))
		if err != nil {
			t.Fatal(err)
		}
		for _, row := range rows {
			solved[row.ID]++
		}
	}
	used := map[string]bool{}
	for _, file := range []string{beams, plates, shells, forcing} {
		var all struct{ Rows []struct{ ID string } }
		if err := json.Unmarshal(read(t, file), &all); err != nil {
			t.Fatal(err)
		}
		for _, row := range all.Rows {
			switch n := solved[row.ID]; {
			case n > 1:
				t.Errorf("row %s is in %d families", row.ID, n)
			case n == 0:
				known := false
				for prefix := range elsewhere {
					if strings.HasPrefix(row.ID, prefix) {
						known, used[prefix] = true, true
					}
				}
				if !known {
					t.Errorf("row %s is solved nowhere", row.ID)
				}
			}
		}
	}
	for prefix := range elsewhere {
		if !used[prefix] {
			t.Errorf("%s needs no excuse", prefix)
		}
	}
}

// On the row's own mesh the faceted hemisphere is off by no more than three times the row's tolerance, from the stiff side. The
// error falls with about the fourth power of the size of its facets, and what Richardson's extrapolation makes of two meshes up to
// the row's own meets the row.
func TestFacetsOfHemisphereConverge(t *testing.T) {
	row := known.One(t, shells, "C-HEMISPHERE")
	const ratio = 1.5
	coarse, middle, fine := hemisphereOf(t, row, 16), hemisphereOf(t, row, 24), hemisphereOf(t, row, 36)
	if order := math.Log((middle-coarse)/(fine-middle)) / math.Log(ratio); !(math.Abs(order-4) < 0.5) {
		t.Errorf("the error falls with the power %.2f: %g, %g, %g", order, coarse, middle, fine)
	}
	row.Check(t, 3, middle)
	row.Check(t, 0.7, middle+(middle-coarse)/(math.Pow(ratio, 4)-1))
}
