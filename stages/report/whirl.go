package report

import (
	"fmt"
	"math"
	"strings"

	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// whirlSection fills in what changes with rotor speed.
func whirlSection(s *section, c *content) {
	r := c.response
	if len(r.Whirl) == 0 {
		return
	}
	s.heading("Over rotor speed")
	s.text("Natural frequencies of the damped frame with its rotors spinning. Rings are critical speeds, where an order of the rotors meets a mode.")
	s.chart(c, whirlChart(r), "")
	maps := &section{Title: "Predicted spectra over rotor speed"}
	for axis := range kinds.AxisNames {
		if ch := predictedMap(r, axis); ch != nil {
			maps.heading(ch.Title)
			maps.chart(c, ch, "")
		}
	}
	s.fold(maps)
	s.table(spinTable(r))
	s.table(whirlTable(r))
	s.table(mapTable(r))
	s.table(separationTable(r))
}

// whirlChart draws the modes within the sweep over rotor speed.
func whirlChart(r *kinds.Response) *draw.Chart {
	fastest := r.Speeds[len(r.Speeds)-1] / rpm
	ch := &draw.Chart{ID: "modes-over-rotor-speed", Title: "Modes over rotor speed",
		About: "Natural frequencies over rotor speed, with the lines of orders; the figures are in the table below.",
		X:     draw.Axis{Label: "speed of the first rotor, rpm", From: 0, To: fastest}, Y: draw.Axis{Label: "natural frequency, Hz", From: 0, To: r.To},
		Marks: []draw.Mark{{X: r.Rotors[0].Speed / rpm, Label: spinName(r)}}}
	speeds := scaled(r.Speeds, 1/rpm)
	seen := map[int]bool{}
	for _, c := range r.Critical {
		if len(c.Rotors) < len(r.Rotors) {
			continue // of rotors with a speed of their own, for which the axis does not hold
		}
		if !seen[c.Order] {
			seen[c.Order] = true
			ch.Curves = append(ch.Curves, orderLine(fmt.Sprintf("order %d", c.Order), float64(c.Order), fastest))
		}
		if c.Frequency <= r.To {
			ch.Points = append(ch.Points, draw.Point{X: c.Speed / rpm, Y: c.Frequency, Class: "critical",
				About: fmt.Sprintf("order %d meets mode %d at %.0f rpm, %.1f Hz", c.Order, c.Mode, c.Speed/rpm, c.Frequency)})
		}
	}
	for _, x := range r.Whirl {
		ch.Curves = append(ch.Curves, draw.Curve{Name: fmt.Sprint(x.Mode), Class: "predicted", X: speeds, Y: x.Frequency})
	}
	return ch
}

// orderLine is the straight line of an order over rotor speed, in Hz over rpm.
func orderLine(name string, order, fastest float64) draw.Curve {
	const pieces = 64 // so that it can be cut at the top of a chart
	c := draw.Curve{Name: name, Class: "order"}
	for k := range pieces + 1 {
		speed := fastest * float64(k) / pieces
		c.X, c.Y = append(c.X, speed), append(c.Y, order*speed/60)
	}
	return c
}

// mapTable gives the speeds at which lines are loudest.
func mapTable(r *kinds.Response) *table {
	t := &table{Name: "lines-over-rotor-speed", Title: "Loudest lines over rotor speed",
		About:   fmt.Sprintf("The largest peak amplitude of the gyro rate and the speed of the first rotor at which it is reached, rotors added as power. Only lines up to %.4g Hz, to which the modes carry.", r.ModesTo/1.5),
		Columns: []column{{"source", "", false}, {"order", "", true}, {"roll", "deg/s", true}, {"roll at", "rpm", true}, {"pitch", "deg/s", true}, {"pitch at", "rpm", true}, {"yaw", "deg/s", true}, {"yaw at", "rpm", true}}}
	for _, x := range r.Orders {
		row := []cell{words(x.Source), digits(x.Order, 3)}
		for axis := range x.Rate {
			best, at := math.NaN(), math.NaN()
			for k, a := range x.Rate[axis] {
				if !(a <= best) && x.Order*r.MapSpeeds[k]/(2*math.Pi) <= r.ModesTo/1.5*(1+1e-9) {
					best, at = a, r.MapSpeeds[k]
				}
			}
			row = append(row, digits(best/degree, 3), number(at/rpm, 0))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// separationTable gives each pair of neighbours on the axis on which the
// quieter is loudest.
func separationTable(r *kinds.Response) *table {
	t := &table{Name: "separation", Title: "Separation of neighbouring modes",
		About: "The gap in Hz and in half-power bandwidths, the peak density that each makes alone, and what both together add to the louder. By common practice modes closer than about 20 Hz add up in one peak.",
		Columns: []column{{"modes", "", false}, {"at", "Hz", true}, {"gap", "Hz", true}, {"gap in bandwidths", "", true}, {"axis", "", false},
			{"lower alone", "(deg/s)²/Hz", true}, {"upper alone", "(deg/s)²/Hz", true}, {"together", "dB", true}}}
	for _, x := range r.Separations {
		axis := 0
		for k := range kinds.AxisNames {
			if min(x.LowerAlone[k], x.UpperAlone[k]) > min(x.LowerAlone[axis], x.UpperAlone[axis]) {
				axis = k
			}
		}
		t.Rows = append(t.Rows, []cell{words(fmt.Sprintf("%d, %d", x.Lower, x.Upper)), number(x.At, 1), number(x.Gap, 1), number(x.Bandwidths, 1), words(kinds.AxisNames[axis]),
			digits(x.LowerAlone[axis]/square, 2), digits(x.UpperAlone[axis]/square, 2), signed(10*math.Log10(x.Amplification[axis]), 1)})
	}
	return t
}

// spinName says at what speed the rotors of a response turn.
func spinName(r *kinds.Response) string {
	for _, x := range r.Rotors {
		if x.Speed != x.Hover {
			return fmt.Sprintf("%.0f rpm", r.Rotors[0].Speed/rpm)
		}
	}
	return "hover speed"
}

// spinTable sets gyroscopic moments against tilt inertia.
func spinTable(r *kinds.Response) *table {
	t := &table{Name: "spinning-rotors", Title: "Gyroscopic moments",
		About: "A rotor that tilts is held back by its inertia and turned aside by its spin; below the frequency in the last column the spin has the greater moment. " +
			"A propeller is taken as a rigid disc: two blades would change the tilt inertia as they turn, and blades that bend carry less.",
		Columns: []column{{"rotor", "", false}, {"speed", "rpm", true}, {"polar inertia", "kg·mm²", true}, {"tilt inertia", "kg·mm²", true},
			{"angular momentum", "N·m·s", true}, {"equal at", "Hz", true}}}
	if !r.Spinning {
		t.About += " They are left out of this response."
	}
	for _, x := range r.Rotors {
		t.Rows = append(t.Rows, []cell{words(x.Rotor), number(x.Speed/rpm, 0), digits(1e6*x.Polar, 3), digits(1e6*x.Tilt, 3), digits(x.Polar*x.Speed, 3), number(x.Equal, 0)})
	}
	return t
}

// whirlTable gives the modes at rest, at speed and at the highest speed.
func whirlTable(r *kinds.Response) *table {
	last, here := len(r.Speeds)-1, 0
	for k, x := range r.Speeds {
		if math.Abs(x-r.Rotors[0].Speed) < math.Abs(r.Speeds[here]-r.Rotors[0].Speed) {
			here = k
		}
	}
	t := &table{Name: "modes-over-rotor-speed", Title: "Modes over rotor speed",
		About: "Direction is 1 when rotors tilt round with their spin, −1 against it and 0 to and fro. A critical speed is one at which an order of the rotors meets the mode, with the gyroscopic moments at that very speed.",
		Columns: []column{{"mode", "", true}, {"at rest", "Hz", true}, {"at " + spinName(r), "Hz", true}, {fmt.Sprintf("at %.0f rpm", r.Speeds[last]/rpm), "Hz", true},
			{"damping ratio", "%", true}, {"direction", "", true}, {"critical speeds by order", "rpm", false}}}
	for _, w := range r.Whirl {
		if w.Frequency[0] > r.To {
			continue
		}
		t.Rows = append(t.Rows, []cell{number(float64(w.Mode), 0), number(w.Frequency[0], 1), number(w.Frequency[here], 1), number(w.Frequency[last], 1),
			percent(w.Damping[here], 2), signed(w.Direction[here], 2), words(criticalSpeeds(r, w.Mode))})
	}
	return t
}

func criticalSpeeds(r *kinds.Response, mode int) string {
	var parts []string
	for _, c := range r.Critical {
		if c.Mode == mode {
			part := fmt.Sprintf("%d: %.0f", c.Order, c.Speed/rpm)
			if len(c.Rotors) < len(r.Rotors) {
				part = fmt.Sprintf("%d of %s: %.0f", c.Order, strings.Join(c.Rotors, " "), c.Speed/rpm)
			}
			parts = append(parts, part)
		}
	}
	return strings.Join(parts, ", ")
}
