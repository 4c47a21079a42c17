package main

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"hushframe/stages/kinds"
)

func found(frequency, damping float64, direction ...float64) kinds.IdentifiedMode {
	return kinds.IdentifiedMode{Kind: kinds.ModeStructure, Frequency: frequency, Damping: damping, Direction: direction}
}

func mode(frequency, damping, strength float64, direction ...float64) trueMode {
	return trueMode{Frequency: frequency, Damping: damping, Strength: strength, Direction: [3]float64(direction)}
}

// What is found is held to the right true mode: one that is right, one whose damping is off, one that is none, and one that is a rotor order.
func TestJudge(t *testing.T) {
	tr := &truth{BestAfter: 58, Modes: []trueMode{
		mode(100, 0.01, 100, 1, 0, 0), mode(101, 0.02, 100, 0, 1, 0), mode(200, 0.02, 50, 0, 0, 1), mode(205, 0.1, 1, 0, 0, 1), mode(300, 0.02, 50, 1, 0, 0)}}
	// Four times as long a recording halves the errors: the mode at 100 Hz can be known, that at 300 Hz cannot.
	tr.Modes[0].BestFrequency, tr.Modes[0].BestDamping = 1.9, 0.001
	tr.Modes[4].BestFrequency, tr.Modes[4].BestDamping = 0.1, 0.013
	tr.Rotors = append(tr.Rotors, struct {
		Speed float64 `json:"mean_hover_rpm"`
	}{16000})
	doubtful := found(300, 0.02, 1, 0, 0)
	doubtful.Kind = kinds.ModeDoubtful
	x := &kinds.Identified{Start: 10, End: 10 + 4*58, From: 80, To: 500, Rate: 2000, Modes: []kinds.IdentifiedMode{
		found(100.5, 0.011, 0, 1, 0), found(200.5, 0.03, 0, 0.1, 0.99), found(150, 0.01, 1, 0, 0), found(266, 0.01, 1, 0, 0), doubtful}}
	v := judge(tr, x)
	if n := v.tally(); n != (tally{seen: 4, knowable: 3, found: 2, knowableFound: 2, off: 2}) || len(v.unknown) != 2 || len(v.orders) != 1 {
		t.Errorf("%+v, false %d, orders %d", n, len(v.unknown), len(v.orders))
	}
	// 100.5 Hz moves about pitch, and so is the mode at 101 Hz, not the nearer one at 100 Hz; its damping is 45 % off.
	for _, r := range v.rows {
		if r.Frequency == 101 && (r.found == nil || r.found.Frequency != 100.5 || r.right()) || r.Frequency == 100 && r.found != nil {
			t.Errorf("%+v", r)
		}
	}
	x.Modes[0].Damping = 0.025
	// Off by 0.5 Hz and 0.005, and by 0.5 Hz and 0.01: the second says so.
	x.Modes[0].FrequencyError, x.Modes[0].DampingError = 0.25, 0.005
	x.Modes[1].FrequencyError, x.Modes[1].DampingError = 0.5, 0.006
	if n := judge(tr, x).tally(); n.right != 1 || n.off != 1 || n.said != 1 {
		t.Errorf("%+v", n)
	}
	f, z, inside := judge(tr, x).scores()
	if math.Abs(f-math.Sqrt((4+1)/2.0)) > 1e-9 || math.Abs(z-math.Sqrt((1+100.0/36)/2)) > 1e-9 || inside != 1 {
		t.Errorf("scores %g, %g, %g", f, z, inside)
	}
	first := v
	v.add(judge(tr, x))
	if n := v.tally(); n.seen != 8 || n.right != 1 {
		t.Errorf("two together: %+v", n)
	}
	var text bytes.Buffer
	first.print(&text)
	for _, want := range []string{"missed", "off", "none of the truth: 150.0 Hz", "4 true modes are seen, 2 of them found; 3 can be known from this recording to 1 % and 30 % of damping, 2 of them found",
		"of the modes told 0 are right, 2 off (0 of them by less than twice their own errors), 2 false, 1 of these at a rotor order", "not knowable in less than 272 s", "±0.95"} {
		if !strings.Contains(text.String(), want) {
			t.Errorf("%q is missing in\n%s", want, text.String())
		}
	}
}

// A mode alone makes all of the density at its frequency; of two equal ones at the same place and direction each makes half.
func TestShare(t *testing.T) {
	one := mode(100, 0.02, 10, 1, 0, 0)
	across := mode(100, 0.02, 90, 0, 1, 0)
	tr := &truth{Modes: []trueMode{one, across}}
	if s := tr.share(0); math.Abs(s-1) > 1e-12 {
		t.Errorf("alone %g", s)
	}
	tr.Modes[1] = one
	if s := tr.share(0); math.Abs(s-0.5) > 1e-12 {
		t.Errorf("of two %g", s)
	}
}
