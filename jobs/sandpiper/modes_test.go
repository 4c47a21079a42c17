package sandpiper

import (
	"math"
	"slices"
	"strings"
	"testing"

	"hushframe/core/mechanics/assembly"
	"hushframe/stages/kinds"
)

// TestFinerMesh holds what the job says of its modes: six rigid-body motions
// far below the first elastic mode, at least eight elastic modes below 750 Hz,
// none missed, and each within 1 % of that on a finer mesh.
func TestFinerMesh(t *testing.T) {
	d := perform(t, "modes.hcl", nil)
	if r := quantity(t, d, "modes", "rigid_ratio"); !(r < 1e-3) {
		t.Errorf("rigid-body frequencies reach %g of the first elastic one", r)
	}
	m := modes(t, d)
	if !m.Proved {
		t.Error("no count proves that the modes are complete")
	}
	rigid := 0
	for _, k := range m.Basis.Kinds {
		if k == "rigid" {
			rigid++
		}
	}
	if rigid != 6 {
		t.Errorf("%d rigid-body vectors", rigid)
	}
	base := frequencies(m, 750)
	if len(base) < 8 {
		t.Fatalf("%d elastic modes below 750 Hz", len(base))
	}
	fine := frequencies(modes(t, perform(t, "modes.hcl", map[string]string{"mesh_size": "3.5 mm"})), 760)
	rough := frequencies(modes(t, perform(t, "modes.hcl", map[string]string{"mesh_size": coarse})), 760)
	for i, f := range base {
		if e := math.Abs(f/fine[i] - 1); e > 0.01 {
			t.Errorf("mode %d: %.2f Hz, %.2f Hz on a finer mesh", i+1, f, fine[i])
		}
		if e := math.Abs(rough[i]/fine[i] - 1); e > 0.005 {
			t.Errorf("mode %d: %.2f Hz on the coarse mesh of these tests, %.2f Hz on a fine one", i+1, rough[i], fine[i])
		}
	}
}

// TestTrends changes one thing at a time: the modes must move the right way,
// and by no more than that thing could move them alone.
func TestTrends(t *testing.T) {
	with := func(set map[string]string) []float64 {
		set["mesh_size"] = coarse
		return frequencies(modes(t, perform(t, "modes.hcl", set)), math.Inf(1))
	}
	base := with(map[string]string{})
	n := len(frequencies(modes(t, perform(t, "modes.hcl", map[string]string{"mesh_size": coarse})), 500))

	// Stiffness up, mass the same: no mode may fall, and none rise by more than √2 (Rayleigh's quotient).
	stiff := with(map[string]string{"carbon_modulus": "110 GPa"})
	moved := 0
	for i := range n {
		r := stiff[i] / base[i]
		if r < 1-1e-6 || r > math.Sqrt2+1e-6 {
			t.Errorf("twice the modulus moves mode %d by a factor %.4f", i+1, r)
		}
		if r > 1.05 {
			moved++
		}
	}
	if moved < n/4 {
		t.Errorf("twice the modulus moves only %d of %d modes by more than 5 %%", moved, n)
	}

	// Mass up, stiffness the same: no mode may rise, and none fall by more than √2.
	heavy := with(map[string]string{"battery_mass": "380 g"})
	moved = 0
	for i := range n {
		r := heavy[i] / base[i]
		if r > 1+1e-6 || r < math.Sqrt(0.5)-1e-6 {
			t.Errorf("twice the battery moves mode %d by a factor %.4f", i+1, r)
		}
		if r < 0.98 {
			moved++
		}
	}
	if moved < 3 {
		t.Errorf("twice the battery moves only %d modes by more than 2 %%", moved)
	}

	// Arms of twice the thickness: the mode of arm bending that the gyro feels
	// on roll rises by far more than the mass of the arms could lower it.
	thick := with(map[string]string{"arm_thickness": "10 mm"})
	const roll = 3 // mode 4
	if r := thick[roll] / base[roll]; r < 1.05 || r > 2.9 {
		t.Errorf("arms of twice the thickness move mode 4 from %.1f to %.1f Hz", base[roll], thick[roll])
	}
	var up int
	for i := range n {
		if thick[i] > base[i]*1.005 {
			up++
		}
	}
	if up < n/2 {
		t.Errorf("arms of twice the thickness raise only %d of %d modes", up, n)
	}
}

