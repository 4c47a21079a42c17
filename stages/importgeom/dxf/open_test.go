package dxf_test

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/dxf"
	"hushframe/stages/importgeom/loops"
)

// rows reads a table of reference values; open data are skipped, and this is said, when they are not there.
func rows(t *testing.T, path ...string) (folder string, out []map[string]string) {
	t.Helper()
	root := os.Getenv("HUSHFRAME_OPEN_DATA")
	if root == "" {
		t.Skip("HUSHFRAME_OPEN_DATA is not set: the open drawings are not checked")
	}
	name := filepath.Join(append([]string{root}, path...)...)
	f, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	all, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range all[1:] {
		m := map[string]string{}
		for i, h := range all[0] {
			m[h] = r[i]
		}
		out = append(out, m)
	}
	return filepath.Dir(name), out
}

func number(t *testing.T, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatalf("reference value: %v", err)
	}
	return x
}

// The samples of dxf_samples_a against index.csv (its reader flattened curves within 0.002 drawing units and merged
// what touches): extents and areas inside the outer loops within 0.1 %. Drawings are read in millimetres whatever their
// unit, since the index is in drawing units.
func TestOpenSamples(t *testing.T) {
	folder, index := rows(t, "dxf_samples_a", "index.csv")
	for _, row := range index {
		name := row["file"]
		t.Run(name, func(t *testing.T) {
			data, err := os.ReadFile(filepath.Join(folder, name))
			if err != nil {
				t.Fatal(err)
			}
			declared := row["insunits"] != "" && row["insunits"] != "0" && row["insunits"] != "?"
			own, err := dxf.Read(name, data, dxf.Options{})
			if name == "bin_dxf_r12.dxf" || !declared {
				f := fault.From(err)
				if err == nil || f.Kind != fault.Input || f.Text == "" || f.Remedy == "" {
					t.Fatalf("read without a unit, or refused without a sentence: %v", err)
				}
			} else if err != nil || !own.Declared {
				t.Fatalf("not read in its own unit: %v", err)
			}
			if name == "bin_dxf_r12.dxf" {
				return
			}
			d, err := dxf.Read(name, data, dxf.Options{Unit: "mm"})
			if err != nil {
				t.Fatal(err)
			}
			if row["bbox"] == "" { // no curves in the file, or the reference reader failed
				if name == "small_r14.dxf" && len(d.Entities) > 0 {
					t.Errorf("%d entities", len(d.Entities))
				}
				return
			}
			want := strings.Fields(row["bbox"])
			box := outline.EmptyBox()
			var pieces []loops.Piece
			for _, e := range d.Entities {
				for _, c := range e.Curves {
					if name == "multi_insert_with_attribs.dxf" && c.P0.Norm() > 6e-3 {
						continue // the reference reader drew only the first of the copies in rows and columns
					}
					box = box.Union(c.Bounds())
					pieces = append(pieces, loops.Piece{Curve: c, Source: e.String()})
				}
			}
			const rounding = 0.0005 // of the index
			size := 1e3 * math.Max(box.Width(), box.Height())
			for i, x := range []float64{box.Min.X, box.Min.Y, box.Max.X, box.Max.Y} {
				if w := number(t, want[i]); math.Abs(1e3*x-w) > math.Max(0.001*size, rounding) {
					t.Errorf("extent %d is %.4f, want %.4f", i, 1e3*x, w)
				}
			}
			if name == "multi_insert_with_attribs.dxf" {
				return // its areas touch in ways the reference reader did not see
			}
			area := outerArea(loops.Find(pieces, 2e-5))
			if w := number(t, row["outer_area"]); math.Abs(area-w) > 0.001*w {
				t.Errorf("area %.3f, want %.3f", area, w)
			}
		})
	}
}

// outerArea sums, in mm², what lies inside all outlines and tangles that lie in no other.
func outerArea(r loops.Result) float64 {
	sum := 0.0
	for _, o := range r.Outlines {
		if o.Depth == 0 {
			sum += 1e6 * o.Region.Outer.Area()
		}
	}
	for _, tangle := range r.Tangles {
		sum += 1e6 * tangle.Area
	}
	return sum
}

// Real cut files of plates: extents, area inside, number of holes and area with the holes taken off (even-odd rule)
// within 0.1 % of reference_areas.csv.
func TestOpenPlates(t *testing.T) {
	for _, set := range []string{"plates_a_middle", "plates_b_battery"} {
		folder, table := rows(t, set, "reference_areas.csv")
		for _, row := range table {
			t.Run(row["file"], func(t *testing.T) {
				data, err := os.ReadFile(filepath.Join(folder, row["file"]))
				if err != nil {
					t.Fatal(err)
				}
				unit := ""
				if row["insunits"] == "" {
					unit = "mm"
				}
				d, err := dxf.Read(row["file"], data, dxf.Options{Unit: unit})
				if err != nil {
					t.Fatal(err)
				}
				var pieces []loops.Piece
				for _, e := range d.Entities {
					for _, c := range e.Curves {
						pieces = append(pieces, loops.Piece{Curve: c, Source: e.String()})
					}
				}
				r := loops.Find(pieces, 2e-5)
				if len(r.Outlines) != 1 || len(r.Open) != 0 || len(r.Tangles) != 0 || r.Dropped != 0 {
					t.Fatalf("%d outlines, %d open, %d tangles, %d dropped", len(r.Outlines), len(r.Open), len(r.Tangles), r.Dropped)
				}
				region := r.Outlines[0].Region
				b := region.Bounds()
				for _, c := range []struct {
					what string
					got  float64
					want string
				}{
					{"x from", 1e3 * b.Min.X, row["bbox_xmin"]}, {"y from", 1e3 * b.Min.Y, row["bbox_ymin"]},
					{"x to", 1e3 * b.Max.X, row["bbox_xmax"]}, {"y to", 1e3 * b.Max.Y, row["bbox_ymax"]},
					{"area inside", 1e6 * region.Outer.Area(), row["outer_area"]},
					{"net area", 1e6 * region.Area(), row["net_area_even_odd"]},
					{"holes", float64(len(region.Holes)), row["holes_even_odd"]},
				} {
					if w := number(t, c.want); math.Abs(c.got-w) > 0.001*math.Abs(w) {
						t.Errorf("%s is %.4f, want %.4f", c.what, c.got, w)
					}
				}
			})
		}
	}
}
