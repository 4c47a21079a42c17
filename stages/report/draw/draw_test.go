package draw

import (
	"encoding/xml"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
)

// wellFormed reads a picture as XML.
func wellFormed(t testing.TB, svg string) {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader(svg))
	for {
		if _, err := d.Token(); err == io.EOF {
			break
		} else if err != nil {
			t.Fatalf("%v in %.200s", err, svg)
		}
	}
	for _, bad := range []string{"NaN", "Inf", "<script"} {
		if strings.Contains(svg, bad) {
			t.Errorf("%q in the picture", bad)
		}
	}
}

func hostileChart() *Chart {
	n := 400
	ch := &Chart{About: `a "chart" <script>`, ID: "roll", X: Axis{Label: "frequency, Hz", From: 100, To: 500}, Y: Axis{Label: "density <b>", Log: true}}
	c := Curve{Name: "predicted & more", Class: "predicted"}
	for k := range n {
		f := 50 + 1.5*float64(k)
		c.X = append(c.X, f)
		c.Y = append(c.Y, 1e-3/(1+sq((f-230)/4)))
	}
	c.Y[100], c.Y[101], c.Y[150] = math.NaN(), -1, 0
	c.Lower, c.Upper = make([]float64, n), make([]float64, n)
	for k := range n {
		c.Lower[k], c.Upper[k] = c.Y[k]/2, c.Y[k]*2
	}
	ch.Curves = []Curve{c, {Name: "recorded", Class: "observed", X: c.X, Y: c.Y}}
	ch.Bands = []Band{{250, 280, "order 1 <i>"}, {255, 285, "order 1b"}, {600, 700, "outside"}}
	ch.Marks = []Mark{{230, "1", 1}, {231, "2", 2}, {232, "3", 3}, {900, "9", 9}}
	ch.Points = []Point{{230, 1e-3, "230", "predicted", `<script>x`}, {230.5, 0.9e-3, "231", "observed", ""}, {400, math.NaN(), "x", "observed", ""}}
	ch.Notes = []string{"prediction × 3 <script>alert(1)</script>"}
	return ch
}

func TestChart(t *testing.T) {
	svg := hostileChart().Draw()
	wellFormed(t, svg)
	for _, want := range []string{"predicted &amp; more", "order 1 &lt;i&gt;", `aria-label="a &#34;chart&#34; &lt;script&gt;"`, "frequency, Hz"} {
		if !strings.Contains(svg, want) {
			t.Errorf("%q is missing", want)
		}
	}
	for _, unwanted := range []string{"outside", ">9<"} {
		if strings.Contains(svg, unwanted) {
			t.Errorf("%q is drawn though it lies outside", unwanted)
		}
	}
	if svg != hostileChart().Draw() {
		t.Error("the same chart gives other bytes")
	}
}

func TestCurveStaysInsideAndBreaks(t *testing.T) {
	ch := hostileChart()
	if !ch.Fit() {
		t.Fatal("no frame")
	}
	f := frame{x: ch.X, y: ch.Y, width: chartWidth, height: chartHeight}
	d := f.path(ch.Curves[0].X, ch.Curves[0].Y)
	if n := strings.Count(d, "M"); n != 3 { // broken at 200 Hz (twice in a row) and at 275 Hz
		t.Errorf("%d strokes, want 3: %s", n, d)
	}
	for _, point := range strings.FieldsFunc(d, func(r rune) bool { return r == 'M' || r == 'L' }) {
		var x, y float64
		if _, err := fmt.Sscan(point, &x, &y); err != nil {
			t.Fatal(err)
		}
		if x < left-0.1 || x > chartWidth-right+0.1 || y < top-0.1 || y > chartHeight-bottom+0.1 {
			t.Errorf("point %g %g is outside", x, y)
		}
	}
}

func TestFrameOfNothing(t *testing.T) {
	ch := &Chart{X: Axis{From: 1, To: 2}, Y: Axis{Log: true}, Curves: []Curve{{X: []float64{1, 2, 3}, Y: []float64{0, math.NaN(), 5}}}}
	if svg := ch.Draw(); svg != "" {
		t.Errorf("drawn: %s", svg)
	}
}