// TestPractice holds the demo to facts of the trade.
// Common practice, no source: about 14 modes between 150 and 750 Hz in a frame
// of this class, give or take half (H-MODECOUNT of testdata/known); the modes
// reach 1.5 times the highest swept frequency (H-MODES-1.5); twist of the arms
// under the motors' height shows on roll and pitch (H-ARM-TORSION).
func TestPractice(t *testing.T) {
	d := perform(t, "baseline.hcl", map[string]string{"mesh_size": coarse})
	m := modes(t, d)
	count, twist := 0, false
	mount := slices.Index(m.Survey.Kinds, "mount")
	for _, x := range m.Survey.Modes {
		// The rule is about the frame: what mostly sways on its mounts (six modes each of stack, battery and camera)
		// is left out.
		if x.Frequency >= 150 && x.Frequency <= 750 && x.ByKind[mount] < 0.5 {
			count++
		}
		if x.Motion == "twist" && (x.Part == "arm_fl" || x.Part == "arm_fr" || x.Part == "arm_rl" || x.Part == "arm_rr") && math.Max(x.Strength[0], x.Strength[1]) > 1 {
			twist = true
		}
	}
	if count < 7 || count > 21 {
		t.Errorf("%d modes between 150 and 750 Hz", count)
	}
	if !twist {
		t.Error("no mode of arm twist is felt on roll or pitch")
	}
	if m.UpTo < 1.5*m.SweptTo {
		t.Errorf("modes up to %g Hz for a sweep to %g Hz", m.UpTo, m.SweptTo)
	}
}

// TestEnergiesAddUp: of each mode, the shares of parts, joints (the pressed faces of the sandwich among them) and mounts are
// all of its strain energy; those of the triangles of a plate are the share of the plate, and leave joints and mounts out.
func TestEnergiesAddUp(t *testing.T) {
	d := perform(t, "baseline.hcl", map[string]string{"mesh_size": coarse})
	m := modes(t, d)
	a, err := d.Artifact("shells", "mesh")
	if err != nil {
		t.Fatal(err)
	}
	shells, err := kinds.DecodeMesh(a)
	if err != nil {
		t.Fatal(err)
	}
	pressed := 0.0
	for _, x := range m.Survey.Modes {
		all, elsewhere := 0.0, 0.0
		own := map[string]float64{}
		for e, share := range x.ByElement {
			own[shells.Parts[shells.TrianglePart[e]].Name] += share
		}
		plates := 0
		for g, share := range x.ByGroup {
			all += share
			group := m.Basis.Groups[g]
			if sum, ok := own[group.Name]; ok && group.Kind == assembly.PartGroup {
				plates++
				if math.Abs(sum-share) > 1e-9 {
					t.Errorf("mode %d: the triangles of %s hold %.12g of the energy, the plate %.12g", x.Number, group.Name, sum, share)
				}
				all += sum - share // counted by its triangles
				continue
			}
			elsewhere += share
			if group.Kind == assembly.JointGroup && strings.HasPrefix(group.Name, "faces") {
				pressed = max(pressed, share)
			}
		}
		if math.Abs(all-1) > 1e-9 || plates != len(own) || plates == 0 || !(elsewhere > 0) {
			t.Errorf("mode %d: the shares add up to %.12g, %.3g of it beside the %d plates with triangles", x.Number, all, elsewhere, plates)
		}
	}
	if !(pressed > 0.001) {
		t.Errorf("pressed faces hold %.2g of the energy of a mode at most: the test sees none", pressed)
	}
}
