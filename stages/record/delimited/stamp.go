package delimited

import "time"

const day = 86400

// parseStamp reads a time of day, "12:34:56.789", or a date with it, "2026-03-01T12:34:56.789Z", in whole seconds and nanoseconds since
// midnight or since 1970. dated tells which. A time without a zone is taken in that of Greenwich: only differences count.
func parseStamp(field []byte) (seconds, nanos int64, dated, ok bool) {
	if len(field) < 7 || len(field) > 40 {
		return 0, 0, false, false
	}
	at := 0
	if len(field) > 10 && field[4] == '-' && field[7] == '-' && (field[10] == 'T' || field[10] == ' ' || field[10] == 't') {
		year, y := digits(field[:4])
		month, m := digits(field[5:7])
		d, n := digits(field[8:10])
		if !y || !m || !n || month < 1 || month > 12 || d < 1 || d > 31 {
			return 0, 0, false, false
		}
		seconds = time.Date(int(year), time.Month(month), int(d), 0, 0, 0, 0, time.UTC).Unix()
		at, dated = 11, true
	}
	rest := field[at:]
	if len(rest) > 2 && rest[1] == ':' {
		rest = append([]byte{'0'}, rest...)
	}
	if len(rest) < 8 || rest[2] != ':' || rest[5] != ':' {
		return 0, 0, false, false
	}
	hour, h := digits(rest[:2])
	minute, m := digits(rest[3:5])
	second, s := digits(rest[6:8])
	if !h || !m || !s || hour > 24 || minute > 59 || second > 60 {
		return 0, 0, false, false
	}
	seconds += 3600*hour + 60*minute + second
	rest = rest[8:]
	if len(rest) > 1 && (rest[0] == '.' || rest[0] == ',') {
		n := 1
		for n < len(rest) && rest[n]-'0' < 10 {
			n++
		}
		if n == 1 {
			return 0, 0, false, false
		}
		for k := 1; k <= 9; k++ {
			nanos *= 10
			if k < n {
				nanos += int64(rest[k] - '0')
			}
		}
		rest = rest[n:]
	}
	switch {
	case len(rest) == 0, len(rest) == 1 && (rest[0] == 'Z' || rest[0] == 'z') && dated:
		return seconds, nanos, dated, true
	case dated && (len(rest) == 6 && rest[3] == ':' || len(rest) == 5) && (rest[0] == '+' || rest[0] == '-'):
		h, a := digits(rest[1:3])
		m, b := digits(rest[len(rest)-2:])
		if !a || !b {
			return 0, 0, false, false
		}
		if rest[0] == '+' {
			h, m = -h, -m
		}
		return seconds + 3600*h + 60*m, nanos, dated, true
	}
	return 0, 0, false, false
}

func digits(b []byte) (int64, bool) {
	v := int64(0)
	for _, c := range b {
		if c-'0' >= 10 {
			return 0, false
		}
		v = 10*v + int64(c-'0')
	}
	return v, true
}

// isStamp tells whether a field is a time of day.
func isStamp(field []byte) bool {
	_, _, _, ok := parseStamp(field)
	return ok
}

// stampClock turns times of day into seconds since the first; one that goes back by more than half a day has passed midnight.
type stampClock struct {
	started bool
	dated   bool
	first   [2]int64
	last    int64
	days    int64
}

func (c *stampClock) read(field []byte) (since, origin float64, ok bool) {
	seconds, nanos, dated, ok := parseStamp(field)
	if !ok || c.started && dated != c.dated {
		return 0, 0, false
	}
	if !c.started {
		c.started, c.dated, c.first, c.last = true, dated, [2]int64{seconds, nanos}, seconds
	}
	if !dated && seconds < c.last-day/2 {
		c.days++
	}
	c.last = seconds
	since = float64(seconds+day*c.days-c.first[0]) + float64(nanos-c.first[1])/1e9
	return since, float64(c.first[0]) + float64(c.first[1])/1e9, true
}
