package outline

// Region is the inside of Outer less the insides of Holes. Holes lie inside Outer and apart from each other.
type Region struct {
	Outer Loop   // counterclockwise
	Holes []Loop // clockwise
}

// NewRegion returns the region with every loop turned to its proper direction.
func NewRegion(outer Loop, holes ...Loop) Region {
	r := Region{Outer: outer}
	if outer.Area() < 0 {
		r.Outer = outer.Reverse()
	}
	for _, h := range holes {
		if h.Area() > 0 {
			h = h.Reverse()
		}
		r.Holes = append(r.Holes, h)
	}
	return r
}

// Loops returns the outer loop and then the holes.
func (r Region) Loops() []Loop {
	return append([]Loop{r.Outer}, r.Holes...)
}

// Area returns the area of the region (m²).
func (r Region) Area() float64 {
	sum := 0.0
	for _, l := range r.Loops() {
		sum += l.Area()
	}
	return sum
}

// Bounds returns the smallest axis-parallel box that holds the region.
func (r Region) Bounds() Box { return r.Outer.Bounds() }

// Contains reports whether p lies in the region.
func (r Region) Contains(p Point) bool {
	if !r.Outer.Contains(p) {
		return false
	}
	for _, h := range r.Holes {
		if h.Contains(p) {
			return false
		}
	}
	return true
}

// Transform returns the image of the region with its loops still in their proper directions. Arcs need a similarity.
func (r Region) Transform(a Affine) Region {
	t := Region{Outer: r.Outer.Transform(a)}
	for _, h := range r.Holes {
		t.Holes = append(t.Holes, h.Transform(a))
	}
	if a.Determinant() < 0 {
		t.Outer = t.Outer.Reverse()
		for i := range t.Holes {
			t.Holes[i] = t.Holes[i].Reverse()
		}
	}
	return t
}
