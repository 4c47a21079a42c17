package report

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/stages/picture"
)

// assembly draws the frame from above and from the side.
func assembly(s *section, c *content) {
	p := c.properties
	if p == nil {
		p = &airframe.Properties{}
	}
	var centre *airframe.Vec
	if c.modes != nil {
		centre = &c.modes.Centre
	}
	const about = "To scale. Bodies are drawn as the boxes and cylinders that have their inertia; point at a part to see its name."
	s.Blocks = append(s.Blocks, block{Views: []figure{
		{Picture: trusted(picture.Top(c.geometry, p, centre)), Caption: "From above, forward is up. " + about},
		{Picture: trusted(picture.Side(c.geometry, p, centre)), Caption: "From the right side, forward is to the right."},
	}})
}
