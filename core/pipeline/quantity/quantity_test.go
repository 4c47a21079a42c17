package quantity

import (
	"math"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// Factors: metric prefixes, minute, degree and bar from "The International System
// of Units", BIPM, 9th edition, tables 7 and 8; inch, pound, ounce, pound-force,
// psi and standard gravity from NIST SP 811, appendix B (exact or to the digits
// given there).
func TestParse(t *testing.T) {
	for _, c := range []struct {
		text, dimension string
		si              float64
	}{
		{"2 mm", "length", 0.002},
		{"2mm", "length", 0.002},
		{" -40 deg ", "angle", -40 * math.Pi / 180},
		{"−40°", "angle", -40 * math.Pi / 180},
		{"1e3 Hz", "frequency", 1000},
		{"1.5e-3m", "length", 0.0015},
		{".5 kHz", "frequency", 500},
		{"+5. s", "time", 5},
		{"33 g", "mass", 0.033},
		{"1 t", "mass", 1000},
		{"16000 rpm", "rotational speed", 16000 * 2 * math.Pi / 60},
		{"1 turn/s", "rotational speed", 2 * math.Pi},
		{"500 deg/s", "rotational speed", 500 * math.Pi / 180},
		{"6.3 mm/s", "speed", 0.0063},
		{"70 GPa", "pressure", 7e10},
		{"70 kN/mm2", "pressure", 7e10},
		{"70 kN/mm²", "pressure", 7e10},
		{"70 kN/mm^2", "pressure", 7e10},
		{"70 kN*mm-2", "pressure", 7e10},
		{"70 kN·mm⁻²", "pressure", 7e10},
		{"70 kN/mm/mm", "pressure", 7e10},
		{"1550 kg/m3", "density", 1550},
		{"1.55 g/cm3", "density", 1550},
		{"2 N/mm", "stiffness", 2000},
		{"3 N*m/rad", "rotational stiffness", 3},
		{"0.5 N*m", "moment", 0.5},
		{"0.5 J", "moment", 0.5}, // one vector, named first as moment
		{"0.5 g*mm", "unbalance", 0.5e-6},
		{"1200 g*mm2", "inertia", 1.2e-6},
		{"1e-4 N2/Hz", "force density", 1e-4},
		{"1e-8 (N*m)2/Hz", "moment density", 1e-8},
		{"1e-8 (N*m)^2/Hz", "moment density", 1e-8},
		{"1 (deg/s)2/Hz", "angular rate density", math.Pi * math.Pi / 180 / 180},
		{"12 deg/s/N", "angular rate per force", 12 * math.Pi / 180},
		{"2e-6 1/K", "thermal expansion", 2e-6},
		{"20 degC", "temperature", 293.15},
		{"2 GiB", "memory", 2 << 30},
		{"512 MB", "memory", 512e6},
		{"2 %", "number", 0.02},
		{"0.02", "number", 0.02},
		{"1 min", "time", 60},
		{"9 in", "length", 0.2286},
		{"1 lb", "mass", 0.45359237},
		{"16 oz", "mass", 0.45359237},
		{"1 lbf", "force", 4.4482216152605},
		{"1 psi", "pressure", 6894.757},
		{"2 g0", "acceleration", 19.6133},
		{"1 bar", "pressure", 1e5},
		{"5 µm", "length", 5e-6},
		{"5 um", "length", 5e-6},
		{"3 kg*m/s", "m*kg/s", 3},
		{"10\u00a0mm", "length", 0.01},
	} {
		q, err := Parse(c.text)
		if err != nil {
			t.Errorf("%q: %v", c.text, err)
			continue
		}
		tol := 1e-15
		if c.text == "1 psi" {
			tol = 1e-7 // the source gives seven digits
		}
		if q.Dimension != c.dimension || math.Abs(q.SI-c.si) > tol*math.Abs(c.si) {
			t.Errorf("%q is %v %s, not %v %s", c.text, q.SI, q.Dimension, c.si, c.dimension)
		}
		if p, err := ParseAs(c.text, c.dimension); err != nil || p.SI != q.SI {
			t.Errorf("%q as %s: %v %v", c.text, c.dimension, p, err)
		}
	}
}

func TestParseErrors(t *testing.T) {
	for _, c := range []struct{ text, dimension, want string }{
		{"3 mms", "length", `there is no unit "mms"; did you mean "mm"?`},
		{"3 MM", "length", `there is no unit "MM"; did you mean "mm"?`},
		{"3 hz", "frequency", `there is no unit "hz"; did you mean "Hz"?`},
		{"3 gpa", "pressure", `there is no unit "gpa"; did you mean "GPa"?`},
		{"3 Nm", "moment", `there is no unit "Nm"; did you mean "N*m"?`},
		{"3 grams", "mass", `there is no unit "grams"; did you mean "g"?`},
		{"3 kgs/m3", "density", `there is no unit "kgs"; did you mean "kg/m3"?`},
		{"3 Nm/rad", "rotational stiffness", `there is no unit "Nm"; did you mean "N*m/rad"?`},
		{"3 furlongs", "length", `there is no unit "furlongs"; a length is due, such as "2 mm"`},
		{"3", "length", `"3" has no unit, but a length is due; write the unit, such as "3 mm"`},
		{"", "length", `"" does not start with a number; a length is due, such as "2 mm"`},
		{"mm", "length", `"mm" does not start with a number; a length is due, such as "2 mm"`},
		{"2,5 mm", "length", `the number in "2,5 mm" cannot be read; write it with a decimal point and without separators, such as "2.5 mm" or "16000 rpm"`},
		{"16 000 rpm", "rotational speed", `the number in "16 000 rpm" cannot be read; write it with a decimal point and without separators, such as "2.5 mm" or "16000 rpm"`},
		{"1.2.3 mm", "length", `the number in "1.2.3 mm" cannot be read; write it with a decimal point and without separators, such as "2.5 mm" or "16000 rpm"`},
		{"1e999 mm", "length", `"1e999" is beyond the range of numbers; check the exponent`},
		{"1e308 km", "length", `"1e308 km" is beyond the range of numbers; check the exponent`},
		{"2 Hz", "length", `"2 Hz" is a frequency, but a length is due; write one such as "2 mm"`},
		{"250 Hz", "rotational speed", `"250 Hz" is a frequency, but a rotational speed is due; Hz counts cycles of a vibration; write turns in rpm: 250 turns per second are "15000 rpm"`},
		{"15000 rpm", "frequency", `"15000 rpm" is a rotational speed, but a frequency is due; rpm counts turns of a rotor; write cycles in Hz: one cycle per turn is "250 Hz"`},
		{"2 g", "acceleration", `"2 g" is a mass, but an acceleration is due; g is the gram; write "g0" for standard gravity, or m/s2`},
		{"2 N*m", "rotational stiffness", `"2 N*m" is a moment, but a rotational stiffness is due; write one such as "3 N*m/rad"`},
		{"2 mm", "memory", `"2 mm" is a length, but an amount of memory is due; write one such as "2 GiB"`},
		{"2 m*rad", "length", `"2 m*rad" is a quantity in m*rad, but a length is due; write one such as "2 mm"`},
		{"2 N m", "moment", `the unit "N m" cannot be read: "m" is not expected here; a moment is due, such as "0.5 N*m"`},
		{"2 N*", "moment", `the unit "N*" cannot be read: something is missing at its end; a moment is due, such as "0.5 N*m"`},
		{"2 (N", "force", `the unit "(N" cannot be read: a parenthesis is not closed; a force is due, such as "2 N"`},
		{"2 m^x", "length", `the unit "m^x" cannot be read: a power is a whole number; a length is due, such as "2 mm"`},
		{"2 m12", "length", `the unit "m12" cannot be read: a power lies between 1 and 9; a length is due, such as "2 mm"`},
		{"2 W/degC", "power", `degC counts from the ice point and cannot be part of "W/degC"; a power is due, such as "300 W"`},
		{"NaN mm", "length", `"NaN mm" does not start with a number; a length is due, such as "2 mm"`},
	} {
		_, err := ParseAs(c.text, c.dimension)
		if err == nil {
			t.Errorf("%q passes as %s", c.text, c.dimension)
			continue
		}
		if got := err.Error(); got != c.want {
			t.Errorf("%q as %s:\n got %s\nwant %s", c.text, c.dimension, got, c.want)
		}
		if fault.KindOf(err) != fault.Input {
			t.Errorf("%q: kind %s", c.text, fault.KindOf(err))
		}
	}
}

func TestFormat(t *testing.T) {
	for _, c := range []struct {
		si              float64
		dimension, unit string
		want, change    string
	}{
		{0.002, "length", "", "2 mm", "+2 mm"},
		{0.00215, "length", "", "2.15 mm", "+2.15 mm"},
		{23.456789, "frequency", "", "23.457 Hz", "+23.457 Hz"},
		{-3.4, "frequency", "Hz", "-3.4 Hz", "-3.4 Hz"},
		{123456.7, "frequency", "Hz", "123460 Hz", "+123460 Hz"},
		{1234567890, "frequency", "Hz", "1.2346e9 Hz", "+1.2346e9 Hz"},
		{7e10, "pressure", "", "70 GPa", "+70 GPa"},
		{5e6, "pressure", "", "5 MPa", "+5 MPa"},
		{1e-9, "force density", "", "1e-9 N2/Hz", "+1e-9 N2/Hz"},
		{2 << 30, "memory", "", "2 GiB", "+2 GiB"},
		{293.15, "temperature", "degC", "20 degC", "+293.15 degC"},
		{0, "mass", "", "0 g", "+0 g"},
		{0.5, "number", "", "0.5", "+0.5"},
		{1.0 / 3, "number", "", "0.33333", "+0.33333"},
		{math.Inf(1), "frequency", "", "infinite Hz", "+infinite Hz"},
		{12, "kg*m/s", "", "12 m*kg/s", "+12 m*kg/s"},
		{math.Pi * 2, "angular rate", "", "360 deg/s", "+360 deg/s"},
		{math.Pi * 2, "rotational speed", "", "60 rpm", "+60 rpm"},
	} {
		if got := Format(c.si, c.dimension, c.unit); got != c.want {
			t.Errorf("%v %s shows as %q, not %q", c.si, c.dimension, got, c.want)
		}
		if got := FormatChange(c.si, c.dimension, c.unit); got != c.change {
			t.Errorf("%v %s shows as %q, not %q", c.si, c.dimension, got, c.change)
		}
	}
}

func TestExactReadsBack(t *testing.T) {
	// A fixed linear congruential sequence; the values only need variety.
	state := uint64(1)
	for range 2000 {
		state = state*6364136223846793005 + 1442695040888963407
		x := math.Ldexp(float64(state>>11), int(state%80)-90)
		for _, d := range []string{"length", "angle", "rotational speed", "pressure", "number", "moment density", "temperature"} {
			text := Exact(stage.Quantity{SI: x, Dimension: d})
			q, err := ParseAs(text, d)
			if err != nil || q.SI != x {
				t.Fatalf("%v %s is written %q and read as %v (%v)", x, d, text, q.SI, err)
			}
		}
	}
	for _, text := range []string{"5 mm", "0.1 mm", "-40 deg", "16000 rpm", "70 GPa", "3.141592653589793 mm", "0.30000000000000004"} {
		q, err := Parse(text)
		if err != nil {
			t.Fatal(err)
		}
		if got := Exact(q); got != text {
			t.Errorf("%q is written as %q", text, got)
		}
	}
}

func TestDimensions(t *testing.T) {
	for _, d := range dimensions {
		q, err := ParseAs(d.example, d.name)
		if err != nil {
			t.Errorf("the example of %s: %v", d.name, err)
		}
		for _, unit := range d.units {
			if u, err := ParseUnit(unit); err != nil || !u.Is(d.name) {
				t.Errorf("%q is no unit of %s", unit, d.name)
			}
		}
		if si := baseUnits(dimensionByName[d.name]); !Same(d.name, si) {
			t.Errorf("%s has the SI unit %q of another dimension", d.name, si)
		}
		if got := Format(q.SI, d.name, ""); got == "" {
			t.Errorf("%s shows as nothing", d.name)
		}
	}
	if !Same("speed", "velocity") || !Same("angular rate", "rotational speed") || Same("frequency", "rotational speed") ||
		Same("moment", "rotational stiffness") || !Same("stiffness", "N/m") {
		t.Error("dimensions are mixed up")
	}
	err := Known("lenght")
	if err == nil || !strings.Contains(err.Error(), `did you mean "length"?`) {
		t.Errorf("got %v", err)
	}
	if x, err := In(stage.Quantity{SI: 0.02, Dimension: "length"}, "mm"); err != nil || x != 20 {
		t.Errorf("2 cm are %v mm (%v)", x, err)
	}
	if _, err := In(stage.Quantity{SI: 0.02, Dimension: "length"}, "Hz"); err == nil {
		t.Error("a length has a number in Hz")
	}
}

func TestWordsAreUnits(t *testing.T) {
	for word, unit := range words {
		if _, err := ParseUnit(unit); err != nil {
			t.Errorf("%q stands for %q: %v", word, unit, err)
		}
		if word != strings.ToLower(word) {
			t.Errorf("%q is looked up in lower case", word)
		}
	}
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"2 mm", "-1.5e-3 kg/m3", "(N*m)^2/Hz", "1 (deg/s)2/Hz", "2 %", "20 degC", "1/K", "5 1/K", "𝛑 mm", "1e3e3", "2 g0-2", "3 ((((m))))", "1 m²³", "-", "+.e", "0(B2)7"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		q, err := Parse(text)
		if err != nil {
			if fault.KindOf(err) != fault.Input {
				t.Fatalf("%q: %v", text, err)
			}
			return
		}
		if math.IsNaN(q.SI) || math.IsInf(q.SI, 0) {
			t.Fatalf("%q is %v", text, q.SI)
		}
		back, err := ParseAs(Exact(q), q.Dimension)
		if err != nil || math.Abs(back.SI-q.SI) > 1e-15*math.Abs(q.SI) {
			t.Fatalf("%q is written %q and read as %v (%v)", text, Exact(q), back, err)
		}
		_ = Format(q.SI, q.Dimension, "")
		_ = Mismatch(text, q, "length")
	})
}

func BenchmarkParse(b *testing.B) {
	for b.Loop() {
		if _, err := Parse("1550 kg/m3"); err != nil {
			b.Fatal(err)
		}
	}
}
