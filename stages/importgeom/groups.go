package importgeom

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/stage"
)

// groups lists the joint groups: what is first to be corrected from flight data.
func groups(p *airframe.Properties) stage.Section {
	s := stage.Section{Title: "Joint groups",
		Text: "kN/mm and N·m/rad of one connection, per mm² or mm of contacts; the range is that of a common factor on the group",
		Columns: []stage.Column{{Name: "group"}, {Name: "number", Right: true}, {Name: "x", Right: true}, {Name: "y", Right: true}, {Name: "z", Right: true},
			{Name: "rx", Right: true}, {Name: "ry", Right: true}, {Name: "rz", Right: true}, {Name: "per"}, {Name: "loss", Right: true}, {Name: "range"}, {Name: "from"}}}
	held := map[string]int{}
	for _, b := range p.Bolts {
		held[b.Joint]++
	}
	for _, c := range p.Contacts {
		held[c.Joint]++
	}
	for _, j := range p.Joints {
		row := []string{j.Name, fmt.Sprint(held[j.Name])}
		per, by := "", 1.0
		switch j.Measure {
		case airframe.PerArea:
			per, by = "mm²", 1e-6
		case airframe.PerLength:
			per, by = "mm", 1e-3
		}
		for c, k := range j.Stiffness {
			switch {
			case math.IsInf(k, 1):
				row = append(row, "rigid")
			case k == 0:
				row = append(row, "free")
			case c < 3:
				row = append(row, fmt.Sprintf("%.3g", by*k/1e6))
			default:
				row = append(row, fmt.Sprintf("%.3g", by*k))
			}
		}
		within := "unknown"
		if j.Low > 0 {
			within = fmt.Sprintf("%.2g to %.2g", j.Low, j.High)
		}
		s.Rows = append(s.Rows, append(row, per, fmt.Sprintf("%.2g", j.LossFactor), within, j.Origin))
	}
	return s
}
