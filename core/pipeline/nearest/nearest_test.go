package nearest

import "testing"

func TestName(t *testing.T) {
	names := []string{"geometry", "properties", "size", "up_to", "mm", "Hz", "kg"}
	for written, want := range map[string]string{
		"geometri":  "geometry",   // changed
		"geomtry":   "geometry",   // dropped
		"proprties": "properties", // dropped
		"siez":      "size",       // swapped
		"UPTO":      "up_to",
		"hz":        "Hz",
		"KG":        "kg",
		"frequency": "",
		"m":         "mm",
		"xy":        "", // as far from mm as it is long
		"":          "",
	} {
		if got := Name(written, names); got != want {
			t.Errorf("nearest to %q is %q, not %q", written, got, want)
		}
	}
	if got := Name("ab", []string{"ax", "ay"}); got != "ax" {
		t.Errorf("of two equally near names %q is taken, not the first", got)
	}
}

// The distances follow from the definition of optimal string alignment.
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{{"", "abc", 3}, {"abc", "abc", 0}, {"abc", "acb", 1}, {"ca", "abc", 3}, {"kitten", "sitting", 3}} {
		if got := distance([]rune(c.a), []rune(c.b)); got != c.want {
			t.Errorf("%q to %q is %d, not %d", c.a, c.b, got, c.want)
		}
		if back := distance([]rune(c.b), []rune(c.a)); back != c.want {
			t.Errorf("%q to %q is %d, not %d", c.b, c.a, back, c.want)
		}
	}
}
