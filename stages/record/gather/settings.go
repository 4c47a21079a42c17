package gather

import (
	"math"

	"hushframe/core/extension"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// Settings are the arguments that say what is read.
type Settings struct {
	File, Reader           string
	Options                stage.Arguments
	Columns, Rotors, Units map[string]string
	Throttle               string
	SetPoints, Clocks      map[string]string
	PolePairs              int       // of motors whose speed is recorded as electrical; 0 for none
	Mounting               []float64 // empty, or three angles in rad about x, y and z
	Rate                   float64
	Window                 []float64 // pairs of times; empty to find the steady pieces
	Find                   int       // rotors to find in the signal
	Speeds                 []float64 // their least and greatest speed, rad/s
	// Force asks for a force channel, which follows the axes in their series; there are no steady pieces to be found then.
	Force bool
	// Apart lets accelerations that have rows, a rate or a clock of their own be a second sensor; otherwise all axes share their rows.
	Apart bool
}

// Arguments describes them.
func Arguments() []stage.Argument {
	zero, most := 0.0, 16.0
	rpm := func(v float64) stage.Quantity {
		return stage.Quantity{SI: v * 2 * math.Pi / 60, Dimension: RotorSpeed}
	}
	texts := stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Text}}
	text := stage.Type{Kind: stage.Text}
	amounts := func(dimension, unit string) stage.Type {
		return stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Amount, Dimension: dimension, Unit: unit}}
	}
	return []stage.Argument{
		{Name: "file", About: "the recording", Type: stage.Type{Kind: stage.File}, Required: true, Example: `"flights/hover.csv.gz"`},
		{Name: "reader", About: "reader of its format; auto tells all built-in ones but flat by the first bytes",
			Type: text, Default: auto, Example: `"auto"`, Choices: readerNames(), Extension: extension.ReaderKind},
		{Name: "options", About: "options of the reader, by name", Type: texts, Example: `{ separator = "tab" }`, OptionsOf: "reader", Variants: readerOptions()},
		{Name: "columns", About: `columns by role: time, and roll, pitch, yaw (angular rate) or x, y, z (acceleration), each by name, place ("#3") or pattern ("*gyro*x*"); left out, found by their names`,
			Type: texts, Example: `{ time = "t", roll = "gx", pitch = "-gy", yaw = "-gz" }`},
		{Name: "mounting", About: "turns of the sensor about the airframe's x, y and z axes, one after the other, from lying along them",
			Type: amounts("angle", "deg"), Example: `["0 deg", "0 deg", "45 deg"]`},
		{Name: "rotors", About: "columns of rotor speed by rotor; left out, found by their names", Type: texts, Example: `{ fr = "rpm_1" }`},
		{Name: "pole_pairs", About: "pole pairs of the motors, where their electrical speed is recorded; 0 where it is that of the shaft",
			Type: stage.Type{Kind: stage.Whole}, Default: 0.0, Example: "7", Min: &zero},
		{Name: "throttle", About: "column of the throttle; left out, found by its name", Type: text, Example: `"throttle_pct"`},
		{Name: "set_points", About: "columns of the set-points of roll, pitch and yaw rate; left out, found by their names", Type: texts, Example: `{ roll = "target_roll" }`},
		{Name: "clocks", About: "time columns of columns that have a clock of their own", Type: texts, Example: `{ rpm_1 = "rpm_time" }`},
		{Name: "units", About: "units by column, where the recording does not state them", Type: texts, Example: `{ gx = "rad/s" }`},
		{Name: "rate", About: "sample rate, for a recording without a time column", Type: stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"},
			Example: `"2 kHz"`, Above: &zero},
		{Name: "window", About: "first and last time used, or several such pairs; left out, the steady pieces of the flight by rotor speed or throttle, or all where neither is recorded",
			Type: amounts("time", "s"), Example: `["8 s", "60 s"]`},
		{Name: "find_rotors", About: "rotors whose speeds are followed in the signal itself, where none is recorded", Type: stage.Type{Kind: stage.Whole},
			Default: 0.0, Example: "4", Min: &zero, Max: &most},
		{Name: "speed_range", About: "least and greatest speed that is looked for", Type: amounts("rotational speed", "rpm"),
			Default: []any{rpm(7500), rpm(24000)}, Example: `["7500 rpm", "24000 rpm"]`},
	}
}

// BenchArguments describes those of a bench recording, with a force and no rotors.
func BenchArguments() []stage.Argument {
	var out []stage.Argument
	for _, a := range Arguments() {
		switch a.Name {
		case "columns":
			a.About = `columns by role: time, force, and x, y, z (acceleration) or roll, pitch, yaw (angular rate), each by name, place ("#3") or pattern ("*acc*z*"); left out, found by their names`
			a.Example = `{ time = "t", force = "hammer", z = "-az" }`
		case "window":
			a.About = "first and last time used, or several such pairs; left out, all"
		case "units":
			a.Example = `{ hammer = "N" }`
		case "file", "reader", "options", "mounting", "rate":
		default:
			continue
		}
		out = append(out, a)
	}
	return out
}

// Read takes the settings out of the arguments of a stage.
func Read(a stage.Arguments, name string) (Settings, error) {
	s := Settings{
		File: a.Text("file"), Reader: a.Text("reader"), Options: a.Map("options"), Throttle: a.Text("throttle"), SetPoints: texts(a, "set_points"),
		Clocks: texts(a, "clocks"), PolePairs: a.Whole("pole_pairs"), Mounting: a.SIs("mounting"),
		Columns: texts(a, "columns"), Rotors: texts(a, "rotors"), Units: texts(a, "units"), Rate: a.SI("rate"), Window: a.SIs("window"),
		Find: a.Whole("find_rotors"), Speeds: a.SIs("speed_range"),
	}
	refuse := func(argument, remedy, format string, args ...any) (Settings, error) {
		return s, fault.New(fault.Input, format, args...).In(name, "").Of(argument).Do("%s", remedy)
	}
	switch {
	case s.Find > 0 && (len(s.Speeds) != 2 || !(s.Speeds[0] > 0 && s.Speeds[1] > s.Speeds[0])):
		return refuse("speed_range", `give the least and the greatest, such as ["7500 rpm", "24000 rpm"]`, "the range of speeds is no two rising speeds")
	case a.Has("mounting") && len(s.Mounting) != 3:
		return refuse("mounting", `give three angles, such as ["0 deg", "0 deg", "45 deg"]`, "the mounting has %s", recording.Count(len(s.Mounting), "angle"))
	case a.Has("window") && (len(s.Window) == 0 || len(s.Window)%2 == 1):
		return refuse("window", `give the first and the last time, such as ["8 s", "60 s"], or several such pairs`, "the window has %s", recording.Count(len(s.Window), "time"))
	}
	for i := 1; i < len(s.Window); i++ {
		switch {
		case !(s.Window[i] > s.Window[i-1]) && i%2 == 1:
			return s, fault.New(fault.Input, "the window ends at %g s, where it has not begun", s.Window[i]).In(name, "").Of("window").
				Do("make its second time later than the first, which is %g s", s.Window[i-1])
		case s.Window[i] < s.Window[i-1]:
			return s, fault.New(fault.Input, "the part of the window from %g s begins before the one to %g s ends", s.Window[i], s.Window[i-1]).In(name, "").Of("window").
				Do("give the pairs in order, without overlap")
		}
	}
	return s, nil
}

func texts(a stage.Arguments, name string) map[string]string {
	out := map[string]string{}
	for k, v := range a.Map(name) {
		out[k] = v.(string)
	}
	return out
}
