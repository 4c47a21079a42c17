package printed

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"image/color"
	"image/png"
	"io"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/plot/plotter"

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
	hertz, density := draw.Axis{Label: "frequency, Hz", From: 80, To: 500}, draw.Axis{Label: "(deg/s)²/Hz", Log: true}
	return map[string]*Picture{
		"response": Chart("Rate "+hostile, &draw.Chart{About: hostile, X: hertz, Y: density, Notes: []string{"a note"},
			Curves: []draw.Curve{{Name: "predicted", Class: "predicted", X: x, Y: y}, {Name: "recorded", Class: "observed", X: x, Y: y, Lower: down, Upper: up}},
			Bands:  []draw.Band{{From: 260, To: 280, Label: "order 1"}, {From: 900, To: 950, Label: "beyond"}},
			Marks:  []draw.Mark{{X: 200, Label: "8"}, {X: 700, Label: "9"}}, Points: []draw.Point{{X: 200, Y: 1, Label: "200", Class: "predicted"}, {X: 199, Y: 0.9, Class: "observed"}}}),
		"campbell": Chart("Campbell", &draw.Chart{X: draw.Axis{Label: "rpm", From: 0, To: 30000}, Y: draw.Axis{Label: "Hz", From: 0, To: 500},
			Curves: []draw.Curve{{Name: "4", Class: "mode", X: []float64{0, 30000}, Y: []float64{120, 130}}, {Name: "order 1", Class: "order", X: []float64{0, 30000}, Y: []float64{0, 500}}},
			Points: []draw.Point{{X: 7300, Y: 121, Class: "critical"}}, Marks: []draw.Mark{{X: 16000, Label: "hover"}}}),
		"shares": Shares("Bars", "share", Bars{Rows: []string{"1, 61 Hz", "2, 87 Hz"}, Parts: []string{hostile, "b", "c"}, Shares: [][]float64{{0.5, 0.5, 0}, {0.1, 0.2, 0.7}}}),
		"poles": Chart("Poles", &draw.Chart{X: hertz, Y: draw.Axis{Label: "order"}, Points: []draw.Point{{X: 120, Y: 10, Class: "loose"}, {X: 121, Y: 12, Class: "firm"}, {X: 121, Y: 14, Class: "firm"}},
			Marks: []draw.Mark{{X: 121, Label: "121"}}}),
		"map": Chart("Map", &draw.Chart{X: draw.Axis{Label: "rpm"}, Y: draw.Axis{Label: "Hz"}, Grid: draw.NewGrid("(deg/s)²/Hz", []float64{0, 100, 200}, []float64{0, 50, 100}, []float64{1, 0.1, 0.01, 1e-9}, 5),
			Curves: []draw.Curve{{Name: "×1", Class: "over-order", X: []float64{0, 200}, Y: []float64{0, 100}}, {Name: "3", Class: "over-mode", X: []float64{0, 200}, Y: []float64{30, 30}}}}),
		"square": Chart("Plane", &draw.Chart{Square: true, X: draw.Axis{Label: "real"}, Y: draw.Axis{Label: "imaginary"}, Curves: []draw.Curve{{Name: "circle", X: []float64{1, 0, -1, 0, 1}, Y: []float64{0, 1, 0, -1, 0}}}}),
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
			if elements["script"] > 0 || elements["title"] != 1 || elements["desc"] != 1 || elements["path"] < 5 {
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

// A curve goes through the places that its scales say: 200 Hz lies 120 of 420 parts along, and 0.1 midway between 0.01
// and 1.
func TestScales(t *testing.T) {
	p := Chart("", &draw.Chart{X: draw.Axis{From: 80, To: 500}, Y: draw.Axis{Log: true},
		Curves: []draw.Curve{{Name: "a", Class: "predicted", X: []float64{80, 200, 500}, Y: []float64{0.01, 1, 0.1}}}})
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

// Curves are cut at the border, along straight lines on the scales of the chart.
func TestPath(t *testing.T) {
	ch := &draw.Chart{X: draw.Axis{From: 0, To: 10}, Y: draw.Axis{From: 0, To: 10}}
	for name, c := range map[string]struct {
		x, y []float64
		want []plotter.XYs
	}{
		"through":    {[]float64{-5, 15}, []float64{5, 5}, []plotter.XYs{{{X: 0, Y: 5}, {X: 10, Y: 5}}}},
		"out at top": {[]float64{0, 10, 20}, []float64{0, 20, 40}, []plotter.XYs{{{X: 0, Y: 0}, {X: 5, Y: 10}}}},
		"and back":   {[]float64{0, 4, 8}, []float64{8, 12, 8}, []plotter.XYs{{{X: 0, Y: 8}, {X: 2, Y: 10}}, {{X: 6, Y: 10}, {X: 8, Y: 8}}}},
		"broken":     {[]float64{1, 2, 3, 4, 5}, []float64{1, 2, math.NaN(), 4, 5}, []plotter.XYs{{{X: 1, Y: 1}, {X: 2, Y: 2}}, {{X: 4, Y: 4}, {X: 5, Y: 5}}}},
		"beside":     {[]float64{11, 12}, []float64{1, 2}, nil},
	} {
		got := path(ch, c.x, c.y)
		for _, piece := range got {
			for k := range piece {
				piece[k] = plotter.XY{X: math.Round(piece[k].X*1e9) / 1e9, Y: math.Round(piece[k].Y*1e9) / 1e9}
			}
		}
		if fmt.Sprint(got) != fmt.Sprint(c.want) {
			t.Errorf("%s: %v, want %v", name, got, c.want)
		}
	}
	ch.Y = draw.Axis{From: 0.01, To: 1, Log: true}
	got := path(ch, []float64{-10, 10, 20}, []float64{0.01, 1, 1e-6})
	if len(got) != 1 || math.Abs(got[0][0].Y-0.1) > 1e-12 || got[0][1] != (plotter.XY{X: 10, Y: 1}) {
		t.Errorf("logarithmic: %v", got) // half-way up at 0
	}
	if got = path(ch, []float64{0, 5}, []float64{0.1, 1e-9}); len(got) != 1 || math.Abs(got[0][1].Y-0.01) > 1e-15 {
		t.Errorf("a valley: %v", got)
	}
}

// The cells of a map have their colours, the loudest the last of the scale, where they lie; an empty one is paper.
func TestCells(t *testing.T) {
	m := &draw.Chart{X: draw.Axis{}, Y: draw.Axis{}, Grid: draw.NewGrid("", []float64{0, 1, 2}, []float64{0, 1, 2}, []float64{1, 0.1, 0, 1e-3}, 3)}
	data, err := Chart("", m).Write(PNG)
	if err != nil {
		t.Fatal(err)
	}
	img, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	seen := map[color.NRGBA]int{}
	lowest, leftmost := 0, img.Bounds().Dx() // of the loudest cell, the first of the lowest row
	for y := 0; y < img.Bounds().Dy(); y += 2 {
		for x := 0; x < img.Bounds().Dx(); x += 2 {
			c := color.NRGBAModel.Convert(img.At(x, y)).(color.NRGBA)
			seen[c]++
			if c == shade(255) && y > img.Bounds().Dy()/3 {
				lowest, leftmost = max(lowest, y), min(leftmost, x)
			}
		}
	}
	if lowest < img.Bounds().Dy()*3/4 || leftmost > img.Bounds().Dx()/4 {
		t.Errorf("the loudest cell reaches down to %d and begins at %d", lowest, leftmost)
	}
	quarter := img.Bounds().Dx() * img.Bounds().Dy() / 4 / 4
	for level, name := range map[byte]string{255: "loudest", 170: "a tenth", 1: "least"} {
		if n := seen[shade(level)]; n < quarter/2 || n > quarter*5/4 {
			t.Errorf("%s: %d of about %d places", name, n, quarter)
		}
	}
	if n := seen[color.NRGBA{0xff, 0xff, 0xff, 0xff}]; n < quarter/2 {
		t.Errorf("paper: %d places", n)
	}
	if got := cellsUnder(draw.Axis{From: 0, To: 4}, []float64{1, 2, 3}, 8); fmt.Sprint(got) != "[-1 -1 0 0 1 1 -1 -1]" {
		t.Error(got)
	}
}

// Without anything to show there is no picture, and odd values do not stop one.
func TestNothingToDraw(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	if Chart("", &draw.Chart{X: draw.Axis{From: 80, To: 500}, Y: draw.Axis{Log: true}, Curves: []draw.Curve{{X: []float64{100, 200}, Y: []float64{0, nan}}}}) != nil ||
		Chart("", &draw.Chart{}) != nil || Shares("", "", Bars{}) != nil {
		t.Error("nothing is drawn")
	}
	x := []float64{100, 150, 200, 250, 300}
	p := Chart("", &draw.Chart{X: draw.Axis{From: 80, To: 500}, Y: draw.Axis{Log: true},
		Curves: []draw.Curve{{X: x, Y: []float64{1, nan, 2, inf, 3}, Lower: []float64{1, nan, 1, 0, 1}, Upper: []float64{2, nan, 3, inf, 4}}},
		Bands:  []draw.Band{{From: nan, To: nan}}, Marks: []draw.Mark{{X: nan}}, Points: []draw.Point{{X: nan, Y: nan}}})
	if _, err := p.Write(SVG); err != nil {
		t.Error(err)
	}
	if got := FileName(`../a b"<x>`); got != "---a-b--x-" {
		t.Errorf("%q", got)
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
