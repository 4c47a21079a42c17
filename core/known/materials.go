package known

import (
	"encoding/json"
	"math"

	"hushframe/core/mechanics/laminate"
)

// Constants is a material as the rows write it.
type Constants struct {
	E1, E2, Nu12, G12, G13, G23, Rho float64
}

// Material returns the kernel's form.
func (c Constants) Material() laminate.Material {
	return laminate.Material{E1: c.E1, E2: c.E2, Nu12: c.Nu12, G12: c.G12, G13: c.G13, G23: c.G23, Density: c.Rho}
}

// Plies returns the stack that a row's setup lists under plies_bottom_to_top, its material given per
// ply, by name or once for all.
func (r Row) Plies(t T) []laminate.Ply {
	t.Helper()
	var setup struct {
		Plies []struct {
			Thickness  float64 `json:"thickness_m"`
			Angle      float64 `json:"angle_deg"`
			Material   string
			Properties *Constants
		} `json:"plies_bottom_to_top"`
		Properties json.RawMessage
		Materials  map[string]Constants
	}
	r.Decode(t, &setup)
	var common Constants
	if setup.Properties != nil {
		if err := json.Unmarshal(setup.Properties, &common); err != nil {
			t.Fatalf("row %s: properties: %v", r.ID, err)
		}
	}
	var plies []laminate.Ply
	for _, p := range setup.Plies {
		c := common
		if named, ok := setup.Materials[p.Material]; ok {
			c = named
		}
		if p.Properties != nil {
			c = *p.Properties
		}
		plies = append(plies, laminate.Ply{Material: c.Material(), Thickness: p.Thickness, Angle: p.Angle * math.Pi / 180})
	}
	return plies
}
