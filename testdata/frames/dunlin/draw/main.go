// Command draw writes the cut file of the Dunlin, an invented one-piece frame
// with six rotors that the tests run beside the demo:
//
//	go run ./testdata/frames/dunlin/draw testdata/frames/dunlin/cut
package main

import (
	"fmt"
	"math"
	"os"

	"hushframe/jobs/drawing"
)

// The frame, mm: six arms of 17 mm, motors on a circle of 150 mm radius.
const (
	motors    = 6
	reach     = 150.0
	halfWidth = 8.5
	hub       = 46.0 // where neighbouring arms meet
)

func main() {
	folder := "testdata/frames/dunlin/cut"
	if len(os.Args) > 1 {
		folder = os.Args[1]
	}
	if err := drawing.WriteAll(folder, frame()); err != nil {
		fmt.Fprintln(os.Stderr, "draw:", err)
		os.Exit(1)
	}
}

func frame() *drawing.Drawing {
	d := &drawing.Drawing{Name: "frame"}
	var outline []drawing.Corner
	turn := func(x, y, angle, radius float64) drawing.Corner {
		sin, cos := math.Sincos(angle)
		return drawing.Round(x*cos-y*sin, x*sin+y*cos, radius)
	}
	step := 2 * math.Pi / motors
	for k := range motors {
		// The first arm points 30 degrees to the left of forward.
		a := step * (float64(k) + 0.5)
		outline = append(outline,
			turn(hub*math.Cos(step/2), -hub*math.Sin(step/2)+6, a, 6), // out of the notch before the arm
			turn(hub*math.Cos(step/2)+14, -halfWidth, a, 12),
			turn(reach+13, -halfWidth-3, a, 7),
			turn(reach+13, halfWidth+3, a, 7),
			turn(hub*math.Cos(step/2)+14, halfWidth, a, 12),
			turn(hub*math.Cos(step/2), hub*math.Sin(step/2)-6, a, 6),
		)
		for j := range 4 {
			b := math.Pi/4 + float64(j)*math.Pi/2
			p := turn(reach+8*math.Cos(b), 8*math.Sin(b), a, 0)
			d.Circle("profile", p.Point, 3.2)
		}
		d.Circle("profile", turn(reach, 0, a, 0).Point, 5)
	}
	d.Polygon("profile", outline)
	for _, x := range []float64{-15.25, 15.25} {
		for _, y := range []float64{-15.25, 15.25} {
			d.Circle("profile", drawing.At(x, y), 3.2)
		}
	}
	d.Circle("profile", drawing.At(0, 0), 14)
	return d
}
