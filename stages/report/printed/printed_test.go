package printed

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"image/png"
	"io"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"hushframe/stages/report/draw"
)

// hostile is a name that would do harm where it is not escaped.
const hostile = `</text><script>alert("x")</script>&<b>` + "\u202eevil"

// pictures are one of each kind.
func pictures() map[string]*Picture {
	var x, y []float64
	for f := 80.0; f <= 500; f++ {
		u := f/200 - 200/f
		x, y = append(x, f), append(y, 1e-3/(u*u+1e-3))
	}
	up := make([]float64, len(y))
	down := make([]float64, len(y))
	for k := range y {
		up[k], down[k] = y[k]*1.3, y[k]*0.8
	}
	return map[string]*Picture{
		"response": Response("Rate "+hostile, &draw.Chart{X: draw.Axis{From: 80, To: 500}, Y: draw.Axis{Label: "(deg/s)²/Hz", Log: true}, Notes: []string{"a note"},
			Curves: []draw.Curve{{Name: "predicted", Class: "predicted", X: x, Y: y}, {Name: "recorded", Class: "observed", X: x, Y: y, Lower: down, Upper: up}},
			Bands:  []draw.Band{{From: 260, To: 280, Label: "order 1"}, {From: 900, To: 950, Label: "beyond"}},
			Marks:  []draw.Mark{{X: 200, Label: "8"}, {X: 700, Label: "9"}}, Points: []draw.Point{{X: 200, Y: 1, Label: "200", Class: "predicted"}, {X: 199, Y: 0.9, Class: "observed"}}}),
		"campbell": Campbell("Campbell", &draw.Chart{X: draw.Axis{Label: "rotor speed, rpm", To: 30000}, Y: draw.Axis{Label: "natural frequency, Hz", To: 500},
			Curves: []draw.Curve{{Name: "order 1", Class: "order", X: []float64{0, 30000}, Y: []float64{0, 500}}, {Name: "4", Class: "predicted", X: []float64{0, 30000}, Y: []float64{120, 130}}},
			Points: []draw.Point{{X: 7300, Y: 121}}, Marks: []draw.Mark{{X: 16000, Label: "hover"}}}),
		"shares": Shares("Bars", "share", Bars{Rows: []string{"1, 61 Hz", "2, 87 Hz"}, Parts: []string{hostile, "b", "c"}, Shares: [][]float64{{0.5, 0.5, 0}, {0.1, 0.2, 0.7}}}),
		"poles":  Poles("Poles", 80, 500, []Pole{{Order: 10, Frequency: 120}, {Order: 12, Frequency: 121, Stable: true}}, []draw.Mark{{X: 121, Label: "121"}}),
		"map": SpeedMap("Map", Map{Across: "rpm", Label: "(deg/s)²/Hz", Top: 400, Cells: []Cell{{From: 100, To: 200, Step: 1, Density: y}, {From: 200, To: 300, Step: 1, Density: y}},
			Orders: []Order{{Slope: 1, Label: "order 60"}}, Modes: []draw.Mark{{X: 100, Label: "3"}}}),
		"lines": Lines("Lines", "deg/s", []draw.Curve{{Name: "unbalance", X: []float64{1000, 2000, 3000}, Y: []float64{0.01, 1, 0.3}}}, draw.Mark{X: 2000, Label: "hover"}),
	}
}

// Equal data give equal bytes in both formats; SVG is well-formed with the texts in it and nothing that runs, PNG has the
// size and is not blank.
func TestPictures(t *testing.T) {
	again := pictures()
	for name, p := range pictures() {
		for _, format := range []string{SVG, PNG} {
			data, err := p.Write(format)
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			if second, _ := again[name].Write(format); !bytes.Equal(data, second) {
				t.Errorf("%s.%s differs when drawn again", name, format)
			}
			if third, _ := p.Write(format); !bytes.Equal(data, third) {
				t.Errorf("%s.%s differs when written again", name, format)
			}
			if format == PNG {
				checkPNG(t, name, p, data)
				continue
			}
			texts, elements := readSVG(t, name, data)
			if elements["script"] > 0 || elements["title"] != 1 || elements["path"] < 5 {
				t.Errorf("%s: %v", name, elements)
			}
			for _, e := range p.legend {
				if !strings.Contains(texts, e.words) {
					t.Errorf("%s: %q is not in the picture", name, e.words)
				}
			}
			if !strings.Contains(texts, p.title) || !strings.Contains(texts, p.y) {
				t.Errorf("%s: no title or axis in %q", name, texts)
			}
		}
	}
}

func checkPNG(t *testing.T, name string, p *Picture, data []byte) {
	t.Helper()
	m, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	if w, h := m.Bounds().Dx(), m.Bounds().Dy(); math.Abs(float64(w)-p.width.Points()/72*resolution) > 1 || math.Abs(float64(h)-p.height.Points()/72*resolution) > 1 {
		t.Errorf("%s is %d by %d", name, w, h)
	}
	colours := map[string]bool{}
	for y := 0; y < m.Bounds().Dy(); y += 3 {
		for x := 0; x < m.Bounds().Dx(); x += 3 {
			colours[fmt.Sprint(m.At(x, y))] = true
		}
	}
	if len(colours) < 10 {
		t.Errorf("%s has %d colours", name, len(colours))
	}
}