// Labels that crowd give way as little as possible, in order, and stay within bounds.
func TestSpread(t *testing.T) {
	for _, c := range []struct{ at, want []float64 }{
		{[]float64{10, 50}, []float64{10, 50}},
		{[]float64{50, 50}, []float64{45, 55}},
		{[]float64{50, 51, 52, 90}, []float64{41, 51, 61, 90}},
		{[]float64{1, 2}, []float64{1.5 - 5, 1.5 + 5}}, // then shifted to the bound
		{[]float64{99, 100}, []float64{90, 100}},
	} {
		got := Spread(c.at, 10, 0, 100)
		for i := range got {
			want := c.want[i]
			if c.want[0] < 0 {
				want -= c.want[0]
			}
			if math.Abs(got[i]-want) > 1e-12 {
				t.Errorf("%v spread to %v", c.at, got)
				break
			}
		}
	}
	if got := Spread([]float64{1, 2, 3}, 60, 0, 100); got != nil {
		t.Errorf("three of 60 within 100 spread to %v", got)
	}
	r := rand.New(rand.NewPCG(1, 2))
	for range 200 {
		at := make([]float64, 20)
		for i := range at {
			at[i] = 100 * r.Float64()
		}
		slices.Sort(at)
		got := Spread(at, 4, 0, 100)
		for i, x := range got {
			if x < -1e-9 || x > 100+1e-9 || i > 0 && x-got[i-1] < 4-1e-9 {
				t.Fatalf("%v spread to %v", at, got)
			}
		}
	}
}

// The levels of a grid give its values back within half a level, and what is zero has no colour.
func TestGridKeepsPeaksAndGaps(t *testing.T) {
	values := []float64{1e-6, 1e-3, 0, math.NaN(), 2, 1e-12}
	g := NewGrid("density", []float64{0, 1, 2, 3}, []float64{0, 10, 20}, values, 4)
	if g.High != 2 || math.Abs(g.Low-2e-4) > 1e-18 {
		t.Errorf("levels from %g to %g", g.Low, g.High)
	}
	for i, want := range []float64{2e-4, 1e-3, math.NaN(), math.NaN(), 2, 2e-4} {
		got := g.Value(g.Cells[i])
		if math.IsNaN(want) != math.IsNaN(got) || math.Abs(got/want-1) > 0.02 {
			t.Errorf("cell %d is %g, want %g", i, got, want)
		}
	}
	if NewGrid("", []float64{0, 1}, []float64{0, 1}, []float64{0}, 4) != nil {
		t.Error("a grid of nothing")
	}
	ch := &Chart{ID: "m", X: Axis{Label: "x"}, Y: Axis{Label: "y"}, Grid: g}
	svg := ch.Draw()
	wellFormed(t, svg)
	if !strings.Contains(svg, `href="data:image/png;base64,`) || ch.X.To != 3 || ch.Y.To != 20 {
		t.Errorf("axes %+v %+v", ch.X, ch.Y)
	}
}

// A million places become a few thousand, and every peak and dip among them stays where it is.
func TestThinKeepsPeaks(t *testing.T) {
	const n = 1_000_000
	c := Curve{Name: "long", X: make([]float64, n), Y: make([]float64, n), Lower: make([]float64, n), Upper: make([]float64, n)}
	r := rand.New(rand.NewPCG(3, 4))
	for k := range n {
		c.X[k], c.Y[k] = float64(k), r.Float64()
	}
	peaks := map[float64]float64{12_345: 50, 500_000: -7, 999_998: 3}
	for x, y := range peaks {
		c.Y[int(x)] = y
	}
	c.Y[77_777] = math.NaN()
	thin := Thin(c, 6000)
	if len(thin.X) > 6000 || len(thin.X) != len(thin.Y) || len(thin.X) != len(thin.Upper) || !slices.IsSorted(thin.X) {
		t.Fatalf("%d places", len(thin.X))
	}
	for x, y := range peaks {
		if at := slices.Index(thin.X, x); at < 0 || thin.Y[at] != y {
			t.Errorf("the peak at %g is gone", x)
		}
	}
	if short := Thin(Curve{X: c.X[:100], Y: c.Y[:100]}, 6000); len(short.X) != 100 {
		t.Error("a short curve is thinned")
	}
}

func TestLogarithmicAxes(t *testing.T) {
	a := Axis{From: 10, To: 1000, Log: true}
	if p := a.place(100); math.Abs(p-0.5) > 1e-12 {
		t.Errorf("100 lies at %g between 10 and 1000", p)
	}
	if got := a.ticks(5); len(got) != 3 {
		t.Errorf("ticks %v", got)
	}
}

