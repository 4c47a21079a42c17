package sweep

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// tilting is the made-up frame whose rotors tilt in its modes and have polar
// inertia: mode 1 tilts a about x, mode 2 about y.
func tilting() (*kinds.Modes, *airframe.Properties) {
	m, p := frame()
	a := m.Basis.Sites[0].Motion
	a[6][3], a[7][4] = 120, 150
	for k := range p.Rotors {
		p.Rotors[k].PolarInertia = 6e-6
		p.Bodies[k].Inertia = [6]float64{4e-6, 4e-6, 6e-6}
	}
	return m, p
}

// Two modes at 150 and 230 Hz coupled by H·120·150: the frequencies follow from
// (ω₁²−ω²)(ω₂²−ω²) = (ω g)² (loss moves them by η² only).
func TestModesMoveWithTheSpeedOfTheRotors(t *testing.T) {
	m, p := tilting()
	for s := range m.Basis.Sites { // no other motion couples
		for v := range m.Basis.Sites[s].Motion {
			for c := 3; c < 6; c++ {
				if v < 6 || v > 7 {
					m.Basis.Sites[s].Motion[v][c] = 0
				}
			}
		}
	}
	m.Basis.Sites[2].Motion[6][3], m.Basis.Sites[2].Motion[7][4] = 20, 30
	r, out := run(t, m, p, nil)
	k := at(r.Speeds, 1700)
	if k < 0 || r.Speeds[0] != 0 || r.Speeds[len(r.Speeds)-1] != 3400 {
		t.Fatalf("speeds %v", r.Speeds)
	}
	g := 6e-6 * 1700 * 120 * 150
	w1, w2 := math.Pow(2*math.Pi*150, 2), math.Pow(2*math.Pi*230, 2)
	mean, root := (w1+w2+g*g)/2, math.Sqrt(math.Pow((w1+w2+g*g)/2, 2)-w1*w2)
	for i, want := range []float64{math.Sqrt(mean-root) / (2 * math.Pi), math.Sqrt(mean+root) / (2 * math.Pi)} {
		w := r.Whirl[i]
		if w.Mode != i+1 || math.Abs(w.Frequency[k]/want-1) > 1e-3 || math.Abs(w.Frequency[0]-[]float64{150, 230}[i]) > 0.1 {
			t.Errorf("mode %d has %g Hz at hover and %g at rest, want %g at hover", w.Mode, w.Frequency[k], w.Frequency[0], want)
		}
		// The peak of the response lies there too, and is named after the mode.
		near := false
		for _, x := range r.Peaks {
			near = near || math.Abs(x.Frequency-want) < 0.01*want && len(x.Modes) > 0 && x.Modes[0] == w.Mode
		}
		if !near {
			t.Errorf("no peak of mode %d near %g Hz among %+v", w.Mode, want, r.Peaks)
		}
	}
	if r.Whirl[0].Direction[k] > -0.2 || r.Whirl[1].Direction[k] < 0.2 {
		t.Errorf("directions %g and %g, want backward below forward", r.Whirl[0].Direction[k], r.Whirl[1].Direction[k])
	}
	// On a critical speed the order has the frequency of the line there.
	for _, c := range r.Critical {
		if math.Abs(c.Frequency-float64(c.Order)*c.Speed/(2*math.Pi)) > 1e-9*c.Frequency || c.Speed > 3400 || len(c.Rotors) != 2 {
			t.Errorf("critical speed %+v", c)
		}
	}
	if x := r.Rotors[0]; !r.Spinning || x.Speed != 1700 || x.Polar != 6e-6 || x.Tilt != 4e-6 || math.Abs(x.Equal-1.5*1700/(2*math.Pi)) > 1e-9 {
		t.Errorf("rotor %+v", x)
	}
	if len(out.Notes) == 0 || strings.Contains(strings.Join(out.Notes, ""), "two blades") {
		t.Errorf("notes %q", out.Notes)
	}
	p.Rotors[1].Blades, p.Rotors[1].BellInertia, p.Rotors[1].PropellerInertia = 2, 2e-6, 4e-6
	split, after := run(t, m, p, nil)
	if x := split.Rotors[1]; x.Bell != 2e-6 || x.Propeller != 4e-6 || !math.IsNaN(split.Rotors[0].Bell) {
		t.Errorf("rotors %+v", split.Rotors)
	}
	if !strings.Contains(strings.Join(after.Notes, ""), "two blades (b)") {
		t.Errorf("notes %q", after.Notes)
	}
	for _, s := range after.Summary {
		// Two thirds of the inertia are the propeller's, and of the frequency with it.
		if s.Title == "Spinning rotors" && (s.Rows[0][3] != "–" || s.Rows[1][3] != "4.00" || s.Rows[1][7] != "406" || s.Rows[1][8] != "271") {
			t.Errorf("rotors %q", s.Rows)
		}
	}
	// Neighbours at the speed of the response: modes 1 and 2 with their gap there.
	if len(r.Separations) != 2 || r.Separations[0].Lower != 1 || r.Separations[0].Upper != 2 ||
		math.Abs(r.Separations[0].Gap-(r.Whirl[1].Frequency[k]-r.Whirl[0].Frequency[k])) > 1e-9 || !(r.Separations[0].LowerAlone[0] > 0) {
		t.Errorf("separations %+v", r.Separations)
	}
	titles := ""
	for _, s := range out.Summary {
		titles += s.Title + "\n"
		for _, row := range s.Rows {
			if len(row) != len(s.Columns) {
				t.Errorf("%s: %d cells under %d columns", s.Title, len(row), len(s.Columns))
			}
		}
	}
	if !strings.Contains(titles, "Modes that move with rotor speed") || !strings.Contains(titles, "Spinning rotors") {
		t.Errorf("summary has %s", titles)
	}
}

func TestRotorSpeedIsChosen(t *testing.T) {
	m, p := tilting()
	peak := func(speed string) (float64, *kinds.Response) {
		r, _ := run(t, m, p, stage.Arguments{"rotor_speed": speed})
		x, ok := strongest(r, "roll")
		if !ok {
			t.Fatalf("%s: no roll peak", speed)
		}
		return x.Frequency, r
	}
	none, still := peak("none")
	hover, _ := peak("hover")
	same, _ := peak(fmt.Sprintf("%.10f rpm", 1700/rpm))
	fast, quick := peak("30000 rpm")
	if math.Abs(none-150) > 0.1 || still.Spinning {
		t.Errorf("without gyroscopic moments roll peaks at %g Hz", none)
	}
	if !(hover < none-0.5) || math.Abs(same-hover) > 1e-6*hover || !(fast < hover-0.5) {
		t.Errorf("roll peaks at %g, %g and %g Hz at rest, hover and 30000 rpm", none, hover, fast)
	}
	if f := quick.Lines[0].Frequency; math.Abs(f-500) > 1e-9 {
		t.Errorf("unbalance acts at %g Hz, want 500", f)
	}
	for _, bad := range []string{"fast", "200 Hz", "0 rpm", "-3 rpm", ""} {
		_, err := Stage{}.Run(context.Background(), call(t, m, p, stage.Arguments{"rotor_speed": bad}))
		if f := fault.From(err); err == nil || f.Argument != "rotor_speed" || f.Remedy == "" {
			t.Errorf("%q: %#v", bad, err)
		}
	}
}
