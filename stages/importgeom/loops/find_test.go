package loops

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"hushframe/core/mechanics/outline"
)

const tol = 2e-5 // m, as in practice

func pt(x, y float64) outline.Point { return outline.Point{X: x * 1e-3, Y: y * 1e-3} }

// chain gives the straight pieces through points in millimetres: "0,0 40,0 40,20".
func chain(name, corners string) []Piece {
	var out []Piece
	var last outline.Point
	for i, f := range strings.Fields(corners) {
		var x, y float64
		if _, err := fmt.Sscanf(f, "%g,%g", &x, &y); err != nil {
			panic(f)
		}
		if i > 0 {
			out = append(out, Piece{outline.Line(last, pt(x, y)), fmt.Sprintf("%s%d", name, i)})
		}
		last = pt(x, y)
	}
	return out
}

func ring(name string, x, y, r float64) []Piece {
	return []Piece{{outline.Circle(pt(x, y), r*1e-3, true), name}}
}

func arcPiece(name string, x, y, r, from, sweep float64) Piece {
	return Piece{outline.ArcOf(pt(x, y), r*1e-3, from*math.Pi/180, sweep*math.Pi/180), name}
}

func join(parts ...[]Piece) []Piece {
	var out []Piece
	for _, p := range parts {
		out = append(out, p...)
	}
	return out
}

// describe sums a result up: outlines as depth:area-of-outer:net (mm²), then counts.
func describe(r Result) string {
	s := ""
	for _, o := range r.Outlines {
		s += fmt.Sprintf("%d:%.2f:%.2f ", o.Depth, 1e6*o.Region.Outer.Area(), 1e6*o.Region.Area())
	}
	for _, c := range []struct {
		name string
		n    int
	}{{"joined", len(r.Joined)}, {"dropped", r.Dropped}, {"trimmed", r.Trimmed}, {"open", len(r.Open)}, {"tangles", len(r.Tangles)}, {"countersinks", len(r.Countersinks)}} {
		if c.n > 0 {
			s += fmt.Sprintf("%s %d ", c.name, c.n)
		}
	}
	return strings.TrimSpace(s)
}

func TestFind(t *testing.T) {
	box := chain("a", "0,0 40,0 40,20 0,20 0,0")
	for _, c := range []struct {
		name   string
		pieces []Piece
		want   string
	}{
		{"nothing", nil, ""},
		{"rectangle", box, "0:800.00:800.00"},
		{"clockwise", chain("a", "0,0 0,20 40,20 40,0 0,0"), "0:800.00:800.00"},
		{"hole", join(box, ring("h", 20, 10, 5)), "0:800.00:721.46"},
		// The gap is closed in its middle: half of 40 by 0.015, halved, is lost.
		{"gap of 0.015 mm", chain("a", "0,0 40,0 40,20 0,20 0,0.015"), "0:799.85:799.85 joined 1"},
		{"gap of 0.03 mm", chain("a", "0,0 40,0 40,20 0,20 0,0.03"), "open 1"},
		{"ends that overshoot by 0.012 mm", join(chain("a", "-0.012,0 40,0 40,20 0,20 0,-0.012")), "0:800.00:800.00 trimmed 2"},
		{"corner crossed by 0.1 mm on both sides", join(chain("a", "-0.1,0 40,0 40,20 0,20 0,-0.1")), "0:800.00:800.00 open 2"},
		{"two equal rings", join(ring("a", 0, 0, 5), ring("b", 0.01, 0, 5)), "0:78.54:78.54 dropped 1"},
		{"the same rectangle the other way round", join(box, chain("b", "0,0 0,20 40,20 40,0 0,0")), "0:800.00:800.00 dropped 4"},
		{"a side drawn again over part of it", join(box, chain("b", "10,0 30,0")), "0:800.00:800.00 dropped 1"},
		{"sides that overlap", join(chain("a", "0,0 25,0"), chain("b", "15,0 40,0 40,20 0,20 0,0")), "0:800.00:800.00 dropped 1"},
		{"an arc over part of a ring", join(ring("a", 0, 0, 10), []Piece{arcPiece("b", 0, 0, 10, 30, 100)}), "0:314.16:314.16 dropped 1"},
		{"rings that begin elsewhere", join(ring("a", 0, 0, 10), []Piece{arcPiece("b", 0, 0, 10, 77, 360)}), "0:314.16:314.16 dropped 1"},
		{"a line that ends on the outline", join(box, chain("b", "20,0 20,-15")), "0:800.00:800.00 open 1"},
		{"a line that ends just off the outline", join(box, chain("b", "20,-0.01 20,-15")), "0:800.00:800.00 joined 1 open 1"},
		{"an engraving", join(box, chain("b", "10,5 30,5 30,15")), "0:800.00:800.00 open 1"},
		{"an island", join(box, ring("h", 20, 10, 8), chain("i", "18,9 22,9 22,11 18,11 18,9")), "0:800.00:598.94 2:8.00:8.00"},
		{"a countersink", join(box, ring("h", 20, 10, 3), ring("i", 20, 10, 1.6)), "0:800.00:791.96 countersinks 1"},
		{"a countersink drawn a little aside", join(box, ring("i", 20.04, 10, 1.6), ring("h", 20, 10, 3)), "0:800.00:791.96 countersinks 1"},
		{"a round island that is not concentric", join(box, ring("h", 20, 10, 5), ring("i", 21, 10, 1)), "0:800.00:721.46 2:3.14:3.14"},
		{"three concentric rings", join(box, ring("h", 20, 10, 5), ring("i", 20, 10, 3), ring("j", 20, 10, 1)), "0:800.00:771.73 countersinks 1"},
		{"two plates", join(box, chain("b", "50,0 60,0 60,10 50,10 50,0")), "0:800.00:800.00 0:100.00:100.00"},
		{"a bow tie", chain("a", "0,0 40,20 40,0 0,20 0,0"), "tangles 1"},
		{"a web across", join(box, chain("b", "20,0 20,20")), "tangles 1"},
		{"two holes that cross", join(box, ring("h", 15, 10, 4), ring("i", 20, 10, 4)), "0:800.00:800.00 tangles 1"},
		{"a hole that touches the edge", join(box, ring("h", 20, 5, 5)), "tangles 1"},
		{"pieces without length", join(box, chain("z", "5,5 5,5.0000001")), "0:800.00:800.00"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := describe(Find(c.pieces, tol)); got != c.want {
				t.Errorf("got  %s\nwant %s", got, c.want)
			}
			// The order in which pieces are drawn, and the way they run, change nothing.
			rng := rand.New(rand.NewPCG(3, 4))
			for range 5 {
				p := append([]Piece(nil), c.pieces...)
				rng.Shuffle(len(p), func(i, j int) { p[i], p[j] = p[j], p[i] })
				for i := range p {
					if rng.IntN(2) == 0 {
						p[i].Curve = p[i].Curve.Reverse()
					}
				}
				if got := describe(Find(p, tol)); got != c.want {
					t.Fatalf("shuffled: got  %s\nwant %s", got, c.want)
				}
			}
		})
	}
}

