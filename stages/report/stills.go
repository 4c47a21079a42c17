package report

import (
	"fmt"
	"maps"
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

// stills draws every chart that the content has the data for.
func stills(c *content) (out []stillName) {
	add := func(name string, p *printed.Picture) {
		if p != nil {
			out = append(out, stillName{name, p})
		}
	}
	for axis, name := range kinds.AxisNames {
		if c.response != nil || c.comparison != nil {
			ch := axisChart(c, axis)
			add("response-"+name, printed.Response("Gyro rate on "+name, ch))
		}
	}
	if r := c.response; r != nil && len(r.Whirl) > 0 && len(r.Rotors) > 0 && len(r.Speeds) > 0 {
		add("campbell", printed.Campbell("Natural frequencies over rotor speed", whirlChart(r)))
	}
	if r := c.response; r != nil && len(r.Orders) > 0 && len(r.Rotors) > 0 {
		for axis, name := range kinds.AxisNames {
			add("lines-"+name, printed.Lines("Rotor lines on "+name+" over rotor speed", "gyro rate, peak amplitude, deg/s", lineCurves(r, axis),
				draw.Mark{X: r.Rotors[0].Speed / rpm, Label: spinName(r)}))
			add("map-predicted-"+name, predictedMap(r, axis))
		}
	}
	if c.spectra != nil {
		for axis, x := range c.spectra.Axes {
			if x.Unit == "rad/s" {
				add("map-recorded-"+x.Axis, recordedMap(c, axis))
			}
		}
	}
	if c.modes != nil {
		add("energy", energyStill(c.modes))
	}
	if c.identified != nil {
		var poles []printed.Pole
		for _, q := range c.identified.Diagram {
			poles = append(poles, printed.Pole{Order: q.Order, Frequency: q.Frequency, Stable: q.Stable})
		}
		var marks []draw.Mark
		for _, m := range c.identified.Modes {
			if m.Kind == kinds.ModeStructure {
				marks = append(marks, draw.Mark{X: m.Frequency, Label: fmt.Sprintf("%.0f", m.Frequency)})
			}
		}
		add("stabilisation", printed.Poles("Poles of the recording by model order", c.identified.From, c.identified.To, poles, marks))
	}
	if d := c.difference; d != nil && d.Frequency != nil {
		for axis, name := range kinds.AxisNames {
			add("change-"+name, printed.Response("Gyro rate on "+name+" before and after", differenceChart(d, axis)))
		}
	}
	return out
}

// lineCurves are the rotor lines of an axis over rotor speed, as far as the modes carry.
func lineCurves(r *kinds.Response, axis int) (out []draw.Curve) {
	loudest := 0.0
	for _, x := range r.Orders {
		c := draw.Curve{Name: fmt.Sprintf("%s, order %g", x.Source, x.Order)}
		for k, w := range r.MapSpeeds {
			if x.Order*w/(2*math.Pi) <= r.ModesTo/1.5*(1+1e-9) {
				c.X, c.Y = append(c.X, w/rpm), append(c.Y, x.Rate[axis][k]/degree)
				loudest = math.Max(loudest, x.Rate[axis][k]/degree)
			}
		}
		out = append(out, c)
	}
	// What no one would see beside the others.
	return slices.DeleteFunc(out, func(c draw.Curve) bool { return len(c.Y) < 2 || slices.Max(c.Y) < 1e-4*loudest })
}

// predictedMap is the predicted spectrum of an axis over rotor speed, nil when the response has none.
func predictedMap(r *kinds.Response, axis int) *printed.Picture {
	rows := r.Map.Rows
	if len(rows) < 2 || len(r.Map.Frequency) == 0 {
		return nil
	}
	m := printed.Map{Across: "rotor speed, rpm", Label: "(deg/s)²/Hz", Top: r.To}
	between := func(i int) float64 { // the end of a cell lies midway to its neighbour
		switch i {
		case 0:
			return (3*rows[0].Speed - rows[1].Speed) / 2
		case len(rows):
			return (3*rows[i-1].Speed - rows[i-2].Speed) / 2
		}
		return (rows[i-1].Speed + rows[i].Speed) / 2
	}
	for i, x := range rows {
		m.Cells = append(m.Cells, printed.Cell{From: math.Max(0, between(i)) / rpm, To: between(i+1) / rpm, Start: r.Map.Frequency[0], Step: r.Map.Width, Density: scaled(x.Density[axis], 1/square)})
	}
	for _, x := range r.Modes {
		m.Modes = append(m.Modes, draw.Mark{X: x.Frequency, Label: fmt.Sprint(x.Number)})
	}
	if len(r.Speeds) > 0 && len(r.Rotors) > 0 {
		m.Orders = whirlChart(r).Orders
	}
	return printed.SpeedMap("Predicted gyro rate on "+kinds.AxisNames[axis]+" over rotor speed, broadband source", m)
}

// recordedMap is the spectrum of an axis over rotor speed, nil when the recording has none.
func recordedMap(c *content, axis int) *printed.Picture {
	cells := c.spectra.MapOf(axis, "rotor speed")
	if len(cells) == 0 {
		return nil
	}
	m := printed.Map{Across: "mean rotor speed, rpm", Label: "(deg/s)²/Hz", Top: c.spectra.Rate / 2}
	for _, x := range cells {
		m.Cells = append(m.Cells, printed.Cell{From: x.Low / rpm, To: x.High / rpm, Step: x.Step, Density: scaled(x.Density, 1/square)})
	}
	if c.response != nil {
		m.Top = math.Min(m.Top, 2*c.response.To)
		for _, x := range c.response.Modes {
			m.Modes = append(m.Modes, draw.Mark{X: x.Frequency, Label: fmt.Sprint(x.Number)})
		}
	}
	orders := map[float64]string{1: "order 1", 2: "order 2"}
	for _, x := range c.spectra.Rotors {
		if x.Blades > 2 {
			orders[float64(x.Blades)] = "blade passing"
		}
	}
	for _, o := range slices.Sorted(maps.Keys(orders)) {
		m.Orders = append(m.Orders, printed.Order{Slope: o / 60, Label: orders[o]})
	}
	return printed.SpeedMap("Recorded gyro rate on "+c.spectra.Axes[axis].Axis+" over rotor speed", m)
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
	folder := strings.TrimSuffix(d.Page, path.Ext(d.Page)) + "-charts"
	for _, s := range stills(c) {
		for _, format := range formats {
			data, err := s.picture.Write(format)
			if err != nil {
				return fault.New(fault.Internal, "%v", err).In("draw", s.name)
			}
			d.Files[folder+"/"+s.name+"."+format] = data
		}
	}
	return nil
}
