package picture

import (
	"encoding/xml"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
)

// sample is a plate of 100 by 40 by 2 mm with a hole, a standoff on it, a rotor, a battery on a strap and a gyro.
func sample() (*airframe.Geometry, *airframe.Properties) {
	plate := func(name string, z float64) airframe.Plate {
		return airframe.Plate{Name: name, Thickness: 2e-3,
			Region: outline.NewRegion(outline.Rectangle(outline.Point{}, 0.1, 0.04, 0), outline.Loop{outline.Circle(outline.Point{X: 0.02}, 3e-3, true)}),
			Frame:  airframe.Frame{Origin: airframe.Vec{0, 0, z}, X: airframe.Vec{1, 0, 0}, Y: airframe.Vec{0, 1, 0}, Z: airframe.Vec{0, 0, 1}}}
	}
	g := &airframe.Geometry{
		Plates:    []airframe.Plate{plate("top <1>", 0.021), plate("base", 0.001)},
		Standoffs: []airframe.Standoff{{Name: "post", Ends: [2]airframe.Vec{{0.04, 0.01, 0.002}, {0.04, 0.01, 0.02}}, Outer: 5e-3}},
		Bolts:     []airframe.Bolt{{Name: "bolt-1", Point: airframe.Vec{0.03, -0.01, 0.001}, ClampRadius: 3e-3}},
	}
	// A box of 60 by 30 by 20 mm: m/12 of the sums of squares.
	m := 0.06
	box := [6]float64{m / 12 * 1300e-6, m / 12 * 4000e-6, m / 12 * 4500e-6}
	p := &airframe.Properties{
		Bodies: []airframe.Body{
			{Name: "battery", Kind: "lump", Mass: m, Centre: airframe.Vec{0, 0, 0.032}, Inertia: box,
				Mount: &airframe.Mount{Kind: "strap", Points: []airframe.MountPoint{{Point: airframe.Vec{0.01, 0, 0.022}}}}},
			// A cylinder of 28 by 18 mm.
			{Name: "fl", Kind: "rotor", Mass: 0.03, Centre: airframe.Vec{0.04, 0.03, 0.011}, Inertia: [6]float64{0.03 * (49e-6 + 27e-6), 0.03 * (49e-6 + 27e-6), 0.03 * 98e-6}},
			{Name: "screw", Kind: "lump", Mass: 1e-3, Centre: airframe.Vec{0.04, 0.01, 0.001}, Inertia: [6]float64{1e-10, 1e-10, 1e-10}},
		},
		Rotors: []airframe.Rotor{{Name: "fl", Hub: airframe.Vec{0.04, 0.03, 0.03}, Spin: 1}},
	}
	return g, p
}

// elements reads a picture back: the numbers of each path or circle by class.
func elements(t *testing.T, svg string) map[string][][]float64 {
	t.Helper()
	out := map[string][][]float64{}
	d := xml.NewDecoder(strings.NewReader(svg))
	for {
		token, err := d.Token()
		if err == io.EOF {
			return out
		}
		if err != nil {
			t.Fatalf("the picture is no XML: %v", err)
		}
		e, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		class, numbers := e.Name.Local, []float64(nil)
		for _, a := range e.Attr {
			switch a.Name.Local {
			case "class":
				class = a.Value
			case "d", "viewBox", "cx", "cy", "r":
				for _, f := range strings.FieldsFunc(a.Value, func(r rune) bool { return !strings.ContainsRune("0123456789.-", r) }) {
					x, err := strconv.ParseFloat(f, 64)
					if err != nil {
						t.Fatalf("%q: %v", a.Value, err)
					}
					numbers = append(numbers, x)
				}
			}
		}
		out[class] = append(out[class], numbers)
	}
}

// extent gives the box round pairs of numbers.
func extent(v []float64) [4]float64 {
	b := [4]float64{math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)}
	for i := 0; i+1 < len(v); i += 2 {
		b[0], b[1] = math.Min(b[0], v[i]), math.Min(b[1], v[i+1])
		b[2], b[3] = math.Max(b[2], v[i]), math.Max(b[3], v[i+1])
	}
	return b
}

