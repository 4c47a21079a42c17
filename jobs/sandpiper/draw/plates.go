package main

import (
	"math"

	"hushframe/jobs/drawing"
)

var at, round = drawing.At, drawing.Round

// The frame, in mm, x forward and y left. Motors stand at (±motorX, ±motorY).
const (
	motorX = 80.0
	motorY = 86.0

	armWidth  = 15.0
	armRoot   = 12.0 // distance of the arm's inner end from the centre
	boltInner = 19.0 // sandwich bolts, distance from the centre along the arm
	boltOuter = 33.0
	boltHole  = 3.2
	padRadius = 14.0 // round end under the motor

	postHole = 3.2
)

// armAngle is the direction of the forward left arm from the x axis.
var armAngle = math.Atan2(motorY, motorX)

// armLength is from the centre to the motor's shaft.
var armLength = math.Hypot(motorX, motorY)

// Places of the standoffs: nose and tail on the bottom plate, waist on the clamp plate.
var (
	nosePosts  = mirrored(at(74, 17))
	tailPosts  = mirrored(at(-64, 15))
	waistPosts = mirrored(at(0, 25))
	stackHoles = []drawing.Point{at(42, 10), at(42, -10), at(62, 10), at(62, -10)}
)

func mirrored(p drawing.Point) []drawing.Point { return []drawing.Point{p, at(p.X, -p.Y)} }

// sandwichBolts lists the places of the eight bolts that hold the arms.
func sandwichBolts() []drawing.Point {
	var out []drawing.Point
	for _, r := range []float64{boltInner, boltOuter} {
		x, y := r*math.Cos(armAngle), r*math.Sin(armAngle)
		out = append(out, at(x, y), at(x, -y), at(-x, y), at(-x, -y))
	}
	return out
}

func drawings() []*drawing.Drawing { return []*drawing.Drawing{arm(), bottom(), clamp(), top()} }

// arm lies along x from its root to the motor's shaft at x = armLength; its
// origin is the centre of the frame.
func arm() *drawing.Drawing {
	d := &drawing.Drawing{Name: "arm"}
	h := armWidth / 2
	// The round end meets the straight sides in fillets of 9 mm.
	const fillet = 9.0
	// Centre of a fillet: at height h+fillet, at distance padRadius+fillet from the shaft.
	dx := math.Sqrt((padRadius+fillet)*(padRadius+fillet) - (h+fillet)*(h+fillet))
	fx := armLength - dx
	// Direction from the centre of the lower fillet to the shaft, where it touches the round end.
	touch := math.Atan2(h+fillet, dx) * 180 / math.Pi

	// The root is a wedge that clears the neighbouring arms.
	d.Line("cut", at(armRoot+h, -h), at(fx, -h))
	d.Arc("cut", at(fx, -h-fillet), fillet, touch, 90)
	d.Arc("cut", at(armLength, 0), padRadius, 180+touch, 180-touch)
	d.Arc("cut", at(fx, h+fillet), fillet, 270, 360-touch)
	d.Line("cut", at(fx, h), at(armRoot+h, h))
	d.Line("cut", at(armRoot+h, h), at(armRoot, 2))
	d.Line("cut", at(armRoot, 2), at(armRoot, -2))
	d.Line("cut", at(armRoot, -2), at(armRoot+h, -h))

	d.Circle("cut", at(boltInner, 0), boltHole)
	d.Circle("cut", at(boltOuter, 0), boltHole)
	// Motor: four screws on a circle of 16 mm, and the shaft's clearance.
	for k := range 4 {
		sin, cos := math.Sincos(math.Pi/4 + float64(k)*math.Pi/2)
		d.Circle("cut", at(armLength+8*cos, 8*sin), 3.2)
	}
	d.Circle("cut", at(armLength, 0), 6)
	d.Line("engrave", at(50, -2), at(60, -2))
	d.Line("engrave", at(50, 2), at(60, 2))
	return d
}

// bottom carries the arms, the gyro stack, the camera and four standoffs.
func bottom() *drawing.Drawing {
	d := &drawing.Drawing{Name: "bottom"}
	half := []drawing.Corner{
		round(-72, 21, 8), round(-42, 21, 10), round(-34, 34, 8), round(34, 34, 8), round(42, 22, 10), round(92, 22, 9),
	}
	d.Polygon("cut", bothSides(half))
	for _, p := range sandwichBolts() {
		d.Circle("cut", p, boltHole)
	}
	for _, p := range append(append([]drawing.Point{}, nosePosts...), tailPosts...) {
		d.Circle("cut", p, postHole)
	}
	for _, p := range stackHoles {
		d.Circle("cut", p, 4.2)
	}
	// Cable openings between the arms, and one under the stack.
	d.Slot("cut", at(0, 24), 16, 6, false)
	d.Slot("cut", at(0, -24), 16, 6, false)
	d.Slot("cut", at(52, 0), 14, 8, false)
	d.Slot("cut", at(-50, 0), 20, 8, false)
	return d
}

// clamp closes the sandwich over the arms and carries the waist standoffs.
func clamp() *drawing.Drawing {
	d := &drawing.Drawing{Name: "clamp"}
	d.Polygon("cut", bothSides([]drawing.Corner{round(-31, 33, 8), round(31, 33, 8)}))
	for _, p := range sandwichBolts() {
		d.Circle("cut", p, boltHole)
	}
	for _, p := range waistPosts {
		d.Circle("cut", p, postHole)
	}
	d.Circle("cut", at(0, 0), 12)
	return d
}

// top carries the battery.
func top() *drawing.Drawing {
	d := &drawing.Drawing{Name: "top"}
	half := []drawing.Corner{
		round(-72, 20, 8), round(-28, 20, 12), round(-14, 30, 8), round(14, 30, 8), round(28, 20, 12), round(60, 20, 10), round(68, 22, 6), round(81, 22, 6),
	}
	d.Polygon("cut", bothSides(half))
	for _, set := range [][]drawing.Point{nosePosts, tailPosts, waistPosts} {
		for _, p := range set {
			d.Circle("cut", p, postHole)
		}
	}
	// Strap slots beside the battery, and one lightening hole at each end.
	for _, x := range []float64{-30, 12} {
		d.Slot("cut", at(x, 15.5), 16, 3, false)
		d.Slot("cut", at(x, -15.5), 16, 3, false)
	}
	d.Circle("cut", at(-56, 0), 16)
	d.Slot("cut", at(58, 0), 22, 14, false)
	return d
}

// bothSides closes a half outline, given from the tail to the nose on the left
// side, with its mirror image; the result runs counterclockwise.
func bothSides(half []drawing.Corner) []drawing.Corner {
	var out []drawing.Corner
	for _, c := range half {
		out = append(out, round(c.X, -c.Y, c.Radius))
	}
	for i := len(half) - 1; i >= 0; i-- {
		out = append(out, half[i])
	}
	return out
}
