package sandpiper

import (
	"math"
	"testing"
)

// Hand sums of the frame, from the dimensions in draw/plates.go: polygons with
// rounded corners by the shoelace rule less the corners cut off, slots and
// holes by their formulas. Nothing of the product is used. mm and g.

type corner struct{ x, y, r float64 }

// rounded is the area of a polygon whose corners are rounded with radius r:
// each rounding moves the area by r²(tan(θ/2) − θ/2), θ the change of
// direction, off a left turn and onto a right one.
func rounded(half []corner) float64 {
	var c []corner
	for _, p := range half {
		c = append(c, corner{p.x, -p.y, p.r})
	}
	for i := len(half) - 1; i >= 0; i-- {
		c = append(c, half[i])
	}
	var area float64
	n := len(c)
	for i, p := range c {
		q, b := c[(i+1)%n], c[(i+n-1)%n]
		area += (p.x*q.y - q.x*p.y) / 2
		ux, uy, vx, vy := p.x-b.x, p.y-b.y, q.x-p.x, q.y-p.y
		cross := ux*vy - uy*vx
		theta := math.Atan2(math.Abs(cross), ux*vx+uy*vy)
		cut := p.r * p.r * (math.Tan(theta/2) - theta/2)
		area -= math.Copysign(cut, cross)
	}
	return area
}

func disc(d float64) float64 { return math.Pi * d * d / 4 }

func slot(length, width float64) float64 { return (length-width)*width + disc(width) }

// armArea: strip, wedge at the root, round end, and the two fillets where the
// strip meets the round end.
func armArea() float64 {
	const h, r, f, root = 7.5, 14.0, 9.0, 12.0
	length := math.Hypot(80, 86)
	dx := math.Sqrt((r+f)*(r+f) - (h+f)*(h+f))
	fx := length - dx // fillets start here
	touch := math.Atan2(h+f, dx)
	wedge := h * (2*h + 4) / 2 // trapezium from 4 mm to 15 mm wide, 7.5 mm long
	strip := (fx - root - h) * 2 * h
	// From fx on, the upper half: the right triangle (fx, 0), shaft, centre of
	// the fillet, less the fillet's sector, plus the round end's sector beyond
	// the point where the two touch.
	upper := dx*(h+f)/2 - f*f/2*(math.Pi/2-touch) + r*r/2*(math.Pi-touch)
	holes := 2*disc(3.2) + 4*disc(3.2) + disc(6)
	return wedge + strip + 2*upper - holes
}

// TestMassByHand holds the total mass to within 0.1 g of hand sums.
func TestMassByHand(t *testing.T) {
	bottom := rounded([]corner{{-72, 21, 8}, {-42, 21, 10}, {-34, 34, 8}, {34, 34, 8}, {42, 22, 10}, {92, 22, 9}}) -
		8*disc(3.2) - 4*disc(3.2) - 4*disc(4.2) - 2*slot(16, 6) - slot(14, 8) - slot(20, 8)
	clamp := rounded([]corner{{-31, 33, 8}, {31, 33, 8}}) - 8*disc(3.2) - 2*disc(3.2) - disc(12)
	top := rounded([]corner{{-72, 20, 8}, {-28, 20, 12}, {-14, 30, 8}, {14, 30, 8}, {28, 20, 12}, {60, 20, 10}, {68, 22, 6}, {81, 22, 6}}) -
		6*disc(3.2) - 4*slot(16, 3) - disc(16) - slot(22, 14)
	carbon := 1550e-6 // g/mm³
	plates := carbon * (2*(bottom+clamp+top) + 5*4*armArea())
	posts := 2700e-6 * (disc(5) - disc(2.6)) * (4*28 + 2*21)
	screws := 12 * 0.7
	bolts := 8 * 1.4
	rotors := 4 * (33 + 4.2)
	lumps := 190.0 + 24 + 14 + 26
	want := plates + posts + screws + bolts + rotors + lumps

	d := perform(t, "baseline.hcl", map[string]string{"mesh_size": coarse})
	got := 1000 * quantity(t, d, "frame", "total_mass")
	if math.Abs(got-want) > 0.1 {
		t.Errorf("total mass %.3f g, by hand %.3f g (plates %.3f)", got, want, plates)
	}
	if m := 1000 * quantity(t, d, "modes", "mass"); math.Abs(m-want) > 0.1 {
		t.Errorf("mass of the solved model %.3f g, by hand %.3f g", m, want)
	}
}
