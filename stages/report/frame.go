package report

import (
	"fmt"
)

// frameSection shows what the airframe is.
func frameSection(c *content) *section {
	s := &section{ID: "frame", Title: "Frame"}
	if c.geometry != nil {
		assembly(s, c)
	}
	if m := c.modes; m != nil {
		s.text(fmt.Sprintf("All-up mass %.1f g. Centre of gravity at x %s, y %s, z %s mm (forward, left, up).",
			1000*m.Mass, millimetres(m.Centre[0]), millimetres(m.Centre[1]), millimetres(m.Centre[2])))
	}
	if c.properties != nil {
		s.table(massTable(c.geometry, c.properties))
	}
	return s
}

// modelSection states the constants that the prediction rests on.
func modelSection(c *content) *section {
	if c.properties == nil {
		return nil
	}
	s := &section{ID: "model", Title: "What the model assumes"}
	s.table(materialTable(c.properties))
	s.table(jointTable(c.properties))
	s.table(rotorTable(c.properties))
	return s
}

func millimetres(x float64) string { return number(1000*x, 1).Text }
