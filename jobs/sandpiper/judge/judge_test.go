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

// What is found is held to the right true mode: one that is right, one whose damping is off, one that is none, and one that is a rotor order.
func TestJudge(t *testing.T) {
	tr := &truth{Modes: []trueMode{
		{100, 0.01, [3]float64{1, 0, 0}, 100}, {101, 0.02, [3]float64{0, 1, 0}, 100}, {200, 0.02, [3]float64{0, 0, 1}, 50},
		{205, 0.1, [3]float64{0, 0, 1}, 1}, {300, 0.02, [3]float64{1, 0, 0}, 50}}}
	tr.Rotors = append(tr.Rotors, struct {
		Speed float64 `json:"mean_hover_rpm"`
	}{16000})
	doubtful := found(300, 0.02, 1, 0, 0)
	doubtful.Kind = kinds.ModeDoubtful
	x := &kinds.Identified{From: 80, To: 500, Rate: 2000, Modes: []kinds.IdentifiedMode{
		found(100.5, 0.011, 0, 1, 0), found(200.5, 0.03, 0, 0.1, 0.99), found(150, 0.01, 1, 0, 0), found(266, 0.01, 1, 0, 0), doubtful}}
	v := judge(tr, x)
	seen, hits, right, off := v.counts()
	if seen != 4 || hits != 2 || right != 0 || off != 2 || len(v.unknown) != 2 || len(v.orders) != 1 {
		t.Errorf("seen %d, found %d, right %d, off %d, false %d, orders %d", seen, hits, right, off, len(v.unknown), len(v.orders))
	}
	// 100.5 Hz moves about pitch, and so is the mode at 101 Hz, not the nearer one at 100 Hz; its damping is 45 % off.
	for _, r := range v.rows {
		if r.Frequency == 101 && (r.found == nil || r.found.Frequency != 100.5 || r.right()) || r.Frequency == 100 && r.found != nil {
			t.Errorf("%+v", r)
		}
	}
	x.Modes[0].Damping = 0.025
	if _, _, right, _ := judge(tr, x).counts(); right != 1 {
		t.Errorf("%d are right", right)
	}
	var text bytes.Buffer
	v.print(&text)
	for _, want := range []string{"missed", "off", "none of the truth: 150.0 Hz", "4 true modes are seen, 2 of them found; of the modes told 0 are right, 2 off, 2 false, 1 of these at a rotor order"} {
		if !strings.Contains(text.String(), want) {
			t.Errorf("%q is missing in\n%s", want, text.String())
		}
	}
}

// A mode alone makes all of the density at its frequency; of two equal ones at the same place and direction each makes half.
func TestShare(t *testing.T) {
	one := trueMode{100, 0.02, [3]float64{1, 0, 0}, 10}
	across := trueMode{100, 0.02, [3]float64{0, 1, 0}, 90}
	tr := &truth{Modes: []trueMode{one, across}}
	if s := tr.share(0); math.Abs(s-1) > 1e-12 {
		t.Errorf("alone %g", s)
	}
	tr.Modes[1] = one
	if s := tr.share(0); math.Abs(s-0.5) > 1e-12 {
		t.Errorf("of two %g", s)
	}
}
