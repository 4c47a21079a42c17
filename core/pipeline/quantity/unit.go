package quantity

import (
	"fmt"
	"math"
	"strings"
	"unicode"
	"unicode/utf8"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
)

// Unit is a parsed unit: SI value = Factor*number + Offset. The offset is 0
// but for degrees Celsius standing alone.
type Unit struct {
	Symbol string
	Factor float64
	Offset float64
	dim    vector
}

// Dimension names the dimension of the unit; see the package doc.
func (u Unit) Dimension() string { return nameOf(u.dim) }

// SI gives the SI value of a number in this unit.
func (u Unit) SI(x float64) float64 { return x*u.Factor + u.Offset }

// Number gives the number that an SI value is in this unit.
func (u Unit) Number(si float64) float64 { return (si - u.Offset) / u.Factor }

// Is reports whether the unit measures a dimension.
func (u Unit) Is(dimension string) bool {
	v, ok := lookup(dimension)
	return ok && v == u.dim
}

// ParseUnit reads a unit, such as "mm", "kg/m3" or "(N*m)^2/Hz". The empty text
// is the unit of a pure number.
func ParseUnit(text string) (Unit, error) {
	u := Unit{Symbol: strings.TrimSpace(text), Factor: 1}
	if u.Symbol == "" {
		return u, nil
	}
	if len(u.Symbol) > longestUnit {
		return Unit{}, fault.New(fault.Input, "a unit is shorter than %d characters", longestUnit).
			Do(`write a unit such as "mm" or "kg/m3"`)
	}
	p := unitParser{rest: []rune(normal.Replace(u.Symbol)), whole: u.Symbol}
	f, v, err := p.product(0)
	if err == nil && len(p.rest) > 0 {
		err = p.fail("%q is not expected here", string(p.rest[0]))
	}
	if err != nil {
		return Unit{}, err
	}
	u.Factor, u.dim = f, v
	if s, ok := symbolByName[u.Symbol]; ok {
		u.Offset = s.offset
	} else if p.offset {
		return Unit{}, fault.New(fault.Input, "degC counts from the ice point and cannot be part of %q", u.Symbol).
			Do("write K in products and quotients")
	}
	if f == 0 || math.IsInf(f, 0) || math.IsNaN(f) {
		return Unit{}, fault.New(fault.Input, "the unit %q is beyond the range of numbers", u.Symbol).
			Do("lower its powers")
	}
	return u, nil
}

const longestUnit = 100

// normal spells alternative characters the one way the parser knows.
var normal = strings.NewReplacer("μ", "µ", "·", "*", "⋅", "*", "−", "-", "²", "2", "³", "3", "⁴", "4",
	"⁻", "-", "¹", "1", "\u00a0", " ", "\u202f", " ")

type unitParser struct {
	rest   []rune
	whole  string
	offset bool // saw a symbol with an offset
}

func (p *unitParser) fail(format string, args ...any) error {
	return fault.New(fault.Input, "the unit %q cannot be read: %s", p.whole, fmt.Sprintf(format, args...)).
		Do(`write a unit such as "mm", "N*m" or "kg/m3"`)
}

func (p *unitParser) product(depth int) (float64, vector, error) {
	f, v, err := p.power(depth)
	for err == nil && len(p.rest) > 0 && (p.rest[0] == '*' || p.rest[0] == '/') {
		sign := 1
		if p.rest[0] == '/' {
			sign = -1
		}
		p.rest = p.rest[1:]
		var g float64
		var w vector
		if g, w, err = p.power(depth); err != nil {
			break
		}
		if sign > 0 {
			f *= g
		} else {
			f /= g
		}
		if v, err = p.add(v, w, sign); err != nil {
			break
		}
	}
	return f, v, err
}

