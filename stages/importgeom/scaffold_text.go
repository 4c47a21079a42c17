package importgeom

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/mechanics/outline"
)

func airframeText(title string, plates []guessed) string {
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	line("# x forward, y left, z up. `at` of a plate is a point of its LOWER face, where the origin of the cut file goes.")
	line("")
	line("airframe %q {", title)
	line("  about = \"started from the cut files of this folder\"")
	line("}")
	for _, p := range plates {
		line("")
		line("plate %q {", p.name)
		line("  outline   = %q", p.file)
		if p.layer != "" {
			line("  layer     = %q", p.layer)
		}
		if p.unit != "" {
			box := p.region.Bounds()
			line("  units     = %q # the file does not say; this makes it %.4g mm by %.4g mm", p.unit, 1e3*box.Width(), 1e3*box.Height())
		}
		if p.pick != nil {
			line("  pick      = %s # the largest of %d outlines", point(*p.pick), p.several)
		}
		if p.fromName {
			line("  thickness = %q # from the file name", p.thickness)
		} else {
			line("  thickness = %q # a guess", p.thickness)
		}
		line("  material  = \"carbon-0-90\" # typical values; direction 1 along x")
		if len(plates) > 1 {
			line("  at        = [\"0 mm\", \"0 mm\", \"%g mm\"] # where it goes is for you to say", p.lower)
		}
		line("}")
	}
	line("")
	on, places := motorPlaces(plates)
	line("# Four rotors to fill in. Where the motors stand was guessed from the holes or the corners.")
	for i, r := range []struct{ name, spin string }{{"fl", "clockwise"}, {"fr", "counterclockwise"}, {"rl", "counterclockwise"}, {"rr", "clockwise"}} {
		line("")
		line("# rotor %q {", r.name)
		line("#   on                 = plate.%s", on[i])
		line("#   at                 = %s", point(places[i]))
		line("#   base               = \"16 mm\" # diameter of the footprint")
		line("#   mass               = \"33 g\" # motor with its screws")
		line("#   height             = \"12 mm\" # its centre of gravity above the plate")
		line("#   propeller_mass     = \"4 g\"")
		line("#   propeller_diameter = \"127 mm\"")
		line("#   blades             = 3")
		line("#   spin               = %q", r.spin)
		line("#   hover_speed        = \"16000 rpm\"")
		line("#   max_speed          = \"33000 rpm\"")
		line("# }")
	}
	main := largestPlate(plates)
	line("")
	line("# What bolts hold with, if they should not be rigid: from the plates and the screw.")
	line("# joint \"screws\" {")
	line("#   screw = \"3 mm\"")
	line("# }")
	line("# bolts {")
	line("#   joint = joint.screws")
	line("# }")
	line("")
	line("# The body whose rotation is measured; if it stands on grommets, in place of pad:")
	line("#   grommets {")
	line("#     like   = \"grommet-silicone-firm\" # hushframe stages import lists typical ones")
	line("#     places = [[\"10 mm\", \"10 mm\"], [\"10 mm\", \"-10 mm\"], [\"-10 mm\", \"10 mm\"], [\"-10 mm\", \"-10 mm\"]]")
	line("#   }")
	line("gyro \"stack\" {")
	line("  on   = plate.%s", main.name)
	line("  at   = %s", point(main.inside))
	line("  mass = \"15 g\"")
	line("  size = [\"30 mm\", \"30 mm\", \"10 mm\"]")
	line("  pad  = [\"6 mm\", \"6 mm\"]")
	line("}")
	return b.String()
}

func largestPlate(plates []guessed) guessed {
	best := plates[0]
	for _, p := range plates {
		if p.region.Outer.Area() > best.region.Outer.Area() {
			best = p
		}
	}
	return best
}

// motorPlaces guesses a plate and place for the rotors fl, fr, rl, rr: the motor hole patterns of the plate that has the
// most of them, nearest to the four corners, else points inside the largest plate towards its corners.
func motorPlaces(plates []guessed) (on [4]string, at [4]outline.Point) {
	p := plates[0]
	for _, q := range plates {
		if len(q.motors) > len(p.motors) {
			p = q
		}
	}
	if len(p.motors) < 4 {
		p = largestPlate(plates)
	}
	box := p.region.Bounds()
	middle := box.Min.Lerp(box.Max, 0.5)
	for i, sign := range [4]outline.Point{{X: 1, Y: 1}, {X: 1, Y: -1}, {X: -1, Y: 1}, {X: -1, Y: -1}} {
		on[i] = p.name
		corner := outline.Point{X: middle.X + sign.X*box.Width()/2, Y: middle.Y + sign.Y*box.Height()/2}
		if len(p.motors) >= 4 {
			best := math.Inf(1)
			for _, m := range p.motors {
				if d := m.Distance(corner); d < best {
					best, at[i] = d, m
				}
			}
			continue
		}
		// As far towards the corner as there is material under a motor.
		at[i] = p.inside
		for k := range 60 {
			if q := corner.Lerp(p.inside, float64(k)/60); seats(p.region, q) {
				at[i] = q
				break
			}
		}
	}
	return on, at
}

// seats reports whether a motor's footprint about a place lies on the region.
func seats(region outline.Region, at outline.Point) bool {
	const reach, around = 7e-3, 12
	for i := range around {
		s, c := math.Sincos(2 * math.Pi * float64(i) / around)
		if !region.Contains(at.Add(outline.Point{X: c, Y: s}.Scale(reach))) {
			return false
		}
	}
	return true
}

func jobText(title string) string {
	return fmt.Sprintf(`# Question: where does the frame ring, and which of these motions does the gyro feel?

job %q {
  about = "a first look"
}

stage "import" "frame" {
  airframe = "airframe.hcl"
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  size     = "4 mm"
}

stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

stage "sweep" "hover" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = "80 Hz"
  to         = "500 Hz"
}

stage "report" "page" {
  include = [
    stage.frame.geometry, stage.frame.properties, stage.shells.mesh, stage.modes.modes, stage.hover.response,
  ]
  to = "report/%s.html"
}
`, title, title)
}
