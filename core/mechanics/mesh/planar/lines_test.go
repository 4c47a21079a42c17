package planar

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"hushframe/core/mechanics/outline"
)

// areaWithin adds up the triangles inside mesh line k.
func (m *Mesh) areaWithin(k int32) float64 {
	sum := 0.0
	for t, lines := range m.Within {
		for _, l := range lines {
			if l == k {
				sum += m.area(t)
			}
		}
	}
	return sum
}

func must(t *testing.T, region outline.Region, o Options) *Mesh {
	t.Helper()
	m, err := Triangulate(region, o)
	if err != nil {
		t.Fatal(err)
	}
	checkMesh(t, region, m)
	return m
}

// Areas inside mesh lines that leave the region, cross holes and each other, in closed form.
func TestAreaWithinLines(t *testing.T) {
	square := outline.Rectangle(pt(0, 0), 40e-3, 40e-3, 0)
	// The lens that two circles of radius r with centres d apart share.
	lens := func(r, d float64) float64 {
		return 2*r*r*math.Acos(d/(2*r)) - d/2*math.Sqrt(4*r*r-d*d)
	}
	const r = 5e-3
	cases := []struct {
		name   string
		region outline.Region
		lines  []outline.Loop
		want   []float64
	}{
		{"disc", outline.NewRegion(square), []outline.Loop{disc(1e-3, 2e-3, r)}, []float64{math.Pi * r * r}},
		{"washer", outline.NewRegion(square, disc(0, 0, 2e-3)), []outline.Loop{disc(0, 0, r)}, []float64{math.Pi * (r*r - 4e-6)}},
		{"half out", outline.NewRegion(square), []outline.Loop{disc(20e-3, 3e-3, r)}, []float64{math.Pi * r * r / 2}},
		{"at a corner", outline.NewRegion(square), []outline.Loop{disc(20e-3, 20e-3, r)}, []float64{math.Pi * r * r / 4}},
		{"hole half in", outline.NewRegion(square, disc(0, 0, r)), []outline.Loop{outline.Rectangle(pt(10e-3, 0), 20e-3, 30e-3, 0)},
			[]float64{600e-6 - math.Pi*r*r/2}},
		{"two discs", outline.NewRegion(square), []outline.Loop{disc(-3e-3, 0, r), disc(3e-3, 0, r)}, []float64{math.Pi * r * r, math.Pi * r * r}},
		{"same disc twice", outline.NewRegion(square), []outline.Loop{disc(0, 0, r), disc(0, 0, r)}, []float64{math.Pi * r * r, math.Pi * r * r}},
		{"disc on a hole", outline.NewRegion(square, disc(0, 0, r)), []outline.Loop{disc(0, 0, r)}, []float64{0}},
		{"outside", outline.NewRegion(square), []outline.Loop{disc(50e-3, 0, r)}, []float64{0}},
		{"all of it", outline.NewRegion(square), []outline.Loop{disc(0, 0, 50e-3)}, []float64{1600e-6}},
		{"clockwise", outline.NewRegion(square), []outline.Loop{disc(0, 0, r).Reverse()}, []float64{math.Pi * r * r}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			m := must(t, c.region, Options{Size: uniform(3e-3), Lines: c.lines})
			for k, want := range c.want {
				if got := m.areaWithin(int32(k)); math.Abs(got-want) > 8e-4*math.Pi*r*r {
					t.Errorf("line %d: %g m², want %g", k, got, want)
				}
			}
			if c.name == "two discs" {
				both := 0.0
				for k, lines := range m.Within {
					if len(lines) == 2 {
						both += m.area(k)
					}
				}
				if want := lens(r, 6e-3); math.Abs(both-want) > 1e-3*want {
					t.Errorf("shared by both: %g m², want %g", both, want)
				}
			}
		})
	}
}

// What runs outside the region leaves no trace.
func TestLinesOutsideChangeNothing(t *testing.T) {
	region := outline.NewRegion(outline.Rectangle(pt(0, 0), 40e-3, 20e-3, 0), disc(0, 0, 4e-3))
	bare := must(t, region, Options{Size: uniform(3e-3)})
	lined := must(t, region, Options{Size: uniform(3e-3), Lines: []outline.Loop{disc(0, 13e-3, 2.5e-3), disc(0, 0, 3e-3)}})
	if !slices.Equal(bare.Nodes, lined.Nodes) {
		t.Errorf("%d nodes without, %d with lines outside", len(bare.Nodes), len(lined.Nodes))
	}
}