func readSVG(t *testing.T, name string, data []byte) (texts string, elements map[string]int) {
	t.Helper()
	elements = map[string]int{}
	d := xml.NewDecoder(bytes.NewReader(data))
	var b strings.Builder
	for {
		token, err := d.Token()
		if err == io.EOF {
			return b.String(), elements
		}
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		switch x := token.(type) {
		case xml.StartElement:
			elements[x.Name.Local]++
		case xml.CharData:
			b.Write(x)
		}
	}
}

// The curve of a response goes through the places that its scales say: 200 Hz lies 120 of 420 parts along, and 0.1 midway
// between 0.01 and 1.
func TestScales(t *testing.T) {
	x := []float64{80, 200, 500}
	p := Response("", &draw.Chart{X: draw.Axis{From: 80, To: 500}, Y: draw.Axis{Log: true}, Curves: []draw.Curve{{Name: "a", Class: "predicted", X: x, Y: []float64{0.01, 1, 0.1}}}})
	data, err := p.Write(SVG)
	if err != nil {
		t.Fatal(err)
	}
	path := regexp.MustCompile(`<path d="M([0-9.]+),([0-9.]+)L([0-9.]+),([0-9.]+)L([0-9.]+),([0-9.]+)" style="fill:none;stroke:#0F6A73`).FindSubmatch(data)
	if path == nil {
		t.Fatalf("no curve in %s", data)
	}
	var at [6]float64
	for i := range at {
		at[i], _ = strconv.ParseFloat(string(path[i+1]), 64)
	}
	if share := (at[2] - at[0]) / (at[4] - at[0]); math.Abs(share-120./420) > 1e-4 {
		t.Errorf("200 Hz lies at %.4f of the width", share)
	}
	if share := (at[5] - at[1]) / (at[3] - at[1]); math.Abs(share-0.5) > 1e-4 {
		t.Errorf("0.1 lies at %.4f between 0.01 and 1", share)
	}
}

// A line of the map is as high as its value, wherever in a row it lies, and bands wider than a row leave no holes.
func TestMapRows(t *testing.T) {
	narrow := Cell{Start: 0, Step: 0.1, Density: make([]float64, 4000)}
	narrow.Density[0], narrow.Density[1234] = 9, 5
	wide := Cell{Start: 5, Step: 10, Density: []float64{1, 2, 3, 4}}
	for k, v := range narrow.rows(240) {
		if want := k == 123; (v == 5) != want || v > 5 {
			t.Errorf("row %d has %g", k, v)
		}
	}
	for k, v := range wide.rows(240) {
		want := 0.0
		if k <= 40 {
			want = math.Min(4, float64(k/10+1))
		}
		if v != want {
			t.Errorf("row %d has %g, want %g", k, v, want)
		}
	}
}

// Without anything to show there is no picture, and odd values do not stop one.
func TestNothingToDraw(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for name, p := range map[string]*Picture{
		"response": Response("", &draw.Chart{X: draw.Axis{From: 80, To: 500}, Y: draw.Axis{Log: true}, Curves: []draw.Curve{{X: []float64{100, 200}, Y: []float64{0, nan}}}}),
		"campbell": Campbell("", &draw.Chart{}), "shares": Shares("", "", Bars{}), "poles": Poles("", 80, 500, []Pole{{Order: 2, Frequency: 700}}, nil),
		"map": SpeedMap("", Map{Top: 100, Cells: []Cell{{From: 1, To: 2, Step: 1, Density: []float64{1, 0, nan}}}}), "lines": Lines("", "", nil, draw.Mark{}),
	} {
		if p != nil {
			t.Errorf("%s is drawn", name)
		}
	}
	x := []float64{100, 150, 200, 250, 300}
	p := Response("", &draw.Chart{X: draw.Axis{From: 80, To: 500}, Y: draw.Axis{Log: true}, Curves: []draw.Curve{{X: x, Y: []float64{1, nan, 2, inf, 3}, Lower: []float64{1, nan, 1, 0, 1}, Upper: []float64{2, nan, 3, inf, 4}}},
		Bands: []draw.Band{{From: nan, To: nan}}, Marks: []draw.Mark{{X: nan}}, Points: []draw.Point{{X: nan, Y: nan}}})
	if _, err := p.Write(SVG); err != nil {
		t.Error(err)
	}
}

// Of more parts than there are colours the least are drawn together.
func TestSharesOfManyParts(t *testing.T) {
	b := Bars{Rows: []string{"1"}, Shares: [][]float64{nil}}
	for k := range 12 {
		b.Parts = append(b.Parts, fmt.Sprintf("part %d", k))
		b.Shares[0] = append(b.Shares[0], float64(k)/66)
	}
	p := Shares("", "", b)
	var words []string
	for _, e := range p.legend {
		words = append(words, e.words)
	}
	if got := strings.Join(words, ","); got != "from the left:,part 11,part 10,part 9,part 8,part 7,part 6,part 5,part 4,4 others" {
		t.Error(got)
	}
}

func TestTicks(t *testing.T) {
	var labels []string
	for _, x := range (plain{}).Ticks(0, 500) {
		labels = append(labels, x.Label)
	}
	if got := strings.Join(labels, " "); got != "0 100 200 300 400 500" {
		t.Error(got)
	}
	labels = nil
	for _, x := range (decades{}).Ticks(1e-5, 100) {
		labels = append(labels, x.Label)
	}
	if got := strings.Join(labels, " "); got != "1e-5 1e-4 0.001 0.01 0.1 1 10 100" {
		t.Error(got)
	}
}
