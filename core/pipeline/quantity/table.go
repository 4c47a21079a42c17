package quantity

import (
	"math"
	"sort"
)

// vector holds the powers of metre, kilogram, second, radian, kelvin, byte.
type vector [6]int8

var baseSymbols = [6]string{"m", "kg", "s", "rad", "K", "B"}

// symbol is one unit symbol: SI value = factor*number + offset.
type symbol struct {
	name     string
	factor   float64
	offset   float64
	dim      vector
	prefixes string // prefixes allowed: "" for none, metric or binary
}

const (
	metric = "metric"
	binary = "binary"
)

// Standard gravity, inch, pound and ounce are exact by definition
// (BIPM, The International System of Units, 9th edition; NIST SP 811).
const (
	standardGravity = 9.80665
	inch            = 0.0254
	pound           = 0.45359237
)

var symbols = []symbol{
	{"m", 1, 0, vector{1}, metric},
	{"g", 1e-3, 0, vector{0, 1}, metric},
	{"t", 1e3, 0, vector{0, 1}, ""},
	{"s", 1, 0, vector{0, 0, 1}, metric},
	{"min", 60, 0, vector{0, 0, 1}, ""},
	{"h", 3600, 0, vector{0, 0, 1}, ""},
	{"rad", 1, 0, vector{0, 0, 0, 1}, metric},
	{"deg", math.Pi / 180, 0, vector{0, 0, 0, 1}, ""},
	{"°", math.Pi / 180, 0, vector{0, 0, 0, 1}, ""},
	{"turn", 2 * math.Pi, 0, vector{0, 0, 0, 1}, ""},
	{"rpm", 2 * math.Pi / 60, 0, vector{0, 0, -1, 1}, ""},
	{"Hz", 1, 0, vector{0, 0, -1}, metric},
	{"N", 1, 0, vector{1, 1, -2}, metric},
	{"Pa", 1, 0, vector{-1, 1, -2}, metric},
	{"bar", 1e5, 0, vector{-1, 1, -2}, metric},
	{"J", 1, 0, vector{2, 1, -2}, metric},
	{"W", 1, 0, vector{2, 1, -3}, metric},
	{"K", 1, 0, vector{0, 0, 0, 0, 1}, metric},
	{"degC", 1, 273.15, vector{0, 0, 0, 0, 1}, ""},
	{"B", 1, 0, vector{0, 0, 0, 0, 0, 1}, binary},
	{"g0", standardGravity, 0, vector{1, 0, -2}, ""},
	{"in", inch, 0, vector{1}, ""},
	{"ft", 12 * inch, 0, vector{1}, ""},
	{"lb", pound, 0, vector{0, 1}, ""},
	{"oz", pound / 16, 0, vector{0, 1}, ""},
	{"lbf", pound * standardGravity, 0, vector{1, 1, -2}, ""},
	{"psi", pound * standardGravity / (inch * inch), 0, vector{-1, 1, -2}, ""},
	{"%", 1e-2, 0, vector{}, ""},
	{"ppm", 1e-6, 0, vector{}, ""},
	{"1", 1, 0, vector{}, ""},
}

type prefix struct {
	name   string
	factor float64
}

var prefixes = map[string][]prefix{
	metric: {{"n", 1e-9}, {"u", 1e-6}, {"µ", 1e-6}, {"m", 1e-3}, {"c", 1e-2}, {"d", 1e-1}, {"k", 1e3}, {"M", 1e6}, {"G", 1e9}, {"T", 1e12}},
	binary: {{"k", 1e3}, {"M", 1e6}, {"G", 1e9}, {"Ki", 1 << 10}, {"Mi", 1 << 20}, {"Gi", 1 << 30}, {"Ti", 1 << 40}},
}

// dimension is a name for a vector, with the units it is shown in: the first
// is used unless a later one keeps the number at 1 or above.
type dimension struct {
	name    string
	units   []string
	example string
}

