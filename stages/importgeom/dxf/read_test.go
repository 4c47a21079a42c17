package dxf_test

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/dxf"
	"hushframe/stages/importgeom/loops"
)

const samples = "../../../testdata/geometry/dxf"

func load(t testing.TB, name string) []byte {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(samples, name))
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// measure gives areas in mm²: inside the outer loops, and with the holes taken off; and the bounding box in mm.
func measure(d *dxf.Drawing) (outer, net float64, box outline.Box) {
	box = outline.EmptyBox()
	var pieces []loops.Piece
	for _, e := range d.Entities {
		for _, c := range e.Curves {
			box = box.Union(c.Bounds())
			pieces = append(pieces, loops.Piece{Curve: c, Source: e.String()})
		}
	}
	for _, o := range loops.Find(pieces, 2e-5).Outlines {
		outer += 1e6 * o.Region.Outer.Area()
		net += 1e6 * o.Region.Area()
	}
	return outer, net, outline.Box{Min: box.Min.Scale(1e3), Max: box.Max.Scale(1e3)}
}

// Every drawing is simple enough for its area and extent to be worked out by hand; want gives both (mm², mm).
func TestEntitiesByAreaAndExtent(t *testing.T) {
	stadium := 40*20 + math.Pi*100    // 40 by 20 with half circles of radius 10
	tile := 4.0                       // square of 2 with a hole of radius 0.5
	hole := math.Pi / 4               // of the tile
	bezier := 1440.0                  // 3/5 of width times height of the control points 0,0 0,40 60,40 60,0
	half := math.Sqrt(3)/2*3 + 0.5*3  // half extent of a square of side 6 turned by 30 degrees
	diagonal := 4 * math.Sqrt2        // half extent of a square of side 8 turned by 45 degrees
	tilted := math.Hypot(24, -18*0.5) // half extent in x of the ellipse with half axes (24, 18) and (−9, 12)
	tiltedY := math.Hypot(18, 24*0.5) // and in y
	for _, c := range []struct {
		file       string
		unit       string
		outer, net float64
		box        [4]float64 // NaN is not checked
		tol        float64    // relative, of areas; 0 is 1e-9
		kinds      string     // of curves in order, L, A, C
	}{
		{"line_rectangle_r10.dxf", "mm", 800, 800, [4]float64{0, 0, 40, 20}, 0, "LLLL"},
		{"arc_stadium.dxf", "", stadium, stadium, [4]float64{-10, 0, 50, 20}, 0, "LALA"},
		{"circle_with_hole.dxf", "", math.Pi * 400, math.Pi * 384, [4]float64{-15, -15, 25, 25}, 0, "AA"},
		// The hole is 10 by 4 with a half circle of radius 2 cut away at its right end.
		{"lwpolyline_bulges.dxf", "", stadium, stadium - (40 - math.Pi*2), [4]float64{-10, 0, 50, 20}, 0, "LALALALL"},
		{"polyline_r12_crlf.dxf", "mm", stadium, stadium, [4]float64{-10, 0, 50, 20}, 0, "LALA"},
		{"polyline_open_and_meshes.dxf", "", 450, 450, [4]float64{0, 0, 30, 30}, 0, "LLL"},
		{"polyline_spline_frame.dxf", "", 450, 450, [4]float64{0, 0, 30, 30}, 0, "LLL"},
		{"polyline_3d.dxf", "", 450, 450, [4]float64{0, 0, 30, 30}, 0, "LLL"},
		{"ellipse.dxf", "", math.Pi * 30 * 15, math.Pi * 30 * 15, [4]float64{10 - tilted, -tiltedY, 10 + tilted, tiltedY}, 1e-6, ""},
		{"ellipse_half_and_chord.dxf", "", math.Pi * 30 * 15 / 2, math.Pi * 30 * 15 / 2, [4]float64{-30, 0, 30, 15}, 1e-6, "CCCCCCCCL"},
		{"spline_cubic.dxf", "", bezier, bezier, [4]float64{0, 0, 60, 30}, 0, "CL"},
		{"spline_quadratic.dxf", "", 1200, 1200, [4]float64{0, 0, 60, 30}, 0, "CL"}, // two thirds of 60 by 30
		{"spline_linear.dxf", "", 1800, 1800, [4]float64{0, 0, 60, 30}, 0, "LLLL"},
		{"spline_rational_circle.dxf", "", math.Pi * 400, math.Pi * 400, [4]float64{-20, -20, 20, 20}, 1e-5, ""},
		{"spline_degree_5.dxf", "", bezier, bezier, [4]float64{0, 0, 60, 30}, 1e-5, ""},
		{"spline_through_points.dxf", "", math.Pi * 400, math.Pi * 400, [4]float64{-20, -20, 20, 20}, 1e-4, ""},
		{"insert_turned_mirrored.dxf", "", (9 + 4) * tile, (9 + 4) * (tile - hole), [4]float64{10 - half, 10 - half, 32, 10 + half}, 0, "LLLLALLLLA"},
		{"insert_unequal.dxf", "", 160, 160 - math.Pi*5*2, [4]float64{-10, -4, 10, 4}, 1e-6, ""},
		{"insert_array.dxf", "", 6 * tile, 6 * (tile - hole), [4]float64{-5, -1, 1, 11}, 0, ""},
		{"insert_nested.dxf", "", (4 + 16) * tile, (4 + 16) * (tile - hole), [4]float64{3, -diagonal, 17 + diagonal, diagonal}, 0, ""},
		{"extrusion_mirrored.dxf", "", stadium, stadium - 4*math.Pi, [4]float64{-50, 0, 10, 20}, 0, ""},
		{"extrusion_insert_ellipse.dxf", "", 4*tile + math.Pi*25, 4*(tile-hole) + math.Pi*25, [4]float64{math.NaN(), -math.Hypot(6, 4), 30 + math.Hypot(8, 3), 6}, 1e-6, ""},
		{"cut_short.dxf", "", 800, 800, [4]float64{0, 0, 40, 20}, 0, "LLLL"},
	} {
		t.Run(c.file, func(t *testing.T) {
			d, err := dxf.Read(c.file, load(t, c.file), dxf.Options{Unit: c.unit})
			if err != nil {
				t.Fatal(err)
			}
			outer, net, box := measure(d)
			tol := c.tol
			if tol == 0 {
				tol = 1e-9
			}
			if math.Abs(outer-c.outer) > tol*c.outer || math.Abs(net-c.net) > tol*c.net {
				t.Errorf("area %.9g and %.9g mm², want %.9g and %.9g", outer, net, c.outer, c.net)
			}
			for i, x := range [4]float64{box.Min.X, box.Min.Y, box.Max.X, box.Max.Y} {
				if math.Abs(x-c.box[i]) > math.Max(tol, 1e-9)*100 {
					t.Errorf("box %v, want %v", box, c.box)
					break
				}
			}
			if c.kinds != "" && kinds(d) != c.kinds {
				t.Errorf("curves %s, want %s", kinds(d), c.kinds)
			}
			if d.Cut != strings.HasPrefix(c.file, "cut_short") {
				t.Errorf("cut short: %v", d.Cut)
			}
		})
	}
}

