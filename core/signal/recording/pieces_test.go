package recording

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

func told(pieces []Piece) string {
	var out []string
	for _, p := range pieces {
		out = append(out, fmt.Sprintf("%s %.2f-%.2f", p.Why, p.From, p.To))
	}
	return strings.Join(out, ", ")
}

// A flight at 100 Hz: idle to 5 s, climb in 1 s, hover to 20 s, a punch from 20 to 22 s, fast from 22 to 30 s, landed at 35 s.
func TestPieces(t *testing.T) {
	var time, speed []float64
	for i := range 4000 {
		at := 10 + float64(i)/100
		v := 100.0
		switch x := at - 10; {
		case x >= 5 && x < 6:
			v = 100 + 900*(x-5)
		case x >= 6 && x < 20:
			v = 1000 + 10*math.Sin(9*x)
		case x >= 20 && x < 22:
			v = 1000 + 400*math.Sin(math.Pi*(x-20)/2)
		case x >= 22 && x < 30:
			v = 1250
		case x >= 30 && x < 35:
			v = 950
		}
		time, speed = append(time, at), append(speed, v)
	}
	// Two rotors, one of which turns the other way round and is logged a fourth as often.
	var seldom, back []float64
	for i := 0; i < len(time); i += 4 {
		seldom, back = append(seldom, time[i]), append(back, -speed[i])
	}
	got := Pieces([][]float64{time, seldom}, [][]float64{speed, back}, 10, 49.99, PieceSettings{})
	want := map[string][][2]float64{ // up to the width of the sliding second
		PieceGround: {{10, 15.6}, {45, 49.99}}, PieceTakeOff: {{15.6, 17.6}}, PieceLanding: {{44, 45}}, PieceSteady: {{17.6, 29.3}, {32, 39.3}, {40.6, 44}},
	}
	for why, spans := range want {
		for _, s := range spans {
			found := false
			for _, p := range got {
				found = found || p.Why == why && math.Abs(p.From-s[0]) < 0.5 && math.Abs(p.To-s[1]) < 0.5
			}
			if !found {
				t.Errorf("no piece %s from %g to %g s in %s", why, s[0], s[1], told(got))
			}
		}
	}
	for i, p := range got {
		if i > 0 && p.From != got[i-1].To {
			t.Errorf("a hole before %g s", p.From)
		}
		if p.Why == PieceSteady && p.From > 32 && p.From < 38 && math.Abs(p.Level-1250) > 15 {
			t.Errorf("level %g", p.Level)
		}
	}
	if got[0].From != 10 || got[len(got)-1].To != 49.99 {
		t.Errorf("%s does not cover the whole", told(got))
	}
}

func TestPiecesOfLittle(t *testing.T) {
	if p := Pieces([][]float64{{0, 1}}, [][]float64{{0, 0}}, 0, 1, PieceSettings{}); p != nil {
		t.Errorf("rotors at rest make %v", p)
	}
	if p := Pieces([][]float64{{0, 1e9}}, [][]float64{{5, 5}}, 0, 1e9, PieceSettings{}); p != nil {
		t.Errorf("%d pieces of thirty years", len(p))
	}
	if p := Pieces([][]float64{{0, 0.1}}, [][]float64{{5, 5}}, 0, 0.1, PieceSettings{}); told(p) != "short 0.00-0.10" {
		t.Error(told(p))
	}
	var time, level []float64
	for i := range 1000 {
		time, level = append(time, float64(i)/100), append(level, 7)
	}
	if p := Pieces([][]float64{time}, [][]float64{level}, 0, 9.99, PieceSettings{}); told(p) != "steady 0.00-9.99" || p[0].Level != 7 {
		t.Error(told(p))
	}
}

func TestWithin(t *testing.T) {
	timing := Timing{Samples: 100, Runs: []Run{{0, 40}, {40, 100}}, Gaps: []Gap{{After: 39, Missing: 5}}}
	got := timing.Within([]Run{{10, 20}, {35, 45}, {80, 100}})
	if fmt.Sprint(got.Runs) != "[{10 20} {35 40} {40 45} {80 100}]" || got.Samples != 40 || len(got.Gaps) != 1 {
		t.Errorf("%+v", got)
	}
	if got := timing.Within([]Run{{10, 40}, {40, 60}}); len(got.Gaps) != 0 || got.Samples != 50 {
		t.Errorf("a gap between two pieces counts: %+v", got)
	}
}
