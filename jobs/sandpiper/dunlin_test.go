package sandpiper

import (
	"math"
	"path/filepath"
	"testing"

	"hushframe/stages/kinds"
)

// TestAnotherFrame runs a frame of another layout, one plate and six rotors,
// through the same code.
func TestAnotherFrame(t *testing.T) {
	d := perform(t, filepath.Join("..", "..", "testdata", "frames", "dunlin", "job.hcl"), nil)
	m := modes(t, d)
	if !m.Proved || m.RigidRatio > 1e-3 {
		t.Errorf("proved %v, rigid ratio %g", m.Proved, m.RigidRatio)
	}
	if n := len(m.Survey.Rotors); n != 6 {
		t.Errorf("%d rotors", n)
	}
	// The throttle of the job is 7550 rpm for four fifths of the flight, 0.4 lying 5/6 of the way from 3800 to 8300 rpm, and
	// 8300 + 2/11 · 5700 rpm for the rest.
	a, err := d.Artifact("flight", "response")
	if err != nil {
		t.Fatal(err)
	}
	r, err := kinds.DecodeResponse(a)
	if err != nil {
		t.Fatal(err)
	}
	mean := 0.0
	for _, x := range r.Flight {
		mean += x.Share * x.Speed * 30 / math.Pi
	}
	if want := 0.8*7550 + 0.2*(8300+5700.0*2/11); math.Abs(mean/want-1) > 1e-9 {
		t.Errorf("a mean speed of %g rpm over the flight, want %g", mean, want)
	}
	// Turned by 180 degrees about z the frame is itself, but for its rectangular
	// battery and stack, which are too: every mode is even or odd, and so turns
	// the gyro either in yaw or in roll and pitch, never both.
	// Modes that the gyro hardly feels are left out: what it feels of them is the mesh, which has no such symmetry.
	var strongest float64
	for _, x := range m.Survey.Modes {
		strongest = max(strongest, x.Strength[0], x.Strength[1], x.Strength[2])
	}
	for _, x := range m.Survey.Modes {
		tilt := max(x.Strength[0], x.Strength[1])
		if yaw := x.Strength[2]; min(yaw, tilt) > 0.02*max(yaw, tilt) && max(yaw, tilt) > 0.01*strongest {
			t.Errorf("mode %d at %.1f Hz: roll and pitch %.3g, yaw %.3g", x.Number, x.Frequency, tilt, yaw)
		}
	}
}