func kinds(d *dxf.Drawing) string {
	s := ""
	for _, e := range d.Entities {
		for _, c := range e.Curves {
			s += map[outline.Kind]string{outline.KindLine: "L", outline.KindArc: "A", outline.KindCubic: "C"}[c.Kind]
		}
	}
	return s
}

func TestWhereEntitiesComeFrom(t *testing.T) {
	data := load(t, "layers_and_rest.dxf")
	d, err := dxf.Read("x", data, dxf.Options{})
	if err != nil {
		t.Fatal(err)
	}
	// Four lines and a circle, a bend line, and a block of five whose layer 0 is that of the insert.
	if got := fmt.Sprint(d.Layers); got != "[{Outline 5} {bend 1} {marks 5}]" {
		t.Errorf("layers %s", got)
	}
	if got := fmt.Sprint(d.Skipped); got != "[{LINE without length 1} {POINT 1} {TEXT 1} {in paper space 1}]" {
		t.Errorf("skipped %s", got)
	}
	only, err := dxf.Read("x", data, dxf.Options{Layers: []string{"OUTLINE"}})
	if err != nil {
		t.Fatal(err)
	}
	if len(only.Entities) != 5 || only.Entities[4].Type != "CIRCLE" || only.Entities[4].Layer != "Outline" {
		t.Errorf("layer OUTLINE has %v", only.Entities)
	}
	// Handle and line as they stand in the file.
	e := only.Entities[4]
	lines := strings.Split(string(data), "\n")
	if strings.TrimSpace(lines[e.Line]) != "CIRCLE" || strings.TrimSpace(lines[e.Line+2]) != e.Handle {
		t.Errorf("%s is not where it says: %q, %q", e, lines[e.Line], lines[e.Line+2])
	}
	latin, err := dxf.Read("x", load(t, "layer_latin1.dxf"), dxf.Options{Layers: []string{"Außen"}})
	if err != nil || len(latin.Entities) != 1 {
		t.Errorf("a layer named in Latin-1: %v, %v", latin, err)
	}
	plane, err := dxf.Read("x", load(t, "other_plane.dxf"), dxf.Options{})
	if err != nil || len(plane.Entities) != 1 || fmt.Sprint(plane.Skipped) != "[{CIRCLE in another plane 1}]" {
		t.Errorf("a circle in another plane: %+v, %v", plane, err)
	}
}

