package mounts

import (
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
)

// Every row is usable as it stands, says what it is and how far to trust it.
func TestTable(t *testing.T) {
	seen := map[string]bool{}
	for _, name := range Names() {
		m, ok := Find(name)
		if !ok || seen[name] {
			t.Fatalf("%s: found %v, seen %v", name, ok, seen[name])
		}
		seen[name] = true
		if m.About == "" || m.Kind == "" || !(m.Scatter > 1) || !strings.Contains(m.Origin(), "no source") {
			t.Errorf("%s: %+v", name, m)
		}
		for c, k := range m.Stiffness {
			if !(k > 0 && m.Loss[c] > 0) {
				t.Errorf("%s: stiffness %g, loss factor %g along %d", name, k, m.Loss[c], c)
			}
			law := m.Law
			law.LossFactor = m.Loss[c]
			if err := law.Check(); err != nil {
				t.Errorf("%s: %v", name, err)
			}
			if law.Kind == airframe.Fractional && real(law.At(400)) <= 1 {
				t.Errorf("%s does not stiffen with frequency", name)
			}
		}
		if !strings.Contains(Text(), name) {
			t.Errorf("%s is not in the text", name)
		}
	}
	if _, ok := Find("spring"); ok {
		t.Error("found a mount that is not in the table")
	}
}