// power reads a symbol or parenthesis and the power behind it.
func (p *unitParser) power(depth int) (f float64, v vector, err error) {
	p.spaces()
	switch {
	case len(p.rest) == 0:
		return 0, v, p.fail("something is missing at its end")
	case p.rest[0] == '(':
		if depth > 3 {
			return 0, v, p.fail("too many parentheses")
		}
		p.rest = p.rest[1:]
		if f, v, err = p.product(depth + 1); err != nil {
			return 0, v, err
		}
		if len(p.rest) == 0 || p.rest[0] != ')' {
			return 0, v, p.fail("a parenthesis is not closed")
		}
		p.rest = p.rest[1:]
	default:
		s, err := p.symbol()
		if err != nil {
			return 0, v, err
		}
		f, v = s.factor, s.dim
		p.offset = p.offset || s.offset != 0
	}
	n, given, err := p.exponent()
	if err != nil {
		return 0, v, err
	}
	if given {
		f = math.Pow(f, float64(n))
		v, err = p.add(vector{}, v, n)
	}
	p.spaces()
	return f, v, err
}

func (p *unitParser) symbol() (symbol, error) {
	if p.rest[0] == '1' {
		p.rest = p.rest[1:]
		return symbolByName["1"], nil
	}
	n := 0
	for n < len(p.rest) && (unicode.IsLetter(p.rest[n]) || p.rest[n] == '°' || p.rest[n] == '%') {
		n++
	}
	name := string(p.rest[:n])
	// Standard gravity is the one symbol with a digit in it.
	if name == "g" && n < len(p.rest) && p.rest[n] == '0' {
		name, n = "g0", n+1
	}
	if n == 0 {
		return symbol{}, p.fail("%q is not expected here", string(p.rest[0]))
	}
	s, ok := symbolByName[name]
	if !ok {
		return symbol{}, unknownUnit(p.whole, name)
	}
	p.rest = p.rest[n:]
	return s, nil
}

func (p *unitParser) exponent() (n int, given bool, err error) {
	rest := p.rest
	if len(rest) > 0 && rest[0] == '^' {
		rest, given = rest[1:], true
	}
	sign := 1
	if len(rest) > 0 && (rest[0] == '-' || rest[0] == '+') {
		if rest[0] == '-' {
			sign = -1
		}
		rest, given = rest[1:], true
	}
	digits := 0
	for len(rest) > 0 && rest[0] >= '0' && rest[0] <= '9' && digits < 3 {
		n = 10*n + int(rest[0]-'0')
		digits++
		rest = rest[1:]
	}
	if digits == 0 {
		if given {
			return 0, false, p.fail("a power is a whole number")
		}
		return 0, false, nil
	}
	if n > 9 || n == 0 {
		return 0, false, p.fail("a power lies between 1 and 9")
	}
	p.rest = rest
	return sign * n, true, nil
}

func (p *unitParser) add(v, w vector, times int) (vector, error) {
	for i := range v {
		n := int(v[i]) + times*int(w[i])
		if n < -9 || n > 9 {
			return v, p.fail("its powers are too high")
		}
		v[i] = int8(n)
	}
	return v, nil
}

func (p *unitParser) spaces() {
	for len(p.rest) > 0 && unicode.IsSpace(p.rest[0]) {
		p.rest = p.rest[1:]
	}
}

func unknownUnit(whole, name string) error {
	e := fault.New(fault.Input, "there is no unit %q", name)
	if near := nearUnit(name, symbolNames); near != "" {
		return e.Do("did you mean %q?", replaceOnce(whole, name, near))
	}
	return e.Do(`write a unit such as "mm", "g", "Hz", "N*m" or "kg/m3"; a product needs a *`)
}

func nearUnit(name string, candidates []string) string {
	if u, ok := words[strings.ToLower(name)]; ok {
		return u
	}
	// Letters that differ in case alone decide first, then the nearest.
	for _, c := range candidates {
		if strings.EqualFold(c, name) && utf8.RuneCountInString(c) > 1 {
			return c
		}
	}
	return nearest.Name(name, candidates)
}

func replaceOnce(whole, old, new string) string { return strings.Replace(whole, old, new, 1) }
