package gather

import (
	"fmt"
	"math"
	"slices"

	"hushframe/core/pipeline/quantity"
	"hushframe/core/signal/recording"
)

// The dimensions of columns.
const (
	AngularRate  = "angular rate"
	Acceleration = "acceleration"
	RotorSpeed   = "rotational speed"
	Throttle     = "throttle" // 0 to 1
	Force        = "force"
)

var UnitOfSI = map[string]string{AngularRate: "rad/s", Acceleration: "m/s2"}

// spellings are units as recordings write them, where these differ from those of jobs.
var spellings = map[string]map[string]string{
	AngularRate:  {"dps": "deg/s", "rps": "rad/s"},
	Acceleration: {"g": "g0", "G": "g0"},
	Force:        {"lb": "lbf", "lbs": "lbf", "pound": "lbf", "pounds": "lbf"},
	RotorSpeed:   {"rps": "turn/s", "Hz": "turn/s", "hz": "turn/s", "1/s": "turn/s", "RPM": "rpm", "1/min": "rpm"},
}

// factor returns what a number in that unit is multiplied by to be in SI.
func factor(unit, dimension, column string) (float64, error) {
	if dimension == Throttle {
		switch unit {
		case "%", "pct", "percent":
			return 0.01, nil
		case "", "1", "us": // none, or pulses, which begin at 1000: see pulses
			return 1, nil
		}
		return 0, &recording.Error{Column: column, Text: fmt.Sprintf("%q is no unit of throttle", unit), Remedy: fmt.Sprintf(`state it as "%%", "1" or "us" (pulses of 1000 to 2000), such as { %q = "%%" }`, column)}
	}
	spelled := unit
	if s, ok := spellings[dimension][unit]; ok {
		spelled = s
	}
	if dimension == Acceleration && spelled == "mg" {
		g, _ := quantity.ParseUnit("g0")
		return g.Factor / 1000, nil
	}
	u, err := quantity.ParseUnit(spelled)
	if err != nil || !u.Is(dimension) {
		return 0, &recording.Error{Column: column, Text: fmt.Sprintf("%q is no unit of %s", unit, dimension),
			Remedy: fmt.Sprintf(`state its unit in units, such as { %q = %q }`, column, quantity.Natural(dimension))}
	}
	return u.Factor, nil
}

// nameUnits are units at the end of a column name, as its last words.
var nameUnits = map[string][]struct {
	words []string
	unit  string
}{
	AngularRate: {
		{[]string{"deg", "s"}, "deg/s"}, {[]string{"deg", "per", "s"}, "deg/s"}, {[]string{"degs"}, "deg/s"}, {[]string{"dps"}, "deg/s"},
		{[]string{"rad", "s"}, "rad/s"}, {[]string{"rad", "per", "s"}, "rad/s"}, {[]string{"rads"}, "rad/s"},
	},
	Acceleration: {
		{[]string{"g"}, "g"}, {[]string{"mg"}, "mg"}, {[]string{"m", "s", "2"}, "m/s2"}, {[]string{"ms", "2"}, "m/s2"}, {[]string{"m", "per", "s", "2"}, "m/s2"},
	},
	RotorSpeed: {
		{[]string{"rad", "s"}, "rad/s"}, {[]string{"hz"}, "turn/s"}, {[]string{"rps"}, "turn/s"}, {[]string{"rev", "s"}, "turn/s"},
	},
	Force:    {{[]string{"n"}, "N"}, {[]string{"kn"}, "kN"}, {[]string{"lbf"}, "lbf"}, {[]string{"lb"}, "lbf"}},
	Throttle: {{[]string{"pct"}, "%"}, {[]string{"percent"}, "%"}, {[]string{"us"}, "us"}},
	"time": {
		{[]string{"s"}, "s"}, {[]string{"sec"}, "s"}, {[]string{"seconds"}, "s"}, {[]string{"ms"}, "ms"}, {[]string{"msec"}, "ms"},
		{[]string{"us"}, "us"}, {[]string{"usec"}, "us"}, {[]string{"ns"}, "ns"}, {[]string{"nsec"}, "ns"},
	},
}

// unitInName returns the unit that a column name ends in, "" for none. A speed with "rpm" anywhere is in rpm.
func unitInName(w []string, dimension string) string {
	if dimension == RotorSpeed && has(w, "rpm", "erpm") {
		return "rpm"
	}
	for _, n := range nameUnits[dimension] {
		if k := len(w) - len(n.words); k > 0 && slices.Equal(w[k:], n.words) {
			return n.unit
		}
	}
	return ""
}

// guessThrottle tells the unit of a throttle from its largest value: shares, per cent or pulses.
func guessThrottle(largest float64) (unit string, ok bool) {
	switch {
	case largest <= 1.5:
		return "1", true
	case largest <= 150:
		return "%", true
	case largest >= 800 && largest <= 2500:
		return "us", true
	}
	return "", false
}

// pulses turns the length of a pulse in microseconds into a throttle: 1000 is none, 2000 is full; common practice.
func pulses(us float64) float64 { return (us - 1000) / 1000 }

// guessTimeUnit takes the unit in which a median step makes a rate between 20 Hz and 20 kHz; ok is false if none does.
// Units are a thousand apart and so is the range, so there is never more than one.
func guessTimeUnit(step float64) (unit string, seconds float64, ok bool) {
	for _, u := range []struct {
		name    string
		seconds float64
	}{{"s", 1}, {"ms", 1e-3}, {"us", 1e-6}, {"ns", 1e-9}} {
		if rate := 1 / (step * u.seconds); rate >= 20 && rate < 20000 && !math.IsInf(rate, 0) {
			return u.name, u.seconds, true
		}
	}
	return "", 0, false
}
