package main

import "math"

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
	nosePosts  = mirrored(point{74, 17})
	tailPosts  = mirrored(point{-64, 15})
	waistPosts = mirrored(point{0, 25})
	stackHoles = []point{{42, 10}, {42, -10}, {62, 10}, {62, -10}}
)

func mirrored(p point) []point { return []point{p, {p.x, -p.y}} }

// sandwichBolts lists the places of the eight bolts that hold the arms.
func sandwichBolts() []point {
	var out []point
	for _, r := range []float64{boltInner, boltOuter} {
		x, y := r*math.Cos(armAngle), r*math.Sin(armAngle)
		out = append(out, point{x, y}, point{x, -y}, point{-x, y}, point{-x, -y})
	}
	return out
}

func drawings() []*drawing { return []*drawing{arm(), bottom(), clamp(), top()} }

// arm lies along x from its root to the motor's shaft at x = armLength; its
// origin is the centre of the frame.
func arm() *drawing {
	d := &drawing{name: "arm"}
	h := armWidth / 2
	// The round end meets the straight sides in fillets of 9 mm.
	const fillet = 9.0
	// Centre of a fillet: at height h+fillet, at distance padRadius+fillet from the shaft.
	dx := math.Sqrt((padRadius+fillet)*(padRadius+fillet) - (h+fillet)*(h+fillet))
	fx := armLength - dx
	// Direction from the centre of the lower fillet to the shaft, where it touches the round end.
	touch := math.Atan2(h+fillet, dx) * 180 / math.Pi

	// The root is a wedge that clears the neighbouring arms.
	d.line("cut", point{armRoot + h, -h}, point{fx, -h})
	d.arc("cut", point{fx, -h - fillet}, fillet, touch, 90)
	d.arc("cut", point{armLength, 0}, padRadius, 180+touch, 180-touch)
	d.arc("cut", point{fx, h + fillet}, fillet, 270, 360-touch)
	d.line("cut", point{fx, h}, point{armRoot + h, h})
	d.line("cut", point{armRoot + h, h}, point{armRoot, 2})
	d.line("cut", point{armRoot, 2}, point{armRoot, -2})
	d.line("cut", point{armRoot, -2}, point{armRoot + h, -h})

	d.circle("cut", point{boltInner, 0}, boltHole)
	d.circle("cut", point{boltOuter, 0}, boltHole)
	// Motor: four screws on a circle of 16 mm, and the shaft's clearance.
	for k := range 4 {
		sin, cos := math.Sincos(math.Pi/4 + float64(k)*math.Pi/2)
		d.circle("cut", point{armLength + 8*cos, 8 * sin}, 3.2)
	}
	d.circle("cut", point{armLength, 0}, 6)
	d.line("engrave", point{50, -2}, point{60, -2})
	d.line("engrave", point{50, 2}, point{60, 2})
	return d
}

// bottom carries the arms, the gyro stack, the camera and four standoffs.
func bottom() *drawing {
	d := &drawing{name: "bottom"}
	half := []corner{
		{point{-72, 21}, 8}, {point{-42, 21}, 10}, {point{-34, 34}, 8}, {point{34, 34}, 8}, {point{42, 22}, 10}, {point{92, 22}, 9},
	}
	d.polygon("cut", bothSides(half))
	for _, p := range sandwichBolts() {
		d.circle("cut", p, boltHole)
	}
	for _, p := range append(append([]point{}, nosePosts...), tailPosts...) {
		d.circle("cut", p, postHole)
	}
	for _, p := range stackHoles {
		d.circle("cut", p, 4.2)
	}
	// Cable openings between the arms, and one under the stack.
	d.slot("cut", point{0, 24}, 16, 6, false)
	d.slot("cut", point{0, -24}, 16, 6, false)
	d.slot("cut", point{52, 0}, 14, 8, false)
	d.slot("cut", point{-50, 0}, 20, 8, false)
	return d
}

// clamp closes the sandwich over the arms and carries the waist standoffs.
func clamp() *drawing {
	d := &drawing{name: "clamp"}
	d.polygon("cut", bothSides([]corner{{point{-31, 33}, 8}, {point{31, 33}, 8}}))
	for _, p := range sandwichBolts() {
		d.circle("cut", p, boltHole)
	}
	for _, p := range waistPosts {
		d.circle("cut", p, postHole)
	}
	d.circle("cut", point{0, 0}, 12)
	return d
}

// top carries the battery.
func top() *drawing {
	d := &drawing{name: "top"}
	half := []corner{
		{point{-72, 20}, 8}, {point{-28, 20}, 12}, {point{-14, 30}, 8}, {point{14, 30}, 8}, {point{28, 20}, 12}, {point{60, 20}, 10}, {point{68, 22}, 6}, {point{81, 22}, 6},
	}
	d.polygon("cut", bothSides(half))
	for _, set := range [][]point{nosePosts, tailPosts, waistPosts} {
		for _, p := range set {
			d.circle("cut", p, postHole)
		}
	}
	// Strap slots beside the battery, and one lightening hole at each end.
	for _, x := range []float64{-30, 12} {
		d.slot("cut", point{x, 15.5}, 16, 3, false)
		d.slot("cut", point{x, -15.5}, 16, 3, false)
	}
	d.circle("cut", point{-56, 0}, 16)
	d.slot("cut", point{58, 0}, 22, 14, false)
	return d
}

// bothSides closes a half outline, given from the tail to the nose on the left
// side, with its mirror image; the result runs counterclockwise.
func bothSides(half []corner) []corner {
	var out []corner
	for _, c := range half {
		out = append(out, corner{point{c.x, -c.y}, c.radius})
	}
	for i := len(half) - 1; i >= 0; i-- {
		out = append(out, half[i])
	}
	return out
}