func TestStep(t *testing.T) {
	for _, c := range []struct {
		span float64
		n    int
		want float64
	}{{400, 9, 50}, {720, 9, 100}, {100, 10, 10}, {90, 9, 10}, {0.7, 9, 0.1}} {
		if got := step(c.span, c.n); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("step(%g, %d) = %g, want %g", c.span, c.n, got, c.want)
		}
	}
}

// The order of the steps must be plain in lightness alone, which is what a
// grey printer keeps: relative luminance (WCAG 2.2) runs one way, by a factor
// that can be seen.
func TestColourScaleRunsInLightness(t *testing.T) {
	for name, c := range map[string]struct {
		scale scale
		sign  float64
	}{"light": {onLight, -1}, "dark": {onDark, 1}} {
		before := 0.0
		for k := range Levels {
			rgb, err := strconv.ParseUint(c.scale.at(k)[1:], 16, 32)
			if err != nil {
				t.Fatal(err)
			}
			linear := func(shift int) float64 {
				x := float64(rgb>>shift&255) / 255
				if x <= 0.04045 {
					return x / 12.92
				}
				return math.Pow((x+0.055)/1.055, 2.4)
			}
			l := 0.2126*linear(16) + 0.7152*linear(8) + 0.0722*linear(0)
			if k > 0 && !(c.sign*math.Log((l+0.05)/(before+0.05)) > 0.015) {
				t.Errorf("%s: step %d has luminance %.3f after %.3f", name, k, l, before)
			}
			before = l
		}
	}
}

// ring is a flat ring of triangles, fine at both rims.
func ring(around, across int) *mesh.Mesh {
	m := &mesh.Mesh{Parts: []mesh.Part{{Name: "ring", Frame: airframe.Frame{X: airframe.Vec{1}, Y: airframe.Vec{0, 1}, Z: airframe.Vec{0, 0, 1}}}}}
	at := func(i, j int) int32 { return int32(j*around + i%around) }
	for j := 0; j <= across; j++ {
		r := 0.005 + 0.025*float64(j)/float64(across)
		for i := range around {
			s, c := math.Sincos(2 * math.Pi * float64(i) / float64(around))
			m.Nodes = append(m.Nodes, airframe.Vec{r * c, r * s, 0.01})
		}
	}
	for j := range across {
		for i := range around {
			for _, t := range [2][3]int32{{at(i, j), at(i, j+1), at(i+1, j+1)}, {at(i, j), at(i+1, j+1), at(i+1, j)}} {
				m.Triangles = append(m.Triangles, [6]int32{t[0], t[1], t[2]})
				m.TrianglePart = append(m.TrianglePart, 0)
			}
		}
	}
	return m
}

func area(nodes []airframe.Vec, t [3]int32) float64 {
	a, b, c := nodes[t[0]], nodes[t[1]], nodes[t[2]]
	return ((b[0]-a[0])*(c[1]-a[1]) - (b[1]-a[1])*(c[0]-a[0])) / 2
}

func TestSurfaceIsCoarserAndInPlace(t *testing.T) {
	m := ring(96, 16)
	s := NewSurface(m, 5e-3)
	part := s.Parts[0]
	if n := len(part.Triangles); n >= len(m.Triangles)/6 || n < 20 {
		t.Errorf("%d triangles left of %d", n, len(m.Triangles))
	}
	sum, whole := 0.0, 0.0
	for _, tri := range part.Triangles {
		x := area(m.Nodes, tri)
		if !(x > 0) {
			t.Errorf("triangle %v has area %g", tri, x)
		}
		sum += x
	}
	for _, tri := range m.Triangles {
		whole += area(m.Nodes, [3]int32{tri[0], tri[1], tri[2]})
	}
	if math.Abs(sum-whole) > 0.02*whole {
		t.Errorf("area %g, was %g", sum, whole)
	}
	// The boundary is two closed rings, still on the circles but for the sag
	// of their chords.
	ends := map[int32]int{}
	for _, e := range part.Edges {
		ends[e[0]]++
		ends[e[1]]--
		a, b := m.Nodes[e[0]], m.Nodes[e[1]]
		ra, rm := math.Hypot(a[0], a[1]), math.Hypot(a[0]+b[0], a[1]+b[1])/2
		if math.Abs(ra-0.005) > 1e-9 && math.Abs(ra-0.03) > 1e-9 {
			t.Errorf("boundary node at radius %g", ra)
		}
		if ra-rm > 2*boundaryError {
			t.Errorf("boundary edge sags by %g", ra-rm)
		}
	}
	for n, open := range ends {
		if open != 0 {
			t.Errorf("the boundary is open at node %d", n)
		}
	}
}

