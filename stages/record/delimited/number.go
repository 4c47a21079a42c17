package delimited

import (
	"math"
	"math/bits"
	"strconv"
	"unsafe"
)

// decimal is a number as written: ±mantissa·10^exponent.
type decimal struct {
	mantissa uint64
	exponent int
	negative bool
	exact    bool // the mantissa holds all digits
}

// parseDecimal reads all of a field, whose decimal mark is point. It tells whether the field is a number; infinities and
// NaN are none.
func parseDecimal(field []byte, point byte) (d decimal, ok bool) {
	i, n := 0, len(field)
	if i < n && (field[i] == '-' || field[i] == '+') {
		d.negative = field[i] == '-'
		i++
	}
	d.exact = true
	digits, fraction := false, false
	for ; i < n; i++ {
		c := field[i]
		switch {
		case c-'0' < 10:
			digits = true
			if d.mantissa >= (math.MaxUint64-9)/10 {
				d.exact = false
				if !fraction {
					d.exponent++
				}
				continue
			}
			d.mantissa = d.mantissa*10 + uint64(c-'0')
			if fraction {
				d.exponent--
			}
			continue
		case c == point && !fraction:
			fraction = true
			continue
		}
		break
	}
	if !digits {
		return d, false
	}
	if i == n {
		return d, true
	}
	if field[i] != 'e' && field[i] != 'E' {
		return d, false
	}
	i++
	down := false
	if i < n && (field[i] == '-' || field[i] == '+') {
		down = field[i] == '-'
		i++
	}
	if i == n {
		return d, false
	}
	power := 0
	for ; i < n; i++ {
		if field[i]-'0' >= 10 {
			return d, false
		}
		if power < 10000 {
			power = power*10 + int(field[i]-'0')
		}
	}
	if down {
		power = -power
	}
	d.exponent += power
	return d, true
}

// powers of ten that a float64 holds exactly.
var powers = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17,
	1e18, 1e19, 1e20, 1e21, 1e22}

// parseFloat reads all of a field, correctly rounded. A mantissa below 2^53 and a power of ten up to 22 are both exact, so
// that one multiplication or division rounds right (W. D. Clinger, How to read floating point numbers accurately, 1990);
// anything else goes to strconv.
func parseFloat(field []byte, point byte) (float64, bool) {
	d, ok := parseDecimal(field, point)
	if !ok {
		return 0, false
	}
	if d.exact && d.mantissa < 1<<53 && -len(powers) < d.exponent && d.exponent < len(powers) {
		v := float64(d.mantissa)
		if d.exponent < 0 {
			v /= powers[-d.exponent]
		} else {
			v *= powers[d.exponent]
		}
		if d.negative {
			v = -v
		}
		return v, true
	}
	if point != '.' {
		field = append([]byte(nil), field...)
		for i, c := range field {
			if c == point {
				field[i] = '.'
			}
		}
	}
	v, err := strconv.ParseFloat(unsafe.String(unsafe.SliceData(field), len(field)), 64)
	return v, err == nil
}

// quick reads a plain number of up to 15 digits at the beginning of a line, as nearly all fields are, together with the
// separator behind it. used is 0 if the field is anything else. more tells whether the separator followed.
func quick(line []byte, separator, point byte) (v float64, used int, more bool) {
	i := 0
	if i < len(line) && line[i] == '-' {
		i++
	}
	begin, mark := i, -1
	mantissa := uint64(0)
	for ; i < len(line); i++ {
		c := line[i]
		if c-'0' < 10 {
			mantissa = mantissa*10 + uint64(c-'0')
			continue
		}
		if c != point || mark >= 0 {
			break
		}
		mark = i
	}
	digits, decimals := i-begin, 0
	if mark >= 0 {
		digits--
		decimals = i - mark - 1
	}
	if digits == 0 || digits > 15 || i < len(line) && line[i] != separator {
		return 0, 0, false
	}
	v = float64(mantissa) / powers[decimals]
	if begin == 1 {
		v = -v
	}
	if i == len(line) {
		return v, i, false
	}
	return v, i + 1, true
}

// scaled returns the number times 10^places as an integer, if that is exact and leaves room for differences.
func (d decimal) scaled(places int) (int64, bool) {
	shift := d.exponent + places
	if !d.exact || shift < 0 && d.mantissa != 0 || shift > 18 {
		return 0, false
	}
	high, low := uint64(0), d.mantissa
	if shift > 0 {
		high, low = bits.Mul64(d.mantissa, uint64(math.Pow10(shift)))
	}
	if high != 0 || low > math.MaxInt64/4 {
		return 0, false
	}
	if d.negative {
		return -int64(low), true
	}
	return int64(low), true
}

// clock turns the fields of a time column into seconds since the first.
type clock struct {
	unit    float64 // seconds per unit
	point   byte
	started bool
	places  int // decimals that integers count, -1 if the first time is beyond them
	first   int64
	origin  float64     // in units
	stamps  *stampClock // for a column of times of day
}

// read returns the seconds since the first time read, which it takes note of.
func (c *clock) read(field []byte) (float64, bool) {
	if c.stamps != nil {
		since, origin, ok := c.stamps.read(field)
		if ok {
			c.origin = origin
		}
		return since * c.unit, ok
	}
	d, ok := parseDecimal(field, c.point)
	if !ok {
		return 0, false
	}
	value, ok := parseFloat(field, c.point)
	if !ok {
		return 0, false
	}
	if !c.started {
		c.started, c.origin, c.places = true, value, -1
		for _, places := range []int{9, 6, 3, 0} {
			if v, ok := d.scaled(places); ok {
				c.places, c.first = places, v
				break
			}
		}
		return 0, true
	}
	if c.places >= 0 {
		if v, ok := d.scaled(c.places); ok {
			return float64(v-c.first) / powers[c.places] * c.unit, true
		}
	}
	return (value - c.origin) * c.unit, true
}
