package quantity

import (
	"math"
	"strconv"
	"strings"
	"unicode"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// Parse reads a number with a unit. The dimension is that of the unit, by its
// first name.
func Parse(text string) (stage.Quantity, error) {
	x, u, err := Split(text)
	if err != nil {
		return stage.Quantity{}, err
	}
	si := u.SI(x)
	if math.IsInf(si, 0) {
		return stage.Quantity{}, fault.New(fault.Input, "%q is beyond the range of numbers", text).Do("check the exponent")
	}
	return stage.Quantity{SI: si, Dimension: u.Dimension()}, nil
}

// ParseAs reads a number with a unit of a given dimension. The error says which
// dimension the text has and which unit would be right.
func ParseAs(text, dimension string) (stage.Quantity, error) {
	due, ok := lookup(dimension)
	if !ok {
		panic("quantity: there is no dimension " + strconv.Quote(dimension))
	}
	x, u, err := Split(text)
	if err != nil {
		return stage.Quantity{}, sharpen(err, text, dimension)
	}
	if u.dim != due {
		return stage.Quantity{}, Mismatch(text, stage.Quantity{SI: u.SI(x), Dimension: u.Dimension()}, dimension)
	}
	si := u.SI(x)
	if math.IsInf(si, 0) {
		return stage.Quantity{}, fault.New(fault.Input, "%q is beyond the range of numbers", text).Do("check the exponent")
	}
	return stage.Quantity{SI: si, Dimension: dimension}, nil
}

// Looks reports whether a text reads as a quantity with a unit (not as a bare
// number).
func Looks(text string) bool {
	_, u, err := Split(text)
	return err == nil && u.Symbol != ""
}

// Split separates a quantity into the number and the unit it is written with.
// A text without a unit has the unit of pure numbers.
func Split(text string) (float64, Unit, error) {
	t := strings.TrimSpace(strings.Replace(text, "−", "-", 1))
	n := numberEnd(t)
	if n == 0 {
		e := fault.New(fault.Input, "%q does not start with a number", shorten(text))
		return 0, Unit{}, e.Do(`write a number and a unit, such as "2 mm"`)
	}
	x, err := strconv.ParseFloat(t[:n], 64)
	if err != nil {
		return 0, Unit{}, fault.New(fault.Input, "%q is beyond the range of numbers", t[:n]).Do("check the exponent")
	}
	rest := strings.TrimLeftFunc(t[n:], unicode.IsSpace)
	if rest != "" && (rest[0] == ',' || rest[0] == '_' || rest[0] == '.' || rest[0] == '\'' || rest[0] >= '0' && rest[0] <= '9') {
		if rest[0] != '1' || !strings.HasPrefix(strings.TrimSpace(rest[1:]), "/") { // "2e-6 1/K"
			return 0, Unit{}, fault.New(fault.Input, "the number in %q cannot be read", shorten(text)).
				Do(`write it with a decimal point and without separators, such as "2.5 mm" or "16000 rpm"`)
		}
	}
	u, err := ParseUnit(rest)
	return x, u, err
}

// numberEnd gives the length of the decimal number at the start, 0 if none.
func numberEnd(t string) int {
	i, digits := 0, 0
	if i < len(t) && (t[i] == '+' || t[i] == '-') {
		i++
	}
	for seen := false; i < len(t); i++ {
		if t[i] == '.' && !seen {
			seen = true
		} else if t[i] < '0' || t[i] > '9' {
			break
		} else {
			digits++
		}
	}
	if digits == 0 {
		return 0
	}
	if i < len(t) && (t[i] == 'e' || t[i] == 'E') {
		j := i + 1
		if j < len(t) && (t[j] == '+' || t[j] == '-') {
			j++
		}
		if k := j; k < len(t) && t[k] >= '0' && t[k] <= '9' {
			for k < len(t) && t[k] >= '0' && t[k] <= '9' {
				k++
			}
			i = k
		}
	}
	return i
}

func shorten(text string) string {
	r := []rune(text)
	if len(r) > 40 {
		return string(r[:37]) + "..."
	}
	return text
}

// sharpen adds to a fault of Parse what the due dimension tells.
func sharpen(err error, text, dimension string) error {
	f := fault.From(err)
	if !strings.HasPrefix(f.Remedy, "write a ") && !strings.HasPrefix(f.Remedy, "write K") {
		return f
	}
	return f.Do("%s is due, such as %q", article(dimension), Example(dimension))
}

// Mismatch is the fault of a quantity where another dimension is due. The text
// is what the user wrote, or "".
func Mismatch(text string, q stage.Quantity, dimension string) *fault.Error {
	if text == "" {
		text = Exact(q)
	}
	got, _ := lookup(q.Dimension)
	due, _ := lookup(dimension)
	if got == (vector{}) {
		bare := strings.TrimSpace(text)
		return fault.New(fault.Input, "%q has no unit, but %s is due", shorten(text), article(dimension)).
			Do("write the unit, such as %q", bare+" "+Natural(dimension))
	}
	e := fault.New(fault.Input, "%q is %s, but %s is due", shorten(text), article(q.Dimension), article(dimension))
	frequency, turning := dimensionByName["frequency"], dimensionByName["rotational speed"]
	switch {
	case got == frequency && due == turning:
		return e.Do("Hz counts cycles of a vibration; write turns in rpm: %s turns per second are %q",
			number(q.SI, 5), Format(q.SI*2*math.Pi, "rotational speed", "rpm"))
	case got == turning && due == frequency:
		return e.Do("rpm counts turns of a rotor; write cycles in Hz: one cycle per turn is %q",
			Format(q.SI/(2*math.Pi), "frequency", "Hz"))
	case got == dimensionByName["mass"] && due == dimensionByName["acceleration"]:
		return e.Do(`g is the gram; write "g0" for standard gravity, or m/s2`)
	}
	return e.Do("write one such as %q", Example(dimension))
}
