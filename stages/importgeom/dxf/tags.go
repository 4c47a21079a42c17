package dxf

import (
	"bytes"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"hushframe/core/pipeline/fault"
)

// tag is a group code with its value; line is that of the code, from 1.
type tag struct {
	code  int
	value string
	line  int
}

// record is an entity or the like: the tag with code 0 and all up to the next one.
type record struct {
	kind string
	line int
	tags []tag
	// below holds the vertices of a POLYLINE.
	below []record
}

// largest is the size of number beyond which a coordinate is taken for damage.
const largest = 1e12

// binaryMark is what every binary drawing has in its first 22 bytes.
var binaryMark = []byte(" Binary DXF\r\n\x1a\x00")

// records splits a drawing into records by section: name to records, in the order of the file. Header variables
// come as one record per variable under "HEADER". cut reports a file that ends before its end mark.
func records(data []byte) (sections map[string][]record, cut bool, err *fault.Error) {
	if bytes.Contains(data[:min(len(data), 32)], binaryMark) {
		return nil, false, fault.New(fault.Input, "this is a binary DXF drawing").
			Do("save it as ASCII DXF, of any release")
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	if len(bytes.TrimSpace(data)) == 0 {
		return nil, false, fault.New(fault.Input, "the file is empty").Do("export the drawing again as ASCII DXF")
	}
	sections = map[string][]record{}
	section, opening, header, line := "", false, false, 0
	for {
		code, rest, ok := nextLine(data)
		if !ok {
			return sections, true, nil
		}
		at := line + 1
		line += 2
		value, rest, ok := nextLine(rest)
		if !ok && strings.TrimSpace(code) == "" {
			return sections, true, nil
		}
		n, bad := strconv.Atoi(strings.TrimSpace(code))
		if bad != nil {
			return nil, false, notDXF(at, code)
		}
		if !ok {
			return sections, true, nil
		}
		data = rest
		switch {
		case n == 999: // a remark
		case n == 0:
			kind := strings.ToUpper(strings.TrimSpace(value))
			opening = kind == "SECTION"
			switch {
			case kind == "EOF":
				return sections, false, nil
			case opening || kind == "ENDSEC":
				section, header = "", false
			case section != "":
				sections[section] = append(sections[section], record{kind: kind, line: at})
			}
		case n == 2 && opening:
			section, opening = strings.ToUpper(strings.TrimSpace(value)), false
			header = section == "HEADER"
			if sections[section] == nil {
				sections[section] = []record{}
			}
		case header && n == 9:
			sections[section] = append(sections[section], record{kind: strings.ToUpper(strings.TrimSpace(value)), line: at})
		case len(sections[section]) > 0:
			last := &sections[section][len(sections[section])-1]
			last.tags = append(last.tags, tag{n, value, at})
		}
	}
}

func notDXF(line int, text string) *fault.Error {
	text = strings.TrimSpace(printable(text))
	if len(text) > 30 {
		text = text[:30] + "..."
	}
	return fault.New(fault.Input, "%q is no group code: the file is no DXF drawing, or damaged", text).
		At("line %d", line).Do("export the drawing again as ASCII DXF")
}

// nextLine takes one line off data, without its end (LF, CRLF or CR).
func nextLine(data []byte) (line string, rest []byte, ok bool) {
	if len(data) == 0 {
		return "", nil, false
	}
	i := bytes.IndexAny(data, "\r\n")
	if i < 0 {
		return string(data), nil, true
	}
	end := i + 1
	if data[i] == '\r' && end < len(data) && data[end] == '\n' {
		end++
	}
	return string(data[:i]), data[end:], true
}

// printable gives text as UTF-8: unchanged if it is, else byte by byte as Latin-1, which covers the code pages of
// most older drawings well enough for a layer name. Characters written as \U+ and four hexadecimal digits are resolved.
func printable(s string) string {
	if !utf8.ValidString(s) {
		var b strings.Builder
		for i := 0; i < len(s); i++ {
			b.WriteRune(rune(s[i]))
		}
		s = b.String()
	}
	const mark, digits = `\U+`, 4
	for from := 0; ; {
		i := strings.Index(s[from:], mark)
		if i < 0 || from+i+len(mark)+digits > len(s) {
			return s
		}
		i += from
		end := i + len(mark) + digits
		if n, err := strconv.ParseUint(s[i+len(mark):end], 16, 16); err == nil {
			s = s[:i] + string(rune(n)) + s[end:]
		}
		from = i + 1
	}
}

// text gives the first value of a group code.
func (r record) text(code int) string {
	for _, t := range r.tags {
		if t.code == code {
			return printable(strings.TrimSpace(t.value))
		}
	}
	return ""
}

func (r record) has(code int) bool {
	for _, t := range r.tags {
		if t.code == code {
			return true
		}
	}
	return false
}

// real gives the first value of a group code as a number, or missing when there is none.
func (r record) real(code int, missing float64) (float64, *fault.Error) {
	for _, t := range r.tags {
		if t.code == code {
			return t.real()
		}
	}
	return missing, nil
}

func (t tag) real() (float64, *fault.Error) {
	x, err := strconv.ParseFloat(strings.TrimSpace(t.value), 64)
	if err != nil || math.IsNaN(x) || math.Abs(x) > largest {
		return 0, fault.New(fault.Input, "%q (group code %d) is not a usable number", printable(strings.TrimSpace(t.value)), t.code).
			At("line %d", t.line+1).Do("export the drawing again")
	}
	return x, nil
}

// whole gives the first value of a group code as a whole number, or missing when there is none.
func (r record) whole(code, missing int) (int, *fault.Error) {
	x, err := r.real(code, float64(missing))
	return int(x), err
}

// reals gives several values at once; absent ones are 0.
func (r record) reals(codes ...int) ([]float64, *fault.Error) {
	out := make([]float64, len(codes))
	for i, c := range codes {
		x, err := r.real(c, 0)
		if err != nil {
			return nil, err
		}
		out[i] = x
	}
	return out, nil
}