func TestTop(t *testing.T) {
	g, p := sample()
	centre := airframe.Vec{0.005, 0.002, 0.01}
	svg := Top(g, p, &centre)
	e := elements(t, svg)
	if len(e["af-plate"]) != 2 || len(e["af-rotor"]) != 1 || len(e["af-spring"]) != 1 || len(e["af-bolt"]) != 1 || len(e["af-post"]) != 1 {
		t.Fatalf("elements %v", e)
	}
	// Forward is up and left is left: the page's x is −y, its y is −x, in millimetres.
	if b := extent(e["af-plate"][0]); b != [4]float64{-20, -50, 20, 50} {
		t.Errorf("plate %v", b)
	}
	if c := e["af-post"][0]; c[0] != -10 || c[1] != -40 || c[2] != 2.5 {
		t.Errorf("standoff %v", c)
	}
	if b := extent(e["af-load"][0]); b != [4]float64{-15, -30, 15, 30} {
		t.Errorf("the battery is drawn as %v", b)
	}
	if b := extent(e["af-rotor"][0]); b != [4]float64{-44, -54, -16, -26} {
		t.Errorf("the rotor is drawn as %v", b)
	}
	v := e["svg"][0]
	if v[0] > -44 || v[1] > -54 || v[0]+v[2] < 20 || v[1]+v[3] < 50 {
		t.Errorf("view %v", v)
	}
	if strings.Contains(svg, "<1>") || !strings.Contains(svg, "top &lt;1&gt;, 2 mm") {
		t.Error("a name is not escaped")
	}
	// The lower plate comes first, so that the upper one lies on it.
	if strings.Index(svg, "plate base") > strings.Index(svg, "plate top") {
		t.Error("the upper plate is below the lower one")
	}
	if svg != Top(g, p, &centre) {
		t.Error("two pictures of one frame differ")
	}
	if strings.Contains(Top(g, p, nil), "centre of gravity") || !strings.Contains(svg, "centre of gravity") {
		t.Error("the centre of gravity is drawn when it is not known, or not drawn when it is")
	}
}

func TestSide(t *testing.T) {
	g, p := sample()
	e := elements(t, Side(g, p, nil))
	// Forward is to the right, up is up.
	if b := extent(e["af-plate"][0]); b != [4]float64{-50, -2, 50, 0} {
		t.Errorf("lower plate %v", b)
	}
	if b := extent(e["af-post"][0]); b != [4]float64{37.5, -20, 42.5, -2} {
		t.Errorf("standoff %v", b)
	}
	if b := extent(e["af-load"][0]); b != [4]float64{-30, -42, 30, -22} {
		t.Errorf("battery %v", b)
	}
	if b := extent(e["af-rotor"][0]); b != [4]float64{26, -20, 54, -2} {
		t.Errorf("rotor %v", b)
	}
}

// The arrow of a rotor that turns counterclockwise ends where the shorter way on from it is clockwise on the page.
func TestSpin(t *testing.T) {
	g, p := sample()
	for _, spin := range []int{1, -1} {
		p.Rotors[0].Spin = spin
		svg := Top(g, p, nil)
		i := strings.Index(svg, `class="af-way" d="M`)
		fields := strings.FieldsFunc(svg[i+len(`class="af-way" d="`):], func(r rune) bool { return !strings.ContainsRune("0123456789.-", r) })
		// M x y A r r 0 large sweep x y: in SVG a sweep of 1 is clockwise as seen.
		if want := map[int]string{1: "0", -1: "1"}[spin]; fields[6] != want || fields[5] != "1" {
			t.Errorf("spin %d: arc flags %v", spin, fields[5:7])
		}
	}
}

func TestWordsKeepClear(t *testing.T) {
	g, p := sample()
	p.Bodies = append(p.Bodies, p.Bodies[0], p.Bodies[0])
	svg := Top(g, p, nil)
	var ys []string
	for _, part := range strings.Split(svg, `<text class="af-word"`)[1:] {
		if strings.Contains(part[:strings.Index(part, "</text>")], ">battery") {
			_, y, _ := strings.Cut(part, `y="`)
			ys = append(ys, y[:strings.Index(y, `"`)])
		}
	}
	if len(ys) != 3 || ys[0] == ys[1] || ys[1] == ys[2] || ys[0] == ys[2] {
		t.Errorf("three equal words at heights %v", ys)
	}
}

// Words grow with the frame, since the picture of any frame is shown at the same width.
func TestWordsGrowWithTheFrame(t *testing.T) {
	size := func(scale float64) float64 {
		g, p := sample()
		for i := range p.Bodies {
			for d := range p.Bodies[i].Centre {
				p.Bodies[i].Centre[d] *= scale
			}
		}
		_, rest, _ := strings.Cut(Top(g, p, nil), `<text class="af-word" font-size="`)
		x, err := strconv.ParseFloat(rest[:strings.Index(rest, `"`)], 64)
		if err != nil {
			t.Fatal(err)
		}
		return x
	}
	if near, far := size(1), size(20); far < 2*near {
		t.Errorf("words of %g mm, and of %g mm on a much larger frame", near, far)
	}
}

func BenchmarkTop(b *testing.B) {
	g, p := sample()
	for b.Loop() {
		Top(g, p, nil)
	}
}
