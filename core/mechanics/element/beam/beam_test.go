package beam_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/known"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/beam"
)

func matrices(s beam.Section, length float64) (k, m *mat.SymDense) {
	n := element.Packed(beam.Unknowns)
	ks, ms := make([]float64, n), make([]float64, n)
	beam.Matrices(s, length, ks, ms)
	k, m = mat.NewSymDense(beam.Unknowns, nil), mat.NewSymDense(beam.Unknowns, nil)
	for i := range beam.Unknowns {
		for j := range i + 1 {
			k.SetSym(i, j, ks[element.Packed(i)+j])
			m.SetSym(i, j, ms[element.Packed(i)+j])
		}
	}
	return k, m
}

func TestTorsionConstant(t *testing.T) {
	row := known.One(t, "A_beams.json", "A-TORSION-J")
	var got []float64
	for _, ratio := range []float64{1, 1.5, 2, 2.5, 3, 4, 5, 10} { // the row's labels
		got = append(got, beam.TorsionConstant(0.002*ratio, 0.002)/(ratio*0.002*0.002*0.002*0.002))
	}
	row.Check(t, 1, got...)
}

// Rows A-ORTHO-TORSION-*: an orthotropic bar twists like an isotropic one that is wider by √(Gxz/Gxy).
func TestOrthotropicTorsion(t *testing.T) {
	for _, row := range known.Rows(t, "A_beams.json", "A-ORTHO-TORSION-") {
		var c struct {
			Width     float64 `json:"width_y_m"`
			Thickness float64 `json:"thickness_z_m"`
			Gxy       float64 `json:"Gxy_Pa"`
			Gxz       float64 `json:"Gxz_Pa"`
		}
		row.Decode(t, &c)
		wider := math.Sqrt(c.Gxz / c.Gxy)
		row.Check(t, 1, c.Gxy/wider*beam.TorsionConstant(c.Width*wider, c.Thickness))
	}
}

// One element is exact under end loads: row A-STATIC-CANT, in both planes.
func TestCantileverIsExact(t *testing.T) {
	row := known.One(t, "A_beams.json", "A-STATIC-CANT")
	var c struct {
		L      float64 `json:"L_m"`
		Width  float64 `json:"width_m"`
		Height float64 `json:"height_m"`
		E      float64 `json:"E_Pa"`
		Nu     float64
		Force  float64 `json:"tip_force_N"`
	}
	row.Decode(t, &c)
	for plane, section := range []beam.Section{
		beam.Rectangle(c.Width, c.Height, c.E, c.Nu, 1),
		beam.Rectangle(c.Height, c.Width, c.E, c.Nu, 1),
	} {
		k, _ := matrices(section, c.L)
		load := mat.NewVecDense(6, nil)
		deflection, rotation, sign := 2, 4, -1.0 // up bends nose down: θ_y = -w'
		if plane == 1 {
			deflection, rotation, sign = 1, 5, 1
		}
		load.SetVec(deflection, c.Force)
		var u mat.VecDense
		if err := u.SolveVec(k.SliceSym(6, 12), load); err != nil {
			t.Fatal(err)
		}
		row.Check(t, 1, u.AtVec(deflection), sign*u.AtVec(rotation))
	}
}

// Rigid motions cost nothing and carry the momentum of the bar; the energies add up.
func TestRigidMotionAndEnergies(t *testing.T) {
	const length, width, height, rho = 0.1, 0.012, 0.005, 1550
	s := beam.Rectangle(width, height, 55e9, 0.3, rho)
	k, m := matrices(s, length)
	quad := func(a *mat.SymDense, u []float64) float64 {
		v := mat.NewVecDense(12, u)
		return mat.Inner(v, a, v)
	}
	mass := rho * length * width * height
	about := func(a, b float64) float64 { return mass * (a*a + b*b) / 12 }
	// About node 0: parallel axes for bending rotations.
	steiner := mass * length * length / 4
	for c, want := range []float64{mass, mass, mass, about(width, height), about(length, height) + steiner, about(length, width) + steiner} {
		u := make([]float64, 12)
		u[c], u[6+c] = 1, 1
		switch c {
		case 4:
			u[8] = -length
		case 5:
			u[7] = length
		}
		if e := quad(k, u); math.Abs(e) > 1e-9*mat.Norm(k, 2)*length*length {
			t.Errorf("rigid motion %d costs %g J", c, e/2)
		}
		if got := quad(m, u); math.Abs(got-want) > 1e-12*want {
			t.Errorf("rigid motion %d has inertia %g, want %g", c, got, want)
		}
	}
	rng := rand.New(rand.NewPCG(1, 2))
	for range 5 {
		u := make([]float64, 12)
		for i := range u {
			u[i] = rng.NormFloat64()
		}
		sum := 0.0
		for _, e := range beam.Energies(s, length, u) {
			if e < 0 {
				t.Errorf("negative energy %g", e)
			}
			sum += e
		}
		if want := quad(k, u) / 2; math.Abs(sum-want) > 1e-12*want {
			t.Errorf("energies add up to %g, want %g", sum, want)
		}
	}
}

func BenchmarkMatrices(b *testing.B) {
	s := beam.Tube(0.005, 0, 70e9, 0.33, 2700)
	n := element.Packed(beam.Unknowns)
	k, m := make([]float64, n), make([]float64, n)
	for b.Loop() {
		beam.Matrices(s, 0.01, k, m)
	}
}