var dimensions = []dimension{
	{"number", []string{""}, "0.02"},
	{"length", []string{"mm"}, "2 mm"},
	{"area", []string{"mm2"}, "120 mm2"},
	{"volume", []string{"mm3"}, "900 mm3"},
	{"second moment of area", []string{"mm4"}, "80 mm4"},
	{"mass", []string{"g"}, "33 g"},
	{"time", []string{"s"}, "8 s"},
	{"frequency", []string{"Hz"}, "750 Hz"},
	{"angle", []string{"deg"}, "-40 deg"},
	{"rotational speed", []string{"rpm"}, "16000 rpm"},
	{"angular rate", []string{"deg/s"}, "500 deg/s"},
	{"angular acceleration", []string{"rad/s2"}, "20 rad/s2"},
	{"speed", []string{"mm/s", "m/s"}, "6.3 mm/s"},
	{"velocity", []string{"mm/s", "m/s"}, "6.3 mm/s"},
	{"acceleration", []string{"m/s2"}, "9.81 m/s2"},
	{"force", []string{"N"}, "2 N"},
	{"moment", []string{"N*m"}, "0.5 N*m"},
	{"energy", []string{"J"}, "0.2 J"},
	{"power", []string{"W"}, "300 W"},
	{"stiffness", []string{"N/mm"}, "20 N/mm"},
	{"rotational stiffness", []string{"N*m/rad"}, "3 N*m/rad"},
	{"bedding stiffness", []string{"N/mm3"}, "5000 N/mm3"},
	{"damping", []string{"N*s/m"}, "0.4 N*s/m"},
	{"rotational damping", []string{"N*m*s/rad"}, "0.001 N*m*s/rad"},
	{"density", []string{"kg/m3"}, "1550 kg/m3"},
	{"area density", []string{"kg/m2"}, "3.1 kg/m2"},
	{"linear density", []string{"kg/m"}, "0.02 kg/m"},
	{"pressure", []string{"Pa", "kPa", "MPa", "GPa"}, "70 GPa"},
	{"inertia", []string{"g*mm2", "kg*mm2"}, "1200 g*mm2"},
	{"unbalance", []string{"g*mm"}, "0.5 g*mm"},
	{"force density", []string{"N2/Hz"}, "1e-4 N2/Hz"},
	{"moment density", []string{"(N*m)2/Hz"}, "1e-8 (N*m)2/Hz"},
	{"angular rate density", []string{"(deg/s)2/Hz"}, "0.1 (deg/s)2/Hz"},
	{"acceleration density", []string{"(m/s2)2/Hz"}, "0.01 (m/s2)2/Hz"},
	{"angular rate per force", []string{"deg/s/N"}, "12 deg/s/N"},
	{"angular rate per moment", []string{"deg/s/(N*m)"}, "300 deg/s/(N*m)"},
	{"temperature", []string{"K"}, "293 K"},
	{"thermal expansion", []string{"1/K"}, "2e-6 1/K"},
	{"memory", []string{"B", "KiB", "MiB", "GiB"}, "2 GiB"},
}

// words maps what people write for a unit to its symbol; used only to suggest.
var words = map[string]string{
	"meter": "m", "meters": "m", "metre": "m", "metres": "m", "millimeter": "mm", "millimetre": "mm",
	"millimeters": "mm", "millimetres": "mm", "inch": "in", "inches": "in", `"`: "in",
	"gram": "g", "grams": "g", "gr": "g", "kilogram": "kg", "kilo": "kg", "kilos": "kg",
	"sec": "s", "secs": "s", "second": "s", "seconds": "s", "mins": "min", "minute": "min", "minutes": "min",
	"hour": "h", "hours": "h", "hr": "h", "hertz": "Hz", "cps": "Hz",
	"degree": "deg", "degrees": "deg", "dps": "deg/s", "radian": "rad", "radians": "rad",
	"rev/min": "rpm", "u/min": "rpm", "rps": "turn/s", "rev": "turn", "revs": "turn", "turns": "turn",
	"newton": "N", "newtons": "N", "nm": "N*m", "nmm": "N*mm", "gmm": "g*mm", "gcm": "g*cm",
	"pascal": "Pa", "celsius": "degC", "°c": "degC", "c": "degC", "percent": "%", "kb": "kB", "mb": "MB", "gb": "GB",
	"n/mm^2": "MPa", "mps": "m/s", "kph": "km/h", "kmh": "km/h", "pct": "%",
}

var (
	symbolByName    = map[string]symbol{}
	dimensionByName = map[string]vector{}
	nameByVector    = map[vector]string{}
	symbolNames     []string // every symbol with its common prefixes, for suggestions
)

func init() {
	for _, s := range symbols {
		symbolByName[s.name] = s
		symbolNames = append(symbolNames, s.name)
	}
	for _, s := range symbols {
		for _, p := range prefixes[s.prefixes] {
			if _, taken := symbolByName[p.name+s.name]; taken {
				continue
			}
			symbolByName[p.name+s.name] = symbol{p.name + s.name, p.factor * s.factor, 0, s.dim, ""}
			symbolNames = append(symbolNames, p.name+s.name)
		}
	}
	for _, d := range dimensions {
		u, err := ParseUnit(d.units[0])
		if err != nil {
			panic("quantity: " + err.Error())
		}
		dimensionByName[d.name] = u.dim
		if _, taken := nameByVector[u.dim]; !taken {
			nameByVector[u.dim] = d.name
		}
	}
}

// Dimensions lists the named dimensions, sorted.
func Dimensions() []string {
	var names []string
	for _, d := range dimensions {
		names = append(names, d.name)
	}
	sort.Strings(names)
	return names
}
