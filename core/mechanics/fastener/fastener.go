package fastener

import (
	"fmt"
	"math"
)

// Plate is one plate of a stack.
type Plate struct {
	Thickness float64 // m
	E3        float64 // Pa, through the thickness
	Shear     float64 // Pa, transverse
	InPlane   float64 // Pa, along the plate, for bearing
	Composite bool
}

// Screw is what clamps a stack.
type Screw struct {
	Diameter float64 // m, nominal
	Modulus  float64 // Pa
	Hole     float64 // m, diameter
	Head     float64 // m, diameter of head, washer and nut
}

// Grip says what carries a force across the screw.
type Grip string

const (
	// Friction: the faces are pressed together and stick.
	Friction Grip = "friction"
	// Bearing: the screw's shank lies against its hole.
	Bearing Grip = "bearing"
)

const (
	spread   = math.Pi / 6
	core     = 0.75 // area of a screw's core by that of its nominal diameter
	embedded = 0.4  // diameters that a screw stretches within each head
	huthIn   = 2.0 / 3
)

// Pairs gives the stiffness between each pair of neighbours of a stack, from bottom to top.
//
// It fails when a dimension or modulus is not positive, the head does not cover the hole, the screw does not fit it, or
// there are fewer than two plates.
func Pairs(stack []Plate, s Screw, grip Grip) ([][6]float64, error) {
	if err := check(stack, s, grip); err != nil {
		return nil, err
	}
	total := 0.0
	for _, p := range stack {
		total += p.Thickness
	}
	area := core * math.Pi / 4 * s.Diameter * s.Diameter
	// Springs in a row that add up to the screw: each pair has the share that its screw stretches.
	length := total + 2*embedded*s.Diameter
	shank := s.Modulus * area / length * float64(len(stack)-1)
	var out [][6]float64
	low := 0.0 // lower face of the lower plate of the pair
	for i := range len(stack) - 1 {
		lower, upper := stack[i], stack[i+1]
		face := low + lower.Thickness
		axial, shear := series{}, series{}
		for _, half := range []struct {
			from, to float64
			p        Plate
		}{{low + lower.Thickness/2, face, lower}, {face, face + upper.Thickness/2, upper}} {
			for _, f := range s.frusta(half.from, half.to, total) {
				axial.add(f.axial(half.p.E3, s.Hole))
				shear.add(f.shear(half.p.Shear, s.Hole))
			}
		}
		outer, inner := s.cone(face, total)/2, s.Hole/2
		members, across := axial.stiffness(), shear.stiffness()
		about := across
		if grip == Bearing {
			across = huth(lower, upper, s)
		}
		rock := members * (outer*outer + inner*inner) / 4
		out = append(out, [6]float64{across, across, members + shank, rock, rock, about * (outer*outer + inner*inner) / 2})
		low = face
	}
	return out, nil
}

func check(stack []Plate, s Screw, grip Grip) error {
	if len(stack) < 2 {
		return fmt.Errorf("a screw joins two plates or more, not %d", len(stack))
	}
	for _, p := range stack {
		for _, x := range []float64{p.Thickness, p.E3, p.Shear, p.InPlane} {
			if !(x > 0) || math.IsInf(x, 1) {
				return fmt.Errorf("a plate %g mm thick with moduli of %.3g through it, %.3g across and %.3g GPa along has no stiffness", 1e3*p.Thickness, p.E3/1e9, p.Shear/1e9, p.InPlane/1e9)
			}
		}
	}
	switch {
	case !(s.Diameter > 0) || !(s.Modulus > 0):
		return fmt.Errorf("a screw of %g mm and %.3g GPa has no stiffness", 1e3*s.Diameter, s.Modulus/1e9)
	case s.Diameter > s.Hole*(1+1e-9):
		return fmt.Errorf("a screw of %g mm does not pass a hole of %g mm", 1e3*s.Diameter, 1e3*s.Hole)
	case !(s.Head > s.Hole):
		return fmt.Errorf("a head of %g mm does not cover a hole of %g mm", 1e3*s.Head, 1e3*s.Hole)
	case grip != Friction && grip != Bearing:
		return fmt.Errorf("there is no grip %q", grip)
	}
	return nil
}

// cone is the diameter of the clamped material at a height in the stack.
func (s Screw) cone(at, total float64) float64 {
	return s.Head + 2*math.Tan(spread)*min(at, total-at)
}

// frustum is a piece of the cone.
type frustum struct{ height, narrow, wide float64 }

// frusta cuts the material from one height to another where the cone turns.
func (s Screw) frusta(from, to, total float64) []frustum {
	stops := []float64{from, to}
	if middle := total / 2; from < middle && middle < to {
		stops = []float64{from, middle, to}
	}
	var out []frustum
	for i := range len(stops) - 1 {
		a, b := s.cone(stops[i], total), s.cone(stops[i+1], total)
		out = append(out, frustum{stops[i+1] - stops[i], min(a, b), max(a, b)})
	}
	return out
}

func (f frustum) axial(e, hole float64) float64 {
	return math.Pi * e * hole * math.Tan(spread) /
		math.Log((f.wide-hole)*(f.narrow+hole)/((f.wide+hole)*(f.narrow-hole)))
}

func (f frustum) shear(g, hole float64) float64 {
	d := (f.narrow + f.wide) / 2
	return g * math.Pi / 4 * (d*d - hole*hole) / f.height
}

// series adds compliances.
type series struct{ compliance float64 }

func (s *series) add(k float64)      { s.compliance += 1 / k }
func (s *series) stiffness() float64 { return 1 / s.compliance }

func huth(a, b Plate, s Screw) float64 {
	factor := 3.0
	if a.Composite || b.Composite {
		factor = 4.2
	}
	sum := 1/(a.Thickness*a.InPlane) + 1/(b.Thickness*b.InPlane) + 1/(2*a.Thickness*s.Modulus) + 1/(2*b.Thickness*s.Modulus)
	return 1 / (math.Pow((a.Thickness+b.Thickness)/(2*s.Diameter), huthIn) * factor * sum)
}

// Faces gives the normal and shear stiffness per area (N/m³) between the middles of two plates whose faces are bonded:
// that of their halves in a row.
func Faces(a, b Plate) (normal, shear float64) {
	n, s := series{}, series{}
	for _, p := range []Plate{a, b} {
		n.add(2 * p.E3 / p.Thickness)
		s.add(2 * p.Shear / p.Thickness)
	}
	return n.stiffness(), s.stiffness()
}

// Glue is a bed of adhesive.
type Glue struct {
	Modulus   float64 // Pa
	Poisson   float64
	Thickness float64 // m
	Width     float64 // m, across the seam
}

// Seam gives the stiffness per length (N/m², N·m/rad per m) of a strip of glue: along, across, normal, then turning
// about the line; it turns freely about the others.
func (g Glue) Seam() ([6]float64, error) {
	if !(g.Modulus > 0 && g.Thickness > 0 && g.Width > 0) || !(g.Poisson > -1 && g.Poisson < 0.5) {
		return [6]float64{}, fmt.Errorf("glue of %.3g MPa, Poisson's ratio %g, %g mm thick and %g mm wide is none", g.Modulus/1e6, g.Poisson, 1e3*g.Thickness, 1e3*g.Width)
	}
	normal := g.Modulus * g.Width / g.Thickness
	shear := normal / (2 * (1 + g.Poisson))
	return [6]float64{shear, shear, normal, normal * g.Width * g.Width / 12}, nil
}