func TestSegmentsPerTurn(t *testing.T) {
	region := outline.NewRegion(outline.Rectangle(pt(0, 0), 60e-3, 20e-3, 0), disc(-15e-3, 0, 1.6e-3), disc(15e-3, 0, 1.6e-3))
	m := must(t, region, Options{Size: uniform(10e-3), Lines: []outline.Loop{disc(15e-3, 0, 3e-3)}})
	count := map[int32]int{}
	for _, e := range m.Edges {
		count[e.Loop]++
	}
	if count[1] != 12 || count[2] != 8 {
		t.Errorf("%d edges round the bare hole and %d round the covered one, want 12 and 8", count[1], count[2])
	}
}

// A line within the snap distance of a boundary or another line joins it: no thin triangles between them.
func TestNearLinesJoin(t *testing.T) {
	region := outline.NewRegion(outline.Rectangle(pt(0, 0), 40e-3, 20e-3, 0), disc(0, 0, 3e-3))
	const snap = 50e-6
	for name, line := range map[string]outline.Loop{
		"along the edge, inside":  outline.Rectangle(pt(10e-3, 7e-3-0.6*snap), 8e-3, 6e-3, 0),
		"along the edge, outside": outline.Rectangle(pt(10e-3, 7e-3+0.6*snap), 8e-3, 6e-3, 0),
		"just over a hole":        disc(0, 0, 3e-3+0.7*snap),
		"just within a hole":      disc(0, 0, 3e-3-0.7*snap),
		"corner near the corner":  outline.Rectangle(pt(17e-3-0.5*snap, 7e-3-0.5*snap), 6e-3, 6e-3, 0),
	} {
		m := must(t, region, Options{Size: uniform(3e-3), Lines: []outline.Loop{line, line.Transform(outline.Shift(pt(0.2*snap, 0)))}, Snap: snap})
		if a := m.MinAngles(); a[0] < 24*math.Pi/180 {
			t.Errorf("%s: smallest angle %.1f degrees", name, a[0]*180/math.Pi)
		}
		if len(m.Triangles) > 600 {
			t.Errorf("%s: %d triangles", name, len(m.Triangles))
		}
		for _, n := range m.Triangles {
			for i := range 3 {
				if l := m.Nodes[n[i]].Distance(m.Nodes[n[next(i)]]); l < 2*snap {
					t.Errorf("%s: a side of %g m near %v", name, l, m.Nodes[n[i]])
				}
			}
		}
	}
}

// The inside of each triangle agrees with the lines round it, away from the lines themselves.
func TestWithinAgreesWithContains(t *testing.T) {
	examples := gallery()
	for seed := range uint64(60) {
		region, lines := randomPolygon(rand.New(rand.NewPCG(seed, 5)))
		if check(region) == nil {
			examples = append(examples, example{name: "random", region: region, lines: lines, size: 4e-3})
		}
	}
	compared := 0
	for _, e := range examples {
		if len(e.lines) == 0 {
			continue
		}
		m := must(t, e.region, Options{Size: uniform(e.size), Lines: e.lines})
		for k, n := range m.Triangles {
			p := m.Nodes[n[0]].Add(m.Nodes[n[1]]).Add(m.Nodes[n[2]]).Scale(1.0 / 3)
			in := map[int32]bool{}
			for _, l := range m.Within[k] {
				in[l] = true
			}
			for l, line := range e.lines {
				near := false
				for _, c := range line {
					_, d := c.Nearest(p)
					near = near || d < 0.02*line.Bounds().Diagonal()
				}
				if near {
					continue
				}
				compared++
				if got := in[int32(l)]; got != line.Contains(p) {
					t.Fatalf("%s: triangle at %v within line %d: %v", e.name, p, l, got)
				}
			}
		}
	}
	if compared < 10000 {
		t.Errorf("only %d comparisons", compared)
	}
}
