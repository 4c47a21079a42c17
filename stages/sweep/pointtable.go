package sweep

import (
	"fmt"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// pointTable gives how far and how hard the named points shake.
func pointTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title: fmt.Sprintf("Named points, %.4g to %.4g Hz", r.From, r.To),
		Text:  "root sum of squares over x, y and z under the assumed broadband source; the last columns are the peak amplitude at the unbalance line",
		Columns: []stage.Column{{Name: "point"}, {Name: "kind"}, {Name: "displacement rms, µm", Right: true}, {Name: "acceleration rms, m/s²", Right: true}, {Name: "loudest, Hz", Right: true},
			{Name: "unbalance, µm", Right: true}, {Name: "m/s²", Right: true}},
	}
	for _, p := range r.Points {
		move, shake, at := r.Shaken(p.Name)
		row := []string{p.Name, p.Kind, fmt.Sprintf("%.3g", 1e6*move), fmt.Sprintf("%.3g", shake), fmt.Sprintf("%.1f", at), "–", "–"}
		if p.Kind == "node" {
			row[1] = "on " + p.Part
		}
		if move, shake = r.ShakenByLine(p.Name, "unbalance"); shake > 0 {
			row[5], row[6] = fmt.Sprintf("%.3g", 1e6*move), fmt.Sprintf("%.3g", shake)
		}
		s.Rows = append(s.Rows, row)
	}
	return s
}

// staticTable explains the motion without resonance.
func staticTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title: "Motion without resonance",
		Text: fmt.Sprintf("far below its modes, the lowest at %.1f Hz, a frame follows its loads as it would at rest: it moves as a rigid body, and plates, mounts and a heavy nose give under the gyro. "+
			"Give is the rotation of the gyro per newton or newton metre, root sum of squares over all hubs; at the ends of the sweep the columns set the rigid body, the body with its give, and the whole, in (deg/s)²/Hz. "+
			"No separation of modes takes this part away, only stiffness under the gyro does", r.FirstMode),
		Columns: []stage.Column{{Name: "axis"}, {Name: "give, µrad/N", Right: true}, {Name: "mrad/(N·m)", Right: true}},
	}
	n := len(r.Frequency) - 1
	for _, k := range []int{0, n} {
		s.Columns = append(s.Columns, stage.Column{Name: fmt.Sprintf("rigid at %.4g Hz", r.Frequency[k]), Right: true}, stage.Column{Name: "with give", Right: true}, stage.Column{Name: "whole", Right: true})
	}
	for axis, x := range r.Axes {
		row := []string{x.Axis, fmt.Sprintf("%.3g", 1e6*x.GiveForce), fmt.Sprintf("%.3g", 1e3*x.GiveMoment)}
		for _, k := range []int{0, n} {
			for _, y := range [][]float64{r.Rigid[axis], r.Static[axis], r.Density[axis]} {
				row = append(row, fmt.Sprintf("%.2g", y[k]/degree/degree))
			}
		}
		s.Rows = append(s.Rows, row)
	}
	return s
}

// pointFigure lists the points for expressions.
func pointFigure(r *kinds.Response) []any {
	list := []any{}
	for _, p := range r.Points {
		move, shake, _ := r.Shaken(p.Name)
		list = append(list, map[string]any{"name": p.Name, "kind": p.Kind,
			"displacement": stage.Quantity{SI: move, Dimension: "length"}, "acceleration": stage.Quantity{SI: shake, Dimension: "acceleration"}})
	}
	return list
}
