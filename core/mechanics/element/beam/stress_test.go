package beam_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/known"
	"hushframe/core/mechanics/element/beam"
)

func TestTorsionModulus(t *testing.T) {
	row := known.One(t, "A_beams.json", "A-TORSION-TAU")
	const thickness = 0.002
	var got []float64
	for _, ratio := range []float64{1, 1.5, 2, 2.5, 3, 4, 5, 10} { // the row's labels
		got = append(got, beam.TorsionModulus(thickness, thickness*ratio)/(ratio*thickness*thickness*thickness))
	}
	row.Check(t, 0.01, got...)
}

// Forces are stiffness times motion, with sections that differ about their axes, and without shear.
func TestForcesAreThoseOfTheStiffness(t *testing.T) {
	const length = 0.03
	slender := beam.Rectangle(0.012, 0.005, 55e9, 0.3, 1550)
	slender.GAy, slender.GAz = math.Inf(1), math.Inf(1)
	rng := rand.New(rand.NewPCG(3, 5))
	for _, s := range []beam.Section{beam.Rectangle(0.012, 0.005, 55e9, 0.3, 1550), beam.Tube(0.006, 0.003, 70e9, 0.33, 2700), slender} {
		k, _ := matrices(s, length)
		u := make([]float64, beam.Unknowns)
		for i := range u {
			u[i] = rng.NormFloat64()
		}
		var want mat.VecDense
		want.MulVec(k, mat.NewVecDense(beam.Unknowns, u))
		for i, got := range beam.Forces(s, length, u) {
			if math.Abs(got-want.AtVec(i)) > 1e-12*mat.Norm(&want, 2) {
				t.Errorf("force %d is %g, want %g", i, got, want.AtVec(i))
			}
		}
	}
}

// A cantilever under one load at a time: N/A, F·L/W and T/W with the moduli of the sections written out (S. P. Timoshenko,
// Strength of Materials), and nothing else beside them.
func TestStressesOfACantilever(t *testing.T) {
	const length, width, height, outer, inner = 0.04, 0.012, 0.005, 0.006, 0.004
	polar := math.Pi / 32 * (math.Pow(outer, 4) - math.Pow(inner, 4))
	for name, c := range map[string]struct {
		section                   beam.Section
		area, upright, flat, turn float64
	}{
		"rectangle": {beam.Rectangle(width, height, 55e9, 0.3, 1), width * height, width * height * height / 6, height * width * width / 6,
			beam.TorsionModulus(width, height)},
		"tube": {beam.Tube(outer, inner, 70e9, 0.33, 1), math.Pi / 4 * (outer*outer - inner*inner), polar / outer, polar / outer, 2 * polar / outer},
	} {
		k, _ := matrices(c.section, length)
		for load, want := range map[int][2]beam.Stress{
			0: {{Tension: 1 / c.area}, {Tension: 1 / c.area}},
			1: {{AboutZ: length / c.flat}, {}},     // a force to the left bends about +z before it
			2: {{AboutY: -length / c.upright}, {}}, // one upwards about -y
			3: {{Torsion: 1 / c.turn}, {Torsion: 1 / c.turn}},
			4: {{AboutY: 1 / c.upright}, {AboutY: 1 / c.upright}},
			5: {{AboutZ: 1 / c.flat}, {AboutZ: 1 / c.flat}},
		} {
			f := mat.NewVecDense(6, nil)
			f.SetVec(load, 1)
			var end mat.VecDense
			if err := end.SolveVec(k.SliceSym(6, 12), f); err != nil {
				t.Fatal(err)
			}
			motion := make([]float64, beam.Unknowns)
			copy(motion[6:], end.RawVector().Data)
			for at, got := range beam.Stresses(c.section, length, motion) {
				size := 0.0
				for _, x := range []float64{want[0].Tension, want[0].AboutY, want[0].AboutZ, want[0].Torsion} {
					size = max(size, math.Abs(x))
				}
				for i, d := range []float64{got.Tension - want[at].Tension, got.AboutY - want[at].AboutY, got.AboutZ - want[at].AboutZ, got.Torsion - want[at].Torsion} {
					if math.Abs(d) > 1e-9*size {
						t.Errorf("%s under load %d, end %d, stress %d: off by %g of %g", name, load, at, i, d, size)
					}
				}
			}
		}
	}
}
