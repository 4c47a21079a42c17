// Package drawing writes the cut files of the invented frames that come with
// the project, so that every dimension of theirs stands in readable Go.
package drawing

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"path/filepath"
)

// Point is in mm.
type Point struct{ X, Y float64 }

// Corner is a vertex of a polygon with the radius of its fillet.
type Corner struct {
	Point
	Radius float64
}

// At is the point x, y.
func At(x, y float64) Point { return Point{x, y} }

// Round is the corner x, y with a fillet.
func Round(x, y, radius float64) Corner { return Corner{Point{x, y}, radius} }

// Drawing collects the entities of one cut file in the Drawing exchange
// format of 2000, model space only.
type Drawing struct {
	Name  string
	Count int
	body  bytes.Buffer
}

func (d *Drawing) pair(code int, value any) {
	switch v := value.(type) {
	case float64:
		fmt.Fprintf(&d.body, "%3d\n%.6f\n", code, v)
	default:
		fmt.Fprintf(&d.body, "%3d\n%v\n", code, v)
	}
}

// begin opens an entity with its handle and layer.
func (d *Drawing) begin(kind, class, layer string) {
	d.Count++
	d.pair(0, kind)
	d.pair(5, fmt.Sprintf("%X", 0x100+d.Count))
	d.pair(100, "AcDbEntity")
	d.pair(8, layer)
	d.pair(100, class)
}

// Circle draws a hole.
func (d *Drawing) Circle(layer string, c Point, diameter float64) {
	d.begin("CIRCLE", "AcDbCircle", layer)
	d.pair(10, c.X)
	d.pair(20, c.Y)
	d.pair(30, 0.0)
	d.pair(40, diameter/2)
}

// Line draws a straight line.
func (d *Drawing) Line(layer string, a, b Point) {
	d.begin("LINE", "AcDbLine", layer)
	d.pair(10, a.X)
	d.pair(20, a.Y)
	d.pair(30, 0.0)
	d.pair(11, b.X)
	d.pair(21, b.Y)
	d.pair(31, 0.0)
}

// Arc draws an arc, counterclockwise between two angles.
func (d *Drawing) Arc(layer string, c Point, radius, fromDegrees, toDegrees float64) {
	d.begin("ARC", "AcDbCircle", layer)
	d.pair(10, c.X)
	d.pair(20, c.Y)
	d.pair(30, 0.0)
	d.pair(40, radius)
	d.pair(100, "AcDbArc")
	d.pair(50, fromDegrees)
	d.pair(51, toDegrees)
}

// Polygon draws a closed polyline whose corners are rounded by arcs.
func (d *Drawing) Polygon(layer string, corners []Corner) {
	type vertex struct {
		Point
		bulge float64 // tan(sweep/4) of the arc to the next vertex
	}
	var vs []vertex
	n := len(corners)
	for i, c := range corners {
		if c.Radius == 0 {
			vs = append(vs, vertex{c.Point, 0})
			continue
		}
		before, after := corners[(i+n-1)%n].Point, corners[(i+1)%n].Point
		ux, uy := unit(before.X-c.X, before.Y-c.Y)
		vx, vy := unit(after.X-c.X, after.Y-c.Y)
		turn := math.Pi - math.Acos(ux*vx+uy*vy) // change of direction at the Corner
		reach := c.Radius * math.Tan(turn/2)
		sign := 1.0
		if ux*vy-uy*vx > 0 { // a right turn
			sign = -1
		}
		vs = append(vs, vertex{Point{c.X + reach*ux, c.Y + reach*uy}, sign * math.Tan(turn/4)},
			vertex{Point{c.X + reach*vx, c.Y + reach*vy}, 0})
	}
	d.begin("LWPOLYLINE", "AcDbPolyline", layer)
	d.pair(90, len(vs))
	d.pair(70, 1)
	for _, v := range vs {
		d.pair(10, v.X)
		d.pair(20, v.Y)
		if v.bulge != 0 {
			d.pair(42, v.bulge)
		}
	}
}

// Slot draws a slot with round ends as two lines and two arcs, along x when
// the length lies in x, along y when upright.
func (d *Drawing) Slot(layer string, c Point, length, width float64, upright bool) {
	h, r := length/2-width/2, width/2
	if upright {
		d.Line(layer, Point{c.X + r, c.Y - h}, Point{c.X + r, c.Y + h})
		d.Arc(layer, Point{c.X, c.Y + h}, r, 0, 180)
		d.Line(layer, Point{c.X - r, c.Y + h}, Point{c.X - r, c.Y - h})
		d.Arc(layer, Point{c.X, c.Y - h}, r, 180, 360)
		return
	}
	d.Line(layer, Point{c.X - h, c.Y - r}, Point{c.X + h, c.Y - r})
	d.Arc(layer, Point{c.X + h, c.Y}, r, 270, 90)
	d.Line(layer, Point{c.X + h, c.Y + r}, Point{c.X - h, c.Y + r})
	d.Arc(layer, Point{c.X - h, c.Y}, r, 90, 270)
}

// Bytes gives the whole file.
func (d *Drawing) Bytes() []byte {
	var out bytes.Buffer
	out.WriteString("  0\nSECTION\n  2\nHEADER\n  9\n$ACADVER\n  1\nAC1015\n  9\n$INSUNITS\n 70\n4\n  9\n$MEASUREMENT\n 70\n1\n  0\nENDSEC\n")
	out.WriteString("  0\nSECTION\n  2\nENTITIES\n")
	out.Write(d.body.Bytes())
	out.WriteString("  0\nENDSEC\n  0\nEOF\n")
	return out.Bytes()
}

func unit(x, y float64) (float64, float64) {
	r := math.Hypot(x, y)
	return x / r, y / r
}

// WriteAll puts drawings into a folder, made when absent, and says so.
func WriteAll(folder string, drawings ...*Drawing) error {
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return err
	}
	for _, d := range drawings {
		if err := os.WriteFile(filepath.Join(folder, d.Name+".dxf"), d.Bytes(), 0o644); err != nil {
			return err
		}
		fmt.Printf("%s.dxf: %d entities\n", d.Name, d.Count)
	}
	return nil
}
