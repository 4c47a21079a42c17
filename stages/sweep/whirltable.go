package sweep

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

const rpm = 2 * math.Pi / 60

// speedName says at what speed the rotors turn: "hover speed" or "12000 rpm".
func speedName(r *kinds.Response) string {
	for _, x := range r.Rotors {
		if x.Speed != x.Hover {
			return fmt.Sprintf("%.0f rpm", r.Rotors[0].Speed/rpm)
		}
	}
	return "hover speed"
}

// rotorTable sets the gyroscopic moment of each rotor against its tilt inertia.
func rotorTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title: "Spinning rotors",
		Text: "a motor that tilts at a frequency f needs Jt (2πf)² per angle for its inertia and Jp Ω 2πf for its spin; below \"equal at\" the spin needs more, and the last column is that " +
			"frequency for the propeller alone. Propellers are taken as rigid discs: two blades would change the tilt inertia as they turn, and bending blades carry less",
		Columns: []stage.Column{{Name: "rotor"}, {Name: "rpm", Right: true}, {Name: "Jp, kg·mm²", Right: true}, {Name: "of propeller", Right: true}, {Name: "of bell", Right: true}, {Name: "Jt, kg·mm²", Right: true},
			{Name: "Jp Ω, N·m·s", Right: true}, {Name: "equal at, Hz", Right: true}, {Name: "propeller, Hz", Right: true}},
	}
	for _, x := range r.Rotors {
		s.Rows = append(s.Rows, []string{x.Rotor, fmt.Sprintf("%.0f", x.Speed/rpm), fmt.Sprintf("%.2f", 1e6*x.Polar), dash("%.2f", 1e6*x.Propeller), dash("%.2f", 1e6*x.Bell), dash("%.2f", 1e6*x.Tilt),
			fmt.Sprintf("%.4f", x.Polar*x.Speed), dash("%.0f", x.Equal), dash("%.0f", x.Equal*x.Propeller/x.Polar)})
	}
	return s
}

func dash(format string, x float64) string {
	if math.IsNaN(x) {
		return "–"
	}
	return strings.Replace(fmt.Sprintf(format, x), "-", "−", 1)
}

// leastShift is the change of frequency from rest to the highest speed, as a
// share, below which a mode is not listed.
const leastShift = 1e-3

// whirlTable gives the modes that move with rotor speed, and their critical speeds.
func whirlTable(r *kinds.Response) stage.Section {
	last := len(r.Speeds) - 1
	here := at(r.Speeds, r.Rotors[0].Speed)
	s := stage.Section{
		Title: "Modes that move with rotor speed",
		Text:  "mounts with a law over frequency are taken as they are at the frequency of each motion. Direction: 1 when rotors tilt round with their spin, −1 against it, 0 to and fro. The last columns are the speeds in rpm at which an order meets the mode",
		Columns: []stage.Column{{Name: "mode", Right: true}, {Name: "at rest, Hz", Right: true}, {Name: speedName(r) + ", Hz", Right: true},
			{Name: fmt.Sprintf("%.0f rpm, Hz", r.Speeds[last]/rpm), Right: true}, {Name: "damping, %", Right: true}, {Name: "direction", Right: true}, {Name: "critical speeds"}},
	}
	still := 0
	for _, w := range r.Whirl {
		if w.Frequency[0] > r.To {
			continue
		}
		if shift(w) < leastShift {
			still++
			continue
		}
		row := []string{fmt.Sprint(w.Mode), fmt.Sprintf("%.1f", w.Frequency[0]), "–", dash("%.1f", w.Frequency[last]), "–", "–", critical(r, w.Mode)}
		if here >= 0 {
			row[2], row[4], row[5] = dash("%.1f", w.Frequency[here]), dash("%.2f", 100*w.Damping[here]), dash("%.2f", w.Direction[here])
		}
		s.Rows = append(s.Rows, row)
	}
	if still > 0 {
		s.Text += fmt.Sprintf("; %d modes that move by less than %.1f %% are not listed", still, 100*leastShift)
	}
	return s
}

// shift is the greatest change of frequency over the speeds, as a share.
func shift(w kinds.ResponseWhirl) float64 {
	most := 0.0
	for _, f := range w.Frequency {
		if x := math.Abs(f/w.Frequency[0] - 1); x > most {
			most = x
		}
	}
	return most
}

// critical lists the critical speeds of a mode by order: "1: 13250, 2: 6610, 3: 4410".
func critical(r *kinds.Response, mode int) string {
	var parts []string
	for _, c := range r.Critical {
		if c.Mode == mode {
			name := fmt.Sprint(c.Order)
			if len(c.Rotors) < len(r.Rotors) {
				name += " of " + strings.Join(c.Rotors, " ")
			}
			parts = append(parts, fmt.Sprintf("%s: %.0f", name, c.Speed/rpm))
		}
	}
	if len(parts) == 0 {
		return "none"
	}
	return strings.Join(parts, ", ")
}

// separationTable gives neighbouring modes, each pair on the axis on which the
// quieter of the two is loudest.
func separationTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title: "Separation of neighbouring modes at the gyro",
		Text: "the gap in Hz and in half-power bandwidths; the density that each makes alone, and what both together add to the louder one. " +
			"By common practice modes closer than about 20 Hz add up in one peak",
		Columns: []stage.Column{{Name: "modes"}, {Name: "at, Hz", Right: true}, {Name: "gap, Hz", Right: true}, {Name: "bandwidths", Right: true}, {Name: "axis"},
			{Name: "lower, (deg/s)²/Hz", Right: true}, {Name: "upper, (deg/s)²/Hz", Right: true}, {Name: "together, dB", Right: true}},
	}
	for _, x := range r.Separations {
		axis := 0
		for k := range kinds.AxisNames {
			if min(x.LowerAlone[k], x.UpperAlone[k]) > min(x.LowerAlone[axis], x.UpperAlone[axis]) {
				axis = k
			}
		}
		s.Rows = append(s.Rows, []string{fmt.Sprintf("%d, %d", x.Lower, x.Upper), fmt.Sprintf("%.1f", x.At), fmt.Sprintf("%.1f", x.Gap), fmt.Sprintf("%.1f", x.Bandwidths),
			kinds.AxisNames[axis], fmt.Sprintf("%.2g", x.LowerAlone[axis]/degree/degree), fmt.Sprintf("%.2g", x.UpperAlone[axis]/degree/degree),
			dash("%+.1f", 10*math.Log10(x.Amplification[axis]))})
	}
	return s
}
