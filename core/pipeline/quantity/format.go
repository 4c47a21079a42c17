package quantity

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/stage"
)

// Format writes an SI value in a unit with five significant digits, short and
// readable: "23.4 Hz". An empty unit means the natural one of the dimension.
// It panics when the unit does not measure the dimension, a mistake of the
// program; a unit that a user chose is checked with ParseUnit and Is.
func Format(si float64, dimension, unit string) string {
	u := mustUnit(si, dimension, unit)
	return join(number(u.Number(si), 5), u.Symbol)
}

// FormatChange writes a difference of two SI values with its sign: "+3.4 Hz".
func FormatChange(si float64, dimension, unit string) string {
	u := mustUnit(si, dimension, unit)
	x := number(si/u.Factor, 5)
	if si >= 0 {
		x = "+" + x
	}
	return join(x, u.Symbol)
}

// Exact writes a quantity so that Parse gives back the same SI value to the
// last bit: in its natural unit if that is possible, otherwise in SI units.
func Exact(q stage.Quantity) string {
	unit := naturalFor(q.SI, q.Dimension)
	if u, err := ParseUnit(unit); err == nil {
		for digits := 15; digits <= 17; digits++ {
			text := number(u.Number(q.SI), digits)
			if x, err := strconv.ParseFloat(text, 64); err == nil && u.SI(x) == q.SI {
				return join(text, unit)
			}
		}
	}
	return join(strconv.FormatFloat(q.SI, 'g', -1, 64), siUnit(q.Dimension))
}

// In gives a quantity as a number in a unit.
func In(q stage.Quantity, unit string) (float64, error) {
	u, err := ParseUnit(unit)
	if err != nil {
		return 0, err
	}
	if !u.Is(q.Dimension) {
		return 0, fault.New(fault.Input, "%s has no number in %q", article(q.Dimension), unit).
			Do("name a unit of it, such as %q", Natural(q.Dimension))
	}
	return u.Number(q.SI), nil
}

// Same reports whether two names stand for one dimension.
func Same(a, b string) bool {
	v, ok := lookup(a)
	w, ok2 := lookup(b)
	return ok && ok2 && v == w
}

// Known reports whether a name or unit stands for a dimension; the error names
// the nearest.
func Known(dimension string) error {
	if _, ok := lookup(dimension); ok {
		return nil
	}
	e := fault.New(fault.Input, "there is no dimension %q", dimension)
	if near := nearest.Name(dimension, Dimensions()); near != "" {
		return e.Do("did you mean %q?", near)
	}
	return e.Do("one of: %s", strings.Join(Dimensions(), ", "))
}

// Natural is the unit in which a dimension is usually written.
func Natural(dimension string) string {
	if d, ok := named(dimension); ok {
		return d.units[0]
	}
	return siUnit(dimension)
}

// Example is a typical quantity of the dimension.
func Example(dimension string) string {
	if d, ok := named(dimension); ok {
		return d.example
	}
	return "1 " + siUnit(dimension)
}

// Article names a dimension with its article: "a length", "an angle".
func Article(dimension string) string { return article(dimension) }

func article(dimension string) string {
	if _, ok := named(dimension); !ok {
		return "a quantity in " + siUnit(dimension)
	}
	if dimension == "memory" {
		return "an amount of memory"
	}
	if strings.ContainsRune("aeiou", rune(dimension[0])) {
		return "an " + dimension
	}
	return "a " + dimension
}

// Canonical is the first name of the dimension that a name or unit stands for.
func Canonical(dimension string) string {
	v, ok := lookup(dimension)
	if !ok {
		panic("quantity: there is no dimension " + strconv.Quote(dimension))
	}
	return nameOf(v)
}

func named(name string) (dimension, bool) {
	for _, d := range dimensions {
		if d.name == name {
			return d, true
		}
	}
	v, ok := lookup(name)
	if !ok {
		return dimension{}, false
	}
	for _, d := range dimensions {
		if d.name == nameByVector[v] {
			return d, true
		}
	}
	return dimension{}, false
}

func lookup(name string) (vector, bool) {
	if v, ok := dimensionByName[name]; ok {
		return v, true
	}
	u, err := ParseUnit(name)
	return u.dim, err == nil
}

func nameOf(v vector) string {
	if n, ok := nameByVector[v]; ok {
		return n
	}
	return baseUnits(v)
}

func siUnit(dimension string) string {
	v, _ := lookup(dimension)
	if v == dimensionByName["frequency"] {
		return "Hz"
	}
	return baseUnits(v)
}

func baseUnits(v vector) string {
	var over, under []string
	for i, n := range v {
		if n == 0 {
			continue
		}
		p := baseSymbols[i]
		m := int(n)
		if m < 0 {
			m = -m
		}
		if m > 1 {
			p += strconv.Itoa(m)
		}
		if n > 0 {
			over = append(over, p)
		} else {
			under = append(under, p)
		}
	}
	if len(over) == 0 {
		if len(under) == 0 {
			return ""
		}
		over = []string{"1"}
	}
	s := strings.Join(over, "*")
	for _, u := range under {
		s += "/" + u
	}
	return s
}

// naturalFor picks among the natural units the last that keeps the number at 1
// or above.
func naturalFor(si float64, dimension string) string {
	d, ok := named(dimension)
	if !ok {
		return siUnit(dimension)
	}
	best := d.units[0]
	for _, s := range d.units[1:] {
		u, err := ParseUnit(s)
		if err != nil {
			panic("quantity: " + err.Error())
		}
		if math.Abs(u.Number(si)) >= 1 && !math.IsInf(si, 0) {
			best = s
		}
	}
	return best
}

func mustUnit(si float64, dimension, unit string) Unit {
	if err := Known(dimension); err != nil {
		panic("quantity: " + err.Error())
	}
	if unit == "" {
		unit = naturalFor(si, dimension)
	}
	u, err := ParseUnit(unit)
	if err != nil {
		panic("quantity: " + err.Error())
	}
	if !u.Is(dimension) {
		panic(fmt.Sprintf("quantity: %q is no unit of %s", unit, dimension))
	}
	return u
}

func join(number, unit string) string {
	if unit == "" {
		return number
	}
	return number + " " + unit
}

// number writes significant digits without trailing zeros, as a plain decimal
// where that is readable.
func number(x float64, digits int) string {
	if math.IsNaN(x) {
		return "not a number"
	}
	if math.IsInf(x, 0) {
		if x > 0 {
			return "infinite"
		}
		return "-infinite"
	}
	if x == 0 {
		return "0"
	}
	e := strconv.FormatFloat(x, 'e', digits-1, 64)
	mantissa, power, _ := strings.Cut(e, "e")
	n, _ := strconv.Atoi(power)
	if n >= -4 && n < max(digits, 7) {
		s := strconv.FormatFloat(x, 'f', max(0, digits-1-n), 64)
		if digits-1-n < 0 { // more digits before the point than are significant
			y, _ := strconv.ParseFloat(e, 64)
			s = strconv.FormatFloat(y, 'f', 0, 64)
		}
		if strings.Contains(s, ".") {
			s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
		}
		return s
	}
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimRight(strings.TrimRight(mantissa, "0"), ".")
	}
	return mantissa + "e" + strconv.Itoa(n)
}
