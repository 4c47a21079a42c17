package dxf_test

import (
	"math"
	"os"
	"path/filepath"
	"testing"

	"hushframe/core/mechanics/outline"
	"hushframe/stages/importgeom/dxf"
	"hushframe/stages/importgeom/loops"
)

// Whatever the bytes, reading ends with a drawing of finite curves or a fault.
func FuzzRead(f *testing.F) {
	files, _ := filepath.Glob(filepath.Join(samples, "*.dxf"))
	if len(files) == 0 {
		f.Fatal("no seeds")
	}
	for _, name := range files {
		data, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		if len(data) > 1<<16 {
			return
		}
		d, err := dxf.Read("x", data, dxf.Options{Unit: "mm"})
		if err != nil {
			return
		}
		var pieces []loops.Piece
		box := outline.EmptyBox()
		for _, e := range d.Entities {
			for _, c := range e.Curves {
				for _, p := range []float64{c.P0.X, c.P0.Y, c.P1.X, c.P1.Y, c.At(0.5).X, c.At(0.5).Y} {
					if math.IsNaN(p) || math.IsInf(p, 0) {
						t.Fatalf("%s has no finite place: %+v", e, c)
					}
				}
				box = box.Union(c.Bounds())
				pieces = append(pieces, loops.Piece{Curve: c, Source: e.String()})
			}
		}
		if len(pieces) > 300 || box.Diagonal() > 100 { // as assemble limits the size of plates
			return
		}
		for _, o := range loops.Find(pieces, 2e-5).Outlines {
			if a := o.Region.Outer.Area(); math.IsNaN(a) || a < 0 {
				t.Fatalf("an outline has the area %g", a)
			}
		}
	})
}

func BenchmarkRead(b *testing.B) {
	data := load(b, "insert_turned_mirrored.dxf")
	b.SetBytes(int64(len(data)))
	for b.Loop() {
		if _, err := dxf.Read("x", data, dxf.Options{}); err != nil {
			b.Fatal(err)
		}
	}
}