// Lengths of a unit in metres, by value of $INSUNITS: the inch is 25.4 mm by definition, the survey foot 1200/3937 m,
// the astronomical unit, the light-year and the parsec as defined by the IAU.
func TestEveryUnit(t *testing.T) {
	want := map[int]float64{1: 0.0254, 2: 0.3048, 3: 1609.344, 4: 0.001, 5: 0.01, 6: 1, 7: 1000, 8: 2.54e-8, 9: 2.54e-5,
		10: 0.9144, 11: 1e-10, 12: 1e-9, 13: 1e-6, 14: 0.1, 15: 10, 16: 100, 17: 1e9, 18: 149597870700, 19: 9.4607304725808e15,
		20: 3.0856775814913673e16, 21: 0.30480060960121924, 22: 0.025400050800101603, 23: 0.9144018288036576, 24: 1609.347218694438}
	for code := 1; code <= 24; code++ {
		text := fmt.Sprintf("0\nSECTION\n2\nHEADER\n9\n$INSUNITS\n70\n%d\n0\nENDSEC\n0\nSECTION\n2\nENTITIES\n0\nLINE\n8\n0\n10\n0\n20\n0\n11\n2\n21\n0\n0\nENDSEC\n0\nEOF\n", code)
		d, err := dxf.Read("x", []byte(text), dxf.Options{})
		if err != nil {
			t.Errorf("unit %d: %v", code, err)
			continue
		}
		if got := d.Entities[0].Curves[0].P1.X / 2; math.Abs(got-want[code]) > 1e-15*want[code] || !d.Declared {
			t.Errorf("unit %d (%s) is %g m, want %g", code, d.Unit, got, want[code])
		}
		if m, ok := dxf.UnitLength(d.Unit); !ok || m != want[code] && math.Abs(m-want[code]) > 1e-15*want[code] {
			t.Errorf("unit name %q gives %g", d.Unit, m)
		}
	}
	d, err := dxf.Read("x", load(t, "arc_stadium.dxf"), dxf.Options{Unit: "inch"})
	if err != nil || d.Overruled != "mm" || math.Abs(d.Entities[0].Curves[0].P1.X-40*0.0254) > 1e-12 {
		t.Errorf("a unit from outside: %v %v", d, err)
	}
	if d, err := dxf.Read("x", load(t, "no_unit.dxf"), dxf.Options{Unit: "cm"}); err != nil || d.Declared || d.Overruled != "" {
		t.Errorf("a unit where the file has none: %+v %v", d, err)
	}
}

