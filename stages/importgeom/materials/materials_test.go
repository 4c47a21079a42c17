package materials

import (
	"math"
	"testing"

	"hushframe/core/mechanics/laminate"
)

func TestEveryMaterialIsPossibleAndMarkedTypical(t *testing.T) {
	for _, name := range Names() {
		m, ok := Find(name)
		if !ok {
			t.Fatalf("%s is listed but not found", name)
		}
		l := laminate.Material{E1: m.E1, E2: m.E2, G12: m.G12, Nu12: m.Nu12, G13: m.G13, G23: m.G23, Density: m.Density}
		if err := l.Check(); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		if !m.Typical || m.Origin == "" || m.Scatter <= 0 || m.LossFactor <= 0 {
			t.Errorf("%s: typical %v, origin %q, scatter %g, loss factor %g", name, m.Typical, m.Origin, m.Scatter, m.LossFactor)
		}
		// G = E/(2(1+ν)) holds for isotropic ones and not for a 0/90 weave.
		g := m.E1 / (2 * (1 + m.Nu12))
		if got := math.Abs(m.G12-g) < 1e-9*g; got != m.Isotropic {
			t.Errorf("%s: G12 %g, E/(2(1+ν)) %g, isotropic %v", name, m.G12, g, m.Isotropic)
		}
	}
	if _, ok := Find("unobtainium"); ok {
		t.Error("a material that does not exist was found")
	}
}

// The in-plane shear modulus of a quasi-isotropic laminate follows from its E and ν.
func TestQuasiIsotropicShear(t *testing.T) {
	m, _ := Find("carbon-quasi-isotropic")
	if g := m.E1 / (2 * (1 + m.Nu12)); math.Abs(m.G12-g) > 0.01*g {
		t.Errorf("G12 %g, want %g", m.G12, g)
	}
}
