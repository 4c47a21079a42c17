package draw

import (
	"encoding/xml"
	"errors"
	"io"
	"math"
	"strings"
	"testing"
)

func TestWhirlDrawsLinesOrdersAndMeetings(t *testing.T) {
	w := &Whirl{About: "modes", Fastest: 30000, Highest: 500, Mark: Mark{16000, "hover"},
		Lines:  []Curve{{Name: "4", X: []float64{0, 15000, 30000}, Y: []float64{120, 118, 110}}, {Name: "9", X: []float64{0, 15000, 30000}, Y: []float64{212, math.NaN(), 205}}},
		Orders: []Order{{1.0 / 60, "1"}, {3.0 / 60, "3"}}, Meets: []Peak{{X: 7200, Y: 120}, {X: 40000, Y: 400}}}
	svg := w.Draw()
	d := xml.NewDecoder(strings.NewReader(svg))
	for {
		if _, err := d.Token(); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
	}
	for part, want := range map[string]int{"curve predicted": 2, "curve observed": 2, "<circle": 1, ">hover<": 1, "NaN": 0} {
		if got := strings.Count(svg, part); got != want {
			t.Errorf("%d times %q, want %d", got, part, want)
		}
	}
	if (&Whirl{}).Draw() != "" {
		t.Error("an empty diagram draws something")
	}
}