func TestShape(t *testing.T) {
	m := ring(60, 10)
	n := int32(len(m.Nodes))
	m.Nodes = append(m.Nodes, airframe.Vec{0.02, 0, 0.01}, airframe.Vec{0.02, 0, 0.04})
	m.Parts = append(m.Parts, mesh.Part{Name: "post", Standoff: true})
	m.Beams, m.BeamPart = [][2]int32{{n, n + 1}}, []int32{1}
	draw := func(swing float64) (string, string) {
		s := NewSurface(m, 4e-3)
		v := NewView(s, []airframe.Vec{{0, 0, 0.05}})
		motion := Motion{About: `mode "1" <script>`, Node: func(k int32) airframe.Vec { return airframe.Vec{0, 0, swing * m.Nodes[k][0]} },
			Hubs: []Hub{{At: airframe.Vec{0.02, 0, 0.045}, Turn: airframe.Vec{0, swing, 0}}}, Boxes: []Box{{Hub{At: airframe.Vec{0, 0, 0.03}, Move: airframe.Vec{0, 0, swing / 90}, Turn: airframe.Vec{swing, 0, 0}}, airframe.Vec{0.01, 0.005, 0.002}}},
			Gyro: &Hub{At: airframe.Vec{0, 0, 0.02}, Turn: airframe.Vec{0, -swing, swing}}}
		return v.Rest(s, "rest"), v.Shape(s, "rest", motion)
	}
	rest, svg := draw(3)
	wellFormed(t, rest)
	wellFormed(t, svg)
	for _, want := range []string{`href="#rest"`, `class="k0"`, `class="k15"`, `class="rim"`, `class="pillar"`, `class="hub"`, `class="body"`, `class="turn"`, "forward"} {
		if !strings.Contains(svg, want) {
			t.Errorf("%s is missing", want)
		}
	}
	if again, second := draw(3); again != rest || second != svg {
		t.Error("the same shape gives other bytes")
	}
	if _, larger := draw(300); larger != svg {
		t.Error("the scale of a mode shows in its picture")
	}
	// A body that turns fast about its own centre stays on the page too.
	s := NewSurface(m, 4e-3)
	box := Box{Hub{Turn: airframe.Vec{0, 0, 1}}, airframe.Vec{0.02, 0.01, 0.002}}
	corners := box.Corners()
	v := NewView(s, corners[:])
	spin := v.Shape(s, "rest", Motion{Node: func(int32) airframe.Vec { return airframe.Vec{0, 0, 1e-4} }, Boxes: []Box{box}})
	for _, d := range regexp.MustCompile(`class="body" d="M(-?\d+) ?(-?\d+)l`).FindAllStringSubmatch(spin, -1) {
		x, _ := strconv.Atoi(d[1])
		y, _ := strconv.Atoi(d[2])
		if x < 0 || y < 0 || float64(x) > v.width || float64(y) > v.height {
			t.Errorf("a corner lies at %d %d, outside %g by %g", x, y, v.width, v.height)
		}
	}
	_, still := draw(0)
	wellFormed(t, still)
	if strings.Contains(still, `class="k1"`) || strings.Contains(still, `class="turn"`) {
		t.Error("a frame at rest is drawn as if it moved")
	}
}

// What a frame from above shows: forward runs up and to the right on the page,
// up runs up.
func TestViewDirections(t *testing.T) {
	s := NewSurface(ring(24, 4), 4e-3)
	v := NewView(s, nil)
	x0, y0 := v.at(airframe.Vec{})
	for name, c := range map[string]struct {
		to           airframe.Vec
		right, lower bool
	}{"forward": {airframe.Vec{0.02, 0, 0}, true, false}, "left": {airframe.Vec{0, 0.02, 0}, false, false}, "down": {airframe.Vec{0.001, 0, -0.02}, true, true}} {
		x, y := v.at(c.to)
		if (x > x0) != c.right || (y > y0) != c.lower {
			t.Errorf("%s goes to %d %d from %d %d", name, x, y, x0, y0)
		}
	}
}

func BenchmarkSurface(b *testing.B) {
	m := ring(200, 40)
	for b.Loop() {
		NewSurface(m, 4e-3)
	}
}
