package main

import (
	"bytes"
	"fmt"
	"math"
)

// point is in mm.
type point struct{ x, y float64 }

// corner is a vertex of a polygon with the radius of its fillet.
type corner struct {
	point
	radius float64
}

// drawing collects the entities of one cut file in the drawing exchange
// format of 2000, model space only.
type drawing struct {
	name  string
	count int
	body  bytes.Buffer
}

func (d *drawing) pair(code int, value any) {
	switch v := value.(type) {
	case float64:
		fmt.Fprintf(&d.body, "%3d\n%.6f\n", code, v)
	default:
		fmt.Fprintf(&d.body, "%3d\n%v\n", code, v)
	}
}

// begin opens an entity with its handle and layer.
func (d *drawing) begin(kind, class, layer string) {
	d.count++
	d.pair(0, kind)
	d.pair(5, fmt.Sprintf("%X", 0x100+d.count))
	d.pair(100, "AcDbEntity")
	d.pair(8, layer)
	d.pair(100, class)
}

func (d *drawing) circle(layer string, c point, diameter float64) {
	d.begin("CIRCLE", "AcDbCircle", layer)
	d.pair(10, c.x)
	d.pair(20, c.y)
	d.pair(30, 0.0)
	d.pair(40, diameter/2)
}

func (d *drawing) line(layer string, a, b point) {
	d.begin("LINE", "AcDbLine", layer)
	d.pair(10, a.x)
	d.pair(20, a.y)
	d.pair(30, 0.0)
	d.pair(11, b.x)
	d.pair(21, b.y)
	d.pair(31, 0.0)
}

func (d *drawing) arc(layer string, c point, radius, fromDegrees, toDegrees float64) {
	d.begin("ARC", "AcDbCircle", layer)
	d.pair(10, c.x)
	d.pair(20, c.y)
	d.pair(30, 0.0)
	d.pair(40, radius)
	d.pair(100, "AcDbArc")
	d.pair(50, fromDegrees)
	d.pair(51, toDegrees)
}

// polygon draws a closed polyline whose corners are rounded by arcs.
func (d *drawing) polygon(layer string, corners []corner) {
	type vertex struct {
		point
		bulge float64 // tan(sweep/4) of the arc to the next vertex
	}
	var vs []vertex
	n := len(corners)
	for i, c := range corners {
		if c.radius == 0 {
			vs = append(vs, vertex{c.point, 0})
			continue
		}
		before, after := corners[(i+n-1)%n].point, corners[(i+1)%n].point
		ux, uy := unit(before.x-c.x, before.y-c.y)
		vx, vy := unit(after.x-c.x, after.y-c.y)
		turn := math.Pi - math.Acos(ux*vx+uy*vy) // change of direction at the corner
		reach := c.radius * math.Tan(turn/2)
		sign := 1.0
		if ux*vy-uy*vx > 0 { // a right turn
			sign = -1
		}
		vs = append(vs, vertex{point{c.x + reach*ux, c.y + reach*uy}, sign * math.Tan(turn/4)},
			vertex{point{c.x + reach*vx, c.y + reach*vy}, 0})
	}
	d.begin("LWPOLYLINE", "AcDbPolyline", layer)
	d.pair(90, len(vs))
	d.pair(70, 1)
	for _, v := range vs {
		d.pair(10, v.x)
		d.pair(20, v.y)
		if v.bulge != 0 {
			d.pair(42, v.bulge)
		}
	}
}

// slot draws a slot with round ends as two lines and two arcs, along x when
// the length lies in x, along y when upright.
func (d *drawing) slot(layer string, c point, length, width float64, upright bool) {
	h, r := length/2-width/2, width/2
	if upright {
		d.line(layer, point{c.x + r, c.y - h}, point{c.x + r, c.y + h})
		d.arc(layer, point{c.x, c.y + h}, r, 0, 180)
		d.line(layer, point{c.x - r, c.y + h}, point{c.x - r, c.y - h})
		d.arc(layer, point{c.x, c.y - h}, r, 180, 360)
		return
	}
	d.line(layer, point{c.x - h, c.y - r}, point{c.x + h, c.y - r})
	d.arc(layer, point{c.x + h, c.y}, r, 270, 90)
	d.line(layer, point{c.x + h, c.y + r}, point{c.x - h, c.y + r})
	d.arc(layer, point{c.x - h, c.y}, r, 90, 270)
}

// bytes gives the whole file.
func (d *drawing) bytes() []byte {
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
