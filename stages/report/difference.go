package report

import (
	"fmt"
	"math"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// differenceSection shows what a change did: levels first, then modes, peaks, lines and masses. Each chart is handed to name
// first, unless that is nil.
func differenceSection(c *content, d *kinds.Difference, name func(*draw.Chart)) *section {
	s := &section{ID: "difference", Title: "What the change did"}
	s.text("The frame before and after a change. Levels are compared as the root mean square of the gyro rate under the broadband source; +6\u00a0dB is twice. " +
		"A mode is the same on both sides when their shapes are: the modal assurance criterion, weighted with the mass, is 1 for equal shapes and near 0 for different modes.")
	if math.Min(d.SharedBefore, d.SharedAfter) < 0.9995 {
		s.aside(fmt.Sprintf("Shapes are compared over what both have: %.0f\u00a0%% of the mass before and %.0f\u00a0%% of that after.", 100*d.SharedBefore, 100*d.SharedAfter))
	}
	if d.Frequency != nil {
		for axis := range kinds.AxisNames {
			if ch := differenceChart(d, axis); ch.Fit() {
				if name != nil {
					name(ch)
				}
				s.heading(ch.Title)
				s.chart(c, ch, "")
			}
		}
	}
	s.table(changedLevels(d))
	s.table(trackedModes(d))
	s.table(modesAlone(d))
	s.table(changedPeaks(d))
	s.table(changedLines(d))
	s.table(changedMasses(d))
	return s
}

// differenceChart lays the response after over that before.
func differenceChart(d *kinds.Difference, axis int) *draw.Chart {
	name := kinds.AxisNames[axis]
	ch := &draw.Chart{ID: "change-" + name, Title: upper(name) + " before and after", X: draw.Axis{Label: "frequency, Hz", From: d.From, To: d.To, Either: true}, Y: draw.Axis{Label: "gyro rate, (deg/s)²/Hz", Log: true, Either: true},
		About: fmt.Sprintf("Power spectral density of the %s rate before and after the change, from %.0f to %.0f Hz. Peaks are in the tables below.", name, d.From, d.To)}
	for k, class := range []string{"observed", "predicted"} {
		ch.Curves = append(ch.Curves, draw.Curve{Name: []string{"before", "after"}[k], Class: class, X: d.Frequency, Y: scaled(d.Density[k][axis], 1/square)})
	}
	if b, ok := d.Whole(name); ok && !math.IsNaN(b.Change) {
		ch.Notes = append(ch.Notes, sign(fmt.Sprintf("%s: %+.1f dB in all", name, b.Change)))
	}
	for _, p := range d.Peaks {
		if p.Axis != name {
			continue
		}
		for k, class := range []string{"observed", "predicted"} {
			if p.Density[k] > 0 {
				ch.Points = append(ch.Points, draw.Point{X: p.Frequency[k], Y: p.Density[k] / square, Label: fmt.Sprintf("%.0f", p.Frequency[k]), Class: class})
			}
		}
	}
	return ch
}

func changedLevels(d *kinds.Difference) *table {
	t := &table{Name: "change-of-level", Title: "Level by band", About: "Third-octave bands, then all that both responses sweep.",
		Columns: []column{{"axis", "", false}, {"from", "Hz", true}, {"to", "Hz", true}, {"before", "deg/s", true}, {"after", "deg/s", true}, {"change", "dB", true}}}
	for _, b := range d.Bands {
		change := signed(b.Change, 1)
		change.Strong = b.Whole
		t.Rows = append(t.Rows, []cell{words(b.Axis), number(b.From, 1), number(b.To, 1), digits(b.RMS[0]/degree, 3), digits(b.RMS[1]/degree, 3), change})
	}
	return t
}

func trackedModes(d *kinds.Difference) *table {
	t := &table{Name: "modes-followed", Title: "Modes that both have",
		Columns: []column{{"mode before", "", true}, {"mode after", "", true}, {"before", "Hz", true}, {"after", "Hz", true}, {"shift", "%", true},
			{"modal assurance", "", true}, {"damping ratio before", "%", true}, {"after", "%", true}, {"motion before", "", false}}}
	for _, m := range d.Modes {
		motion := m.Motion
		if m.Part != "" {
			motion += " of " + m.Part
		}
		t.Rows = append(t.Rows, []cell{number(float64(m.Number[0]), 0), number(float64(m.Number[1]), 0), number(m.Frequency[0], 1), number(m.Frequency[1], 1),
			signed(100*(m.Frequency[1]/m.Frequency[0]-1), 1), number(m.Assurance, 3), percent(m.Damping[0], 2), percent(m.Damping[1], 2), words(motion)})
	}
	return t
}

func modesAlone(d *kinds.Difference) *table {
	t := &table{Name: "modes-lost-and-new", Title: "Modes lost and new",
		Columns: []column{{"", "", false}, {"mode", "", true}, {"frequency", "Hz", true}, {"most like", "", true}, {"modal assurance", "", true}, {"why", "", false}}}
	for _, m := range d.Alone {
		what, nearest := "lost", missing()
		if m.Side == kinds.After {
			what = "new"
		}
		if m.Nearest > 0 {
			nearest = number(float64(m.Nearest), 0)
		}
		t.Rows = append(t.Rows, []cell{words(what), number(float64(m.Number), 0), number(m.Frequency, 1), nearest, number(m.Assurance, 3), words(m.Reason)})
	}
	return t
}

func changedPeaks(d *kinds.Difference) *table {
	t := &table{Name: "peaks-before-and-after", Title: "Peaks before and after", About: "A peak is looked for where the mode that leads it has gone.",
		Columns: []column{{"axis", "", false}, {"before", "Hz", true}, {"after", "Hz", true}, {"density before", "(deg/s)²/Hz", true}, {"after", "(deg/s)²/Hz", true},
			{"change", "dB", true}, {"modes before", "", false}, {"after", "", false}}}
	for _, p := range d.Peaks {
		t.Rows = append(t.Rows, []cell{words(p.Axis), number(p.Frequency[0], 1), number(p.Frequency[1], 1), digits(p.Density[0]/square, 3), digits(p.Density[1]/square, 3),
			signed(p.Change, 1), modeList(p.Modes[0]), modeList(p.Modes[1])})
	}
	return t
}

func changedLines(d *kinds.Difference) *table {
	t := &table{Name: "lines-before-and-after", Title: "Rotor lines at hover before and after",
		Columns: []column{{"source", "", false}, {"order", "", true}, {"axis", "", false}, {"before", "Hz", true}, {"after", "Hz", true}, {"before", "deg/s", true}, {"after", "deg/s", true}, {"change", "dB", true}}}
	for _, l := range d.Lines {
		t.Rows = append(t.Rows, []cell{words(l.Source), digits(l.Order, 3), words(l.Axis), number(l.Frequency[0], 1), number(l.Frequency[1], 1),
			digits(l.Rate[0]/degree, 3), digits(l.Rate[1]/degree, 3), signed(l.Change, 1)})
	}
	return t
}

// changedMasses lists what weighs something else, and the total.
func changedMasses(d *kinds.Difference) *table {
	t := &table{Name: "mass-before-and-after", Title: "Mass before and after",
		Columns: []column{{"part or body", "", false}, {"before", "g", true}, {"after", "g", true}, {"change", "g", true}}}
	row := func(name string, a, b float64) {
		t.Rows = append(t.Rows, []cell{words(name), number(1000*a, 2), number(1000*b, 2), signed(1000*(b-a), 2)})
	}
	for _, m := range d.Masses {
		if math.Abs(m.Mass[1]-m.Mass[0]) > 1e-9*(m.Mass[0]+m.Mass[1]) {
			row(m.Name, m.Mass[0], m.Mass[1])
		}
	}
	if !math.IsNaN(d.MassBefore) && !math.IsNaN(d.MassAfter) {
		row("total", d.MassBefore, d.MassAfter)
	}
	return t
}