func TestRefusals(t *testing.T) {
	good := string(load(t, "arc_stadium.dxf"))
	bigArray := strings.Replace(string(load(t, "insert_array.dxf")), " 70\n3\n 71\n2\n", " 70\n30000\n 71\n30000\n", 1)
	for _, c := range []struct {
		name, data, want string
		kind             fault.Kind
	}{
		{"empty", " \n", "the file is empty", fault.Input},
		{"binary", "Some Binary DXF\r\n\x1a\x00\x00\x00", "this is a binary DXF drawing", fault.Input},
		{"prose", "Dear reader,\nhere is the plate\n", `line 1: "Dear reader," is no group code`, fault.Input},
		{"picture", "\x89PNG\r\n\x1a\n\x00\x00", "is no group code", fault.Input},
		{"no entities", "0\nSECTION\n2\nHEADER\n0\nENDSEC\n0\nEOF\n", "no ENTITIES section", fault.Input},
		{"damaged", strings.Replace(good, " 20\n10\n", " 20\nten\n", 1), `"ten" (group code 20) is not a usable number`, fault.Input},
		{"not a number", strings.Replace(good, " 20\n10\n", " 20\nnan\n", 1), `"nan" (group code 20)`, fault.Input},
		{"far away", strings.Replace(good, " 20\n10\n", " 20\n1e300\n", 1), `"1e300" (group code 20)`, fault.Input},
		{"no unit", string(load(t, "no_unit.dxf")), "the drawing does not state its unit", fault.Input},
		{"unitless", string(load(t, "unitless.dxf")), "the drawing does not state its unit", fault.Input},
		{"unknown unit", string(load(t, "unknown_unit.dxf")), "$INSUNITS is 77", fault.Input},
		{"block in itself", string(load(t, "insert_itself.dxf")), `the block "A" contains itself`, fault.Input},
		{"unknown block", string(load(t, "insert_unknown.dxf")), `the block "NOWHERE", which the drawing does not have`, fault.Input},
		{"flat insert", strings.Replace(string(load(t, "insert_unequal.dxf")), " 42\n4\n", " 42\n0\n", 1), "flattens its block", fault.Input},
		{"huge array", bigArray, "it inserts 30000 by 30000 copies", fault.Limit},
		{"knots", strings.Replace(string(load(t, "spline_cubic.dxf")), " 40\n1\n", "", 1), "the spline has 7 knots where 4 control points of degree 3 need 8", fault.Input},
		{"falling knots", strings.Replace(string(load(t, "spline_quadratic.dxf")), " 40\n2\n", " 40\n-1\n", 1), "do not ascend", fault.Input},
		{"weight", strings.Replace(string(load(t, "spline_rational_circle.dxf")), " 41\n1\n", " 41\n0\n", 1), "a weight of 0", fault.Input},
		{"degree", strings.Replace(string(load(t, "spline_cubic.dxf")), " 71\n3\n", " 71\n400\n", 1), "the degree 400", fault.Input},
	} {
		t.Run(c.name, func(t *testing.T) {
			d, err := dxf.Read("plate.dxf", []byte(c.data), dxf.Options{})
			if err == nil {
				t.Fatalf("was read: %d entities", len(d.Entities))
			}
			f := fault.From(err)
			if f.Kind != c.kind || !strings.Contains(err.Error(), c.want) || f.Item != "plate.dxf" || f.Remedy == "" {
				t.Errorf("kind %s: %v\nwant %q", f.Kind, err, c.want)
			}
		})
	}
	_, err := dxf.Read("x", load(t, "no_unit.dxf"), dxf.Options{})
	if !strings.Contains(err.Error(), "150 mm by 100 mm") {
		t.Errorf("the remedy does not say how large the part would be: %v", err)
	}
	if _, err := dxf.Read("x", load(t, "no_unit.dxf"), dxf.Options{Unit: "furlong"}); err == nil || !strings.Contains(err.Error(), `"furlong" is no unit of length`) {
		t.Errorf("furlong: %v", err)
	}
}

// A byte order mark, carriage returns alone, blanks round values and remarks change nothing.
func TestTolerantText(t *testing.T) {
	plain := load(t, "arc_stadium.dxf")
	want, _ := dxf.Read("x", plain, dxf.Options{})
	for name, data := range map[string][]byte{
		"byte order mark": append([]byte("\xef\xbb\xbf"), plain...),
		"CR":              bytes.ReplaceAll(plain, []byte("\n"), []byte("\r")),
		"blanks":          bytes.ReplaceAll(plain, []byte("\n"), []byte("  \n")),
		"remark":          append([]byte("999\nmade by hand\n"), plain...),
		"lower case":      bytes.ReplaceAll(plain, []byte("ENTITIES"), []byte("Entities")),
	} {
		d, err := dxf.Read("x", data, dxf.Options{})
		if err != nil || kinds(d) != kinds(want) || len(d.Entities) != 4 || d.Entities[1].Curves[0] != want.Entities[1].Curves[0] {
			t.Errorf("%s: %v", name, err)
		}
	}
}
