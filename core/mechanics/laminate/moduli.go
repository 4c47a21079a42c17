package laminate

// Moduli are the constants of the homogeneous material with the same flexibility as a section.
type Moduli struct {
	Ex, Ey, Gxy float64 // Pa
	Nuxy        float64
}

// Moduli returns the effective in-plane and flexural constants of a symmetric section: from A⁻¹ and
// D⁻¹ (R. M. Jones, Mechanics of Composite Materials, 2nd ed., 1999). Coupling B is left out, so that
// for unsymmetric sections the values are those of a plate held flat.
func (s Section) Moduli() (inPlane, flexural Moduli) {
	a, _ := inverse3(s.A)
	d, _ := inverse3(s.D)
	h, h3 := s.Thickness, s.Thickness*s.Thickness*s.Thickness/12
	return Moduli{1 / (h * a[0][0]), 1 / (h * a[1][1]), 1 / (h * a[2][2]), -a[0][1] / a[0][0]},
		Moduli{1 / (h3 * d[0][0]), 1 / (h3 * d[1][1]), 1 / (h3 * d[2][2]), -d[0][1] / d[0][0]}
}