func TestWhatIsReported(t *testing.T) {
	r := Find(chain("a", "0,0 40,0 40,20 0,20 0,0.5"), tol)
	if len(r.Open) != 1 {
		t.Fatalf("%+v", r)
	}
	c := r.Open[0]
	if c.From != pt(0, 0) || c.Attached || c.To.Distance(pt(0, 0.5)) > 1e-12 || c.FromPiece != "a1" || c.ToEnd != "a4" || c.Pieces != 4 || math.Abs(c.Nearest-0.5e-3) > 1e-12 || math.Abs(c.Length-0.1195) > 1e-12 {
		t.Errorf("chain %+v", c)
	}
	r = Find(chain("a", "0,0 40,20 40,0 0,20 0,0"), tol)
	p := r.Tangles[0].Places
	if len(p) != 1 || p[0].At.Distance(pt(20, 10)) > 1e-12 || strings.Join(p[0].Sources, " ") != "a1 a3" {
		t.Errorf("tangle %+v", r.Tangles[0])
	}
	if a := 1e6 * r.Tangles[0].Area; math.Abs(a-400) > 1e-9 { // two triangles of 20 by 20, halved
		t.Errorf("the bow tie has the area %g", a)
	}
	r = Find(chain("a", "0,0 40,0 40,20 0,20 0,0.015"), tol)
	g := r.Joined[0]
	if g.Width < 0.0149e-3 || g.Width > 0.0151e-3 || g.At.Distance(pt(0, 0)) > 0.02e-3 {
		t.Errorf("gap %+v", g)
	}
	if w := r.Outlines[0].Region.Outer.Gap(); w != 0 {
		t.Errorf("the loop is still open by %g", w)
	}
}

// A gap in arcs and cubics is closed by bending them.
func TestGapsInCurves(t *testing.T) {
	half := arcPiece("a", 0, 0, 10, 0, 180)
	other := arcPiece("b", 0, -0.015, 10, 180, 180)
	r := Find([]Piece{half, other}, tol)
	// The strip of 20 by 0.015 between the halves is filled.
	if got := describe(r); got != "0:314.46:314.46 joined 2" || r.Outlines[0].Region.Outer.Gap() != 0 {
		t.Errorf("half circles: %s", got)
	}
	c := Piece{outline.Cubic(pt(0, 0), pt(0, 40), pt(60, 40), pt(60, 0)), "c"}
	l := Piece{outline.Line(pt(60, 0.01), pt(0, 0)), "l"}
	r = Find([]Piece{l, c}, tol)
	if len(r.Outlines) != 1 || r.Outlines[0].Region.Outer.Gap() != 0 || math.Abs(1e6*r.Outlines[0].Region.Area()-1440) > 0.5 {
		t.Errorf("a cubic and a line: %s", describe(r))
	}
}

// An arc that is bent to meet a neighbour stays within the gap of where it was, also when its ends are close together.
func TestMovedArcsStayNear(t *testing.T) {
	for _, sweep := range []float64{10, 80, -170, 250, -330, 355} {
		c := arcPiece("a", 3, 4, 10, 33, sweep).Curve
		const d = 15e-6
		for end := range 2 {
			to := c.At(float64(end)).Add(outline.Point{X: 0.6 * d, Y: -0.8 * d})
			m := moved(c, end, to)
			if m.At(float64(end)) != to || m.At(float64(1-end)) != c.At(float64(1-end)) || m.Sweep*c.Sweep < 0 {
				t.Fatalf("sweep %g: ends %v %v", sweep, m.P0, m.P1)
			}
			for k := range 21 {
				if _, off := c.Nearest(m.At(float64(k) / 20)); off > 2*d {
					t.Errorf("sweep %g, end %d: %g from the arc", sweep, end, off)
				}
			}
		}
	}
}

func TestPanicsWithoutTolerance(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("no panic")
		}
	}()
	Find(nil, 0)
}

// A plate with many holes, near the largest that people cut.
func BenchmarkFind(b *testing.B) {
	pieces := chain("a", "0,0 200,0 200,200 0,200 0,0")
	for i := range 15 {
		for j := range 15 {
			pieces = append(pieces, ring("h", 10+12*float64(i), 10+12*float64(j), 3)...)
		}
	}
	for b.Loop() {
		Find(pieces, tol)
	}
}
