package report

import (
	"fmt"
	"math"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// identifiedSection shows the modes found in flight, and what speaks for them.
func identifiedSection(c *content) *section {
	x := c.identified
	if x == nil {
		return nil
	}
	s := &section{ID: "identified", Title: "Modes found in the flight"}
	s.text(fmt.Sprintf("Found without knowing the force, from %.4g to %.4g Hz, by models of rising order. A mode is believed where nearly the same pole comes back as the order grows.", x.From, x.To))
	s.table(identifiedTable(x))
	s.heading("Stabilisation")
	s.chart(c, stabilisationChart(x), "Discs: the model of the order before has nearly the same pole. Crosses: it has not. Dotted lines are the modes that were kept.")
	s.heading("Singular values of the cross spectra")
	s.chart(c, singularChart(x), "The largest shows what all channels do together; a mode lifts it where it is alone.")
	for _, d := range x.Densities {
		s.heading(upper(d.Axis) + " with and without rotor orders")
		s.chart(c, removedChart(x, d), "")
	}
	if ch := trackChart(x); ch != nil {
		s.heading("Rotor speeds")
		s.chart(c, ch, "")
	}
	s.table(crossingTable(x))
	return s
}

func identifiedTable(x *kinds.Identified) *table {
	t := &table{Name: "identified-modes", Title: "Modes", About: "± is one standard error. Models is the share of the models that have the mode.",
		Columns: []column{{"frequency", "Hz", true}, {"±", "Hz", true}, {"damping ratio", "%", true}, {"±", "%", true}, {"kind", "", false}, {"turns mostly in", "", false}, {"models", "%", true}, {"reason", "", false}}}
	for _, m := range x.Modes {
		axis := ""
		best := 0.0
		for i, d := range m.Direction {
			if math.Abs(d) > best {
				best, axis = math.Abs(d), x.Channels[i].Axis
			}
		}
		t.Rows = append(t.Rows, []cell{number(m.Frequency, 1), number(m.FrequencyError, 2), percent(m.Damping, 2), percent(m.DampingError, 2), words(m.Kind), words(axis), percent(m.Models, 0), words(m.Reason)})
	}
	return t
}

func stabilisationChart(x *kinds.Identified) *draw.Chart {
	ch := &draw.Chart{ID: "stabilisation", Title: "Stabilisation diagram", X: draw.Axis{Label: "frequency, Hz", From: x.From, To: x.To}, Y: draw.Axis{Label: "order of the model, ", From: 0, To: float64(x.Order) * 1.04},
		About: fmt.Sprintf("Poles of models up to order %d over frequency; %s were kept as modes.", x.Order, joinCount(len(x.Modes), "cluster", "clusters"))}
	ch.Y.Label = "order of the model"
	for _, p := range x.Diagram {
		class := "loose"
		if p.Stable {
			class = "firm"
		}
		ch.Points = append(ch.Points, draw.Point{X: p.Frequency, Y: float64(p.Order), Class: class})
	}
	for _, m := range x.Modes {
		ch.Marks = append(ch.Marks, draw.Mark{X: m.Frequency, Label: fmt.Sprintf("%.0f", m.Frequency)})
	}
	return ch
}

func singularChart(x *kinds.Identified) *draw.Chart {
	ch := &draw.Chart{ID: "singular-values", Title: "Singular values", X: draw.Axis{Label: "frequency, Hz", From: x.From, To: x.To}, Y: draw.Axis{Label: "density, (deg/s)²/Hz", Log: true, Either: true},
		About: "Singular values of the cross-spectral matrix over frequency, the largest first."}
	factor := 1 / square
	for _, c := range x.Channels {
		if c.Quantity != "angular rate" {
			factor = 1
			ch.Y.Label = "density, SI²/Hz"
		}
	}
	classes := []string{"predicted", "second", "third", "faint"}
	for k, list := range x.Singular {
		if k == len(classes) {
			break
		}
		c := draw.Curve{Name: []string{"largest", "second", "third", "fourth"}[k], Class: classes[k]}
		for bin, v := range list {
			c.X, c.Y = append(c.X, float64(bin)*x.Step), append(c.Y, v*factor)
		}
		ch.Curves = append(ch.Curves, draw.Thin(c, mostPoints))
	}
	for _, m := range x.Modes {
		ch.Marks = append(ch.Marks, draw.Mark{X: m.Frequency, Label: fmt.Sprintf("%.0f", m.Frequency)})
	}
	return ch
}

func removedChart(x *kinds.Identified, d kinds.IdentifiedDensity) *draw.Chart {
	ch := &draw.Chart{ID: slug("orders-removed-" + d.Axis), Title: upper(d.Axis) + " with and without rotor orders", X: draw.Axis{Label: "frequency, Hz", From: x.From, To: x.To}, Y: draw.Axis{Label: "gyro rate, (deg/s)²/Hz", Log: true, Either: true},
		About: "Density of the recorded " + d.Axis + " before and after the rotor orders were taken out."}
	before, after := draw.Curve{Name: "as recorded", Class: "observed"}, draw.Curve{Name: "orders taken out", Class: "predicted"}
	for k := range d.Before {
		f := float64(k) * x.Step
		before.X, before.Y = append(before.X, f), append(before.Y, d.Before[k]/square)
		after.X, after.Y = append(after.X, f), append(after.Y, d.After[k]/square)
	}
	ch.Curves = []draw.Curve{draw.Thin(before, mostPoints), draw.Thin(after, mostPoints)}
	return ch
}

func trackChart(x *kinds.Identified) *draw.Chart {
	ch := &draw.Chart{ID: "rotor-speeds", Title: "Rotor speeds over time", X: draw.Axis{Label: "time, s"}, Y: draw.Axis{Label: "rotor speed, rpm"}, About: "Speed of each rotor over time."}
	classes := []string{"predicted", "observed", "second", "third", "fourth", "faint"}
	for k, t := range x.Tracks {
		c := draw.Curve{Name: t.Rotor + ", " + t.Source, Class: classes[k%len(classes)], X: t.Time}
		for _, v := range t.Speed {
			if v == 0 {
				v = math.NaN()
			}
			c.Y = append(c.Y, v/rpm)
		}
		ch.Curves = append(ch.Curves, draw.Thin(c, mostPoints))
	}
	return ch
}

func crossingTable(x *kinds.Identified) *table {
	t := &table{Name: "orders-crossing-modes", Title: "Orders that met a mode in flight", About: "Share of the time that the order spent within the half-power width of the mode.",
		Columns: []column{{"mode", "Hz", true}, {"rotor", "", false}, {"order", "", true}, {"at", "rpm", true}, {"share of the time", "%", true}, {"remark", "", false}}}
	for _, c := range x.Crossings {
		remark := ""
		if c.Folded {
			remark = "mirrored: in the recording only"
		}
		t.Rows = append(t.Rows, []cell{number(x.Modes[c.Mode].Frequency, 1), words(c.Rotor), digits(c.Order, 3), number(c.Speed/rpm, 0), percent(c.Share, 1), words(remark)})
	}
	return t
}
