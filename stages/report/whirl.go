package report

import (
	"fmt"
	"math"
	"strings"

	"hushframe/stages/kinds"
)

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
