package plugintest

import (
	"math"

	"hushframe/core/mechanics/element"
)

// field is a motion of a plate by place on the mid-surface: u_x, u_y, u_z (m), θ_x, θ_y, θ_z (rad). thick is what a
// solid may add to u_z along its normal: the z or z² of its cross strain; 0 for none.
type field struct {
	name  string
	at    func(x, y float64) [6]float64
	thick int
}

var rigid = []field{
	{"displacement along x", func(x, y float64) [6]float64 { return [6]float64{1} }, 0},
	{"displacement along y", func(x, y float64) [6]float64 { return [6]float64{0, 1} }, 0},
	{"displacement along z", func(x, y float64) [6]float64 { return [6]float64{0, 0, 1} }, 0},
	{"rotation about x", func(x, y float64) [6]float64 { return [6]float64{0, 0, y, 1, 0, 0} }, 0},
	{"rotation about y", func(x, y float64) [6]float64 { return [6]float64{0, 0, -x, 0, 1, 0} }, 0},
	{"rotation about z", func(x, y float64) [6]float64 { return [6]float64{-y, x, 0, 0, 0, 1} }, 0},
}

// strains are the three constant strains of the mid-surface, ε_x, ε_y, γ_xy = 1, and curvatures the three constant
// curvatures κ_x, κ_y, κ_xy = 1 without transverse shear.
var (
	strains = []field{
		{"constant strain along x", func(x, y float64) [6]float64 { return [6]float64{x} }, 1},
		{"constant strain along y", func(x, y float64) [6]float64 { return [6]float64{0, y} }, 1},
		{"constant shear strain in the plane", func(x, y float64) [6]float64 { return [6]float64{y / 2, x / 2} }, 1},
	}
	curvatures = []field{
		{"constant curvature along x", func(x, y float64) [6]float64 { return [6]float64{0, 0, -x * x / 2, 0, x, 0} }, 2},
		{"constant curvature along y", func(x, y float64) [6]float64 { return [6]float64{0, 0, -y * y / 2, -y, 0, 0} }, 2},
		{"constant twist", func(x, y float64) [6]float64 { return [6]float64{0, 0, -x * y / 2, -x / 2, y / 2, 0} }, 2},
	}
)

// motion gives the field at a point of height z, as a solid has it.
func (f field) motion(x, y, z float64) [3]float64 {
	m := f.at(x, y)
	return [3]float64{m[0] + z*m[4], m[1] - z*m[3], m[2]}
}

// vectors gives the unknowns of one element under a field, and what the solid adds.
func (s *subject) vectors(f field, nodes []float64) (u, thick []float64) {
	half := s.section.Thickness / 2
	if !s.shape.Solid() {
		for n := range s.shape.Nodes {
			m := f.at(nodes[3*n], nodes[3*n+1])
			u = append(u, m[:]...)
		}
		return u, make([]float64, len(u))
	}
	for _, p := range s.shape.Points {
		z := p.Height * half
		m := f.motion(nodes[3*p.Node], nodes[3*p.Node+1], z)
		u = append(u, m[:]...)
		t := 0.0
		if f.thick > 0 {
			t = math.Pow(z, float64(f.thick))
		}
		thick = append(thick, 0, 0, t)
	}
	return u, thick
}

// relaxed adds as much of the cross strain as makes the energy least: what a plate with free faces does.
func relaxed(stiffness, u, thick []float64) []float64 {
	out := append([]float64(nil), u...)
	if k := product(stiffness, thick, thick); k > 0 {
		c := -product(stiffness, thick, u) / k
		for i := range out {
			out[i] += c * thick[i]
		}
	}
	return out
}

func area(c [3][2]float64) float64 {
	return ((c[1][0]-c[0][0])*(c[2][1]-c[0][1]) - (c[2][0]-c[0][0])*(c[1][1]-c[0][1])) / 2
}

func (s *subject) checkRigid(in *element.Batch, m *element.Matrices, bad func(string, ...any)) {
	unit := s.section.A[0][0] * area(triangle) // twice the energy of a strain of one
	for i, f := range rigid {
		u, _ := s.vectors(f, in.Nodes)
		size := 1.0
		if i < 3 {
			size = math.Sqrt(area(triangle))
		}
		for k := range u {
			u[k] *= size
		}
		if e := product(m.Stiffness, u, u); !(math.Abs(e) <= 1e-9*unit) {
			bad("rigid motion: a %s costs energy, %.3g of that of a strain of the same size; the stiffness must not resist it", f.name, e/unit)
		}
	}
}

