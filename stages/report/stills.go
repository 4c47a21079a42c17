package report

import (
	"fmt"
	"math"
	"path"
	"slices"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
	"hushframe/stages/report/printed"
)

// stillName is a still picture with the name of its file, without the ending.
type stillName struct {
	name    string
	picture *printed.Picture
}

// stills draws every chart of a page that has been composed, and those that only stand on paper.
func stills(c *content) (out []stillName) {
	add := func(name string, p *printed.Picture) {
		if p != nil {
			out = append(out, stillName{name, p})
		}
	}
	for _, ch := range c.charts {
		title := ch.Title
		if strings.HasPrefix(ch.ID, "response-") {
			title = "Gyro rate on " + ch.Axis // the page has a heading over it
		}
		add(printed.FileName(ch.ID), printed.Chart(title, ch))
	}
	if r := c.response; r != nil && len(r.Rotors) > 0 {
		for axis, name := range kinds.AxisNames {
			add("lines-"+name, printed.Chart("Rotor lines on "+name+" over rotor speed", linesChart(r, axis)))
		}
	}
	if c.modes != nil {
		add("energy", energyStill(c.modes))
	}
	return out
}

// linesChart shows the rotor lines of an axis over rotor speed, as far as the modes carry.
func linesChart(r *kinds.Response, axis int) *draw.Chart {
	name := kinds.AxisNames[axis]
	ch := &draw.Chart{ID: "lines-" + name, X: draw.Axis{Label: "speed of the first rotor, rpm"}, Y: draw.Axis{Label: "gyro rate, peak amplitude, deg/s", Log: true},
		Marks: []draw.Mark{{X: r.Rotors[0].Speed / rpm, Label: spinName(r)}},
		About: fmt.Sprintf("Peak amplitude of the %s rate at the lines of the rotors over their speed, rotors added as power.", name)}
	loudest := 0.0
	for _, x := range r.Orders {
		c := draw.Curve{Name: fmt.Sprintf("%s, order %g", x.Source, x.Order)}
		for k, w := range r.MapSpeeds {
			if x.Order*w/(2*math.Pi) <= r.ModesTo/1.5*(1+1e-9) {
				c.X, c.Y = append(c.X, w/rpm), append(c.Y, x.Rate[axis][k]/degree)
				loudest = math.Max(loudest, x.Rate[axis][k]/degree)
			}
		}
		ch.Curves = append(ch.Curves, c)
	}
	// What no one would see beside the others.
	ch.Curves = slices.DeleteFunc(ch.Curves, func(c draw.Curve) bool { return len(c.Y) < 2 || slices.Max(c.Y) < 1e-4*loudest })
	return ch
}

// energyStill shows which parts bend in which mode.
func energyStill(m *kinds.Modes) *printed.Picture {
	b := printed.Bars{Parts: m.Survey.Groups}
	for _, x := range m.Survey.Modes {
		b.Rows = append(b.Rows, fmt.Sprintf("%d, %.0f Hz", x.Number, x.Frequency))
		b.Shares = append(b.Shares, x.ByGroup)
	}
	return printed.Shares("Where each mode bends", "share of the strain energy", b)
}

// addStills writes the still pictures beside the page.
func addStills(d *kinds.Document, c *content, formats []string) error {
	if len(formats) == 0 {
		return nil
	}
	folder := strings.TrimSuffix(d.Page, path.Ext(d.Page)) + "-charts"
	for _, s := range stills(c) {
		for _, format := range formats {
			data, err := s.picture.Write(format)
			if err != nil {
				return fault.New(fault.Internal, "%v", err).In("draw", s.name)
			}
			name := folder + "/" + s.name + "." + format
			if _, taken := d.Files[name]; taken {
				return fault.New(fault.Internal, "two charts are called %s", s.name).In("draw", s.name)
			}
			d.Files[name] = data
		}
	}
	return nil
}
