package report

import (
	"fmt"
	"math"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// filteredSection shows what a chain of filters leaves of the vibration, and what it costs.
func filteredSection(c *content) *section {
	x := c.filtered
	if x == nil {
		return nil
	}
	s := &section{ID: "filters", Title: "Filters"}
	chain := "The chain was given."
	if x.Chosen {
		chain = fmt.Sprintf("The chain was chosen to leave at most %.3g deg/s on every axis", x.Target/degree)
		if x.Met {
			chain += ", and does."
		} else {
			chain += ", and does not."
		}
	}
	s.text(fmt.Sprintf("%s At %.4g Hz, the bandwidth of the control, it is late by %.2f ms (%.1f degrees).", chain, x.Bandwidth, 1e3*x.Delay, x.Lag/degree))
	s.table(filterTable(x))
	left := &table{Name: "filter-residual", Title: "What is left", About: fmt.Sprintf("Root mean square from %.4g to %.4g Hz, before and behind the chain.", x.From, x.To),
		Columns: []column{{"axis", "", false}, {"recorded", "deg/s", true}, {"left", "deg/s", true}, {"predicted", "deg/s", true}, {"left", "deg/s", true}}}
	for _, a := range x.Axes {
		left.Rows = append(left.Rows, []cell{words(a.Axis), digits(a.ObservedRMS/degree, 3), digits(a.ObservedLeft/degree, 3), digits(a.PredictedRMS/degree, 3), digits(a.PredictedLeft/degree, 3)})
	}
	s.table(left)
	var frequency []float64
	gain := draw.Curve{Name: "gain of the chain", Class: "predicted"}
	for _, q := range x.Curves {
		frequency = append(frequency, q.Frequency)
		gain.X, gain.Y = append(gain.X, q.Frequency), append(gain.Y, 10*math.Log10(math.Max(q.Power, 1e-12)))
	}
	s.heading("Gain")
	s.chart(c, &draw.Chart{ID: "filter-gain", Title: "Gain of the chain", About: "Gain of the whole chain in dB over frequency, the mean of the squared magnitude over the flight.",
		X: draw.Axis{Label: "frequency, Hz"}, Y: draw.Axis{Label: "gain, dB"}, Curves: []draw.Curve{draw.Thin(gain, mostPoints)}, Marks: []draw.Mark{{X: x.Bandwidth, Label: "bandwidth"}}}, "")
	for _, a := range x.Axes {
		ch := &draw.Chart{ID: slug("filtered-" + a.Axis), Title: upper(a.Axis) + " before and behind the chain", X: draw.Axis{Label: "frequency, Hz"}, Y: draw.Axis{Label: "gyro rate, (deg/s)²/Hz", Log: true, Either: true},
			About: "Density of the " + a.Axis + " rate over frequency before and behind the filters."}
		add := func(name, class string, y []float64) {
			if len(y) == len(frequency) && len(y) > 0 {
				ch.Curves = append(ch.Curves, draw.Thin(draw.Curve{Name: name, Class: class, X: frequency, Y: scaled(y, 1/square)}, mostPoints))
			}
		}
		add("recorded", "faint", a.Observed)
		add("recorded, filtered", "observed", a.ObservedAfter)
		add("predicted", "second", a.Predicted)
		add("predicted, filtered", "predicted", a.PredictedAfter)
		s.heading(ch.Title)
		s.chart(c, ch, "")
	}
	if len(x.Notes) > 0 {
		s.list(x.Notes)
	}
	return s
}

func filterTable(x *kinds.Filtered) *table {
	t := &table{Name: "filters", Title: "The chain", About: "Buys: how much more of the recorded vibration would be left without this filter alone.",
		Columns: []column{{"filter", "", false}, {"at", "Hz", true}, {"delay", "ms", true}, {"lag", "deg", true}}}
	for _, a := range x.Axes {
		t.Columns = append(t.Columns, column{"buys on " + a.Axis, "dB", true})
	}
	for _, f := range x.Filters {
		row := []cell{words(f.Name), number(f.Frequency, 1), number(1e3*f.Delay, 2), number(f.Lag/degree, 1)}
		for i := range x.Axes {
			v := math.NaN()
			if i < len(f.Buys) {
				v = f.Buys[i]
			}
			row = append(row, number(v, 1))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}