func (s *subject) checkMass(in *element.Batch, m *element.Matrices, bad func(string, ...any)) {
	// Second moments of a triangle with its centroid c: ∫(p-c)(p-c)ᵀ = A/12 Σ (p_i-c)(p_i-c)ᵀ.
	a := area(triangle)
	var c, second [2]float64
	for _, p := range triangle {
		for k := range 2 {
			c[k] += p[k] / 3
		}
	}
	for k := range 2 {
		for _, p := range triangle {
			second[k] += a / 12 * (p[k] - c[k]) * (p[k] - c[k])
		}
		second[k] += a * c[k] * c[k]
	}
	mass, rotary := s.section.Mass, s.section.Rotary
	want := [6]float64{mass * a, mass * a, mass * a, mass*second[1] + rotary*a, mass*second[0] + rotary*a, mass * (second[0] + second[1])}
	for i, f := range rigid {
		u, _ := s.vectors(f, in.Nodes)
		what := "mass"
		if i >= 3 {
			what = "moment of inertia"
		}
		if got := product(m.Mass, u, u); !(math.Abs(got-want[i]) <= 1e-6*want[i]) {
			bad("mass: under %s the element has a %s of %.6g, where the plate has %.6g (kg or kg·m²)", f.name, what, got, want[i])
		}
	}
}

// checkConstant compares energies with the section's: ½ε·A·ε and ½κ·D·κ per area.
func (s *subject) checkConstant(in *element.Batch, m *element.Matrices, bad func(string, ...any)) {
	check := func(fields []field, section [3][3]float64) {
		for i, f := range fields {
			u := relaxed(m.Stiffness, first(s.vectors(f, in.Nodes)), second(s.vectors(f, in.Nodes)))
			want, got := section[i][i]*area(triangle)/2, product(m.Stiffness, u, u)/2
			if !(math.Abs(got-want) <= 1e-5*want) {
				bad("patch: under %s the element stores %.6g J, where the plate stores %.6g J", f.name, got, want)
			}
		}
	}
	check(strains, s.section.A)
	if s.shape.Nodes == 6 {
		check(curvatures, s.section.D)
	}
}

func first(a, _ []float64) []float64  { return a }
func second(_, b []float64) []float64 { return b }

// checkTurned computes the same plate in axes turned by an angle.
func (s *subject) checkTurned(m *element.Matrices, bad func(string, ...any)) {
	const angle = 0.7
	sin, cos := math.Sincos(angle)
	t := *s
	t.section = s.section.Turn(angle)
	t.layup = append(t.layup[:0:0], s.layup...)
	for i := range t.layup {
		t.layup[i].Angle -= angle
	}
	var corners [3][2]float64
	for i, p := range triangle {
		corners[i] = [2]float64{cos*p[0] + sin*p[1], -sin*p[0] + cos*p[1]}
	}
	turned, err := t.matrices(t.batch(corners, 1, 0))
	if err != nil {
		bad("axes: in axes turned by %g rad it gives %v", angle, err)
		return
	}
	per := element.NodeUnknowns
	if s.shape.Solid() {
		per = element.PointUnknowns
	}
	n := s.shape.Unknowns()
	back := func(i int) []float64 { // unknown i of the old axes in the new ones
		u := make([]float64, n)
		k := i % 3
		base := i - k
		switch k {
		case 0:
			u[base], u[base+1] = cos, -sin
		case 1:
			u[base], u[base+1] = sin, cos
		default:
			u[base+2] = 1
		}
		return u
	}
	for k, pair := range [2][2][]float64{{m.Stiffness, turned.Stiffness}, {m.Mass, turned.Mass}} {
		name := [2]string{"stiffness", "mass"}[k]
		for i := range n {
			for j := range i + 1 {
				if i%per/3 != j%per/3 {
					continue // another unit: held by those of one
				}
				want := pair[0][element.Packed(i)+j]
				scale := math.Sqrt(pair[0][element.Packed(i)+i] * pair[0][element.Packed(j)+j])
				if got := product(pair[1], back(i), back(j)); !(math.Abs(got-want) <= 1e-8*scale) {
					bad("axes: in axes turned by %g rad the %s between unknowns %d and %d is %.6g, not %.6g; a result must not depend on the axes", angle, name, i, j, got, want)
					return
				}
			}
		}
	}
}
