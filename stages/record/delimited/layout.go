package delimited

import (
	"bytes"
	"fmt"
	"strings"

	"hushframe/core/pipeline/quantity"
	"hushframe/core/signal/recording"
)

// layout is how the fields of a recording are found.
type layout struct {
	separator byte // blank means any number of blanks and tabs
	point     byte // decimal mark
	fields    int  // usual number of fields of a row
	first     int  // line of the first row, from 0
	names     []string
	units     []string
	text      []bool  // fields that hold something else than numbers
	stamp     []bool  // fields that hold times of day
	idle      bool    // the last field is always empty
	named     bool    // the names are those of the recording
	rate      float64 // stated above the rows, Hz; 0 for none
	rates     bool    // several are, and they differ
}

const blank = ' '

// ownSeparator is what a candidate of another separator than the usual ones is called.
const ownSeparator = "the character given"

type separatorName struct {
	name string
	mark byte
}

var separatorNames = []separatorName{{"comma", ','}, {"semicolon", ';'}, {"tab", '\t'}, {"bar", '|'}, {"blank", blank}}

// candidate is one way to cut the sample, with what it finds.
type candidate struct {
	separator, point byte
	cells            [][][]byte // by line; nil for empty lines and comments
	fields           int
	numeric          []bool
	valid            bool // some line is a row
	score            int  // two for each number of a row, less one for each text
}

// guess finds the layout of a sample: the lines at the beginning of a recording, without their ends. separator is one of
// separatorNames or 0 to try all. ok is false if no line holds a number.
func guess(lines [][]byte, separator byte) (layout, bool) {
	var best *candidate
	choices := separatorNames
	if separator != 0 {
		choices = []separatorName{{ownSeparator, separator}}
	}
	for _, s := range choices {
		for _, point := range []byte{'.', ','} {
			if point == s.mark {
				continue
			}
			c := try(lines, s.mark, point)
			if c.valid && (best == nil || c.score > best.score) {
				best = &c
			}
		}
	}
	if best == nil {
		return layout{}, false
	}
	return best.layout(lines)
}

func try(lines [][]byte, separator, point byte) candidate {
	c := candidate{separator: separator, point: point, cells: make([][][]byte, len(lines))}
	count := map[int]int{}
	for i, line := range lines {
		if skipped(line) {
			continue
		}
		c.cells[i] = split(line, separator)
		count[len(c.cells[i])]++
	}
	for n, lines := range count {
		if lines > count[c.fields] || lines == count[c.fields] && n > c.fields {
			c.fields = n
		}
	}
	numbers, others := make([]int, c.fields), make([]int, c.fields)
	for _, row := range c.cells {
		if len(row) != c.fields {
			continue
		}
		for j, cell := range row {
			if class := classify(cell, point); class == number {
				numbers[j]++
			} else if class == other {
				others[j]++
			}
		}
	}
	c.numeric = make([]bool, c.fields)
	for j := range c.numeric {
		c.numeric[j] = numbers[j] > others[j] || numbers[j] > 0 && numbers[j] == others[j]
	}
	for _, row := range c.cells {
		found := c.numbers(row)
		if found == 0 {
			continue
		}
		c.valid = true
		c.score += 2 * found
		for j, cell := range row {
			if !c.numeric[j] && classify(cell, point) == other {
				c.score--
			}
		}
	}
	return c
}

// numbers counts the numbers in usual places of a row; 0 if the line is no row.
func (c candidate) numbers(row [][]byte) int {
	if len(row) != c.fields {
		return 0
	}
	found, wrong := 0, 0
	for j, cell := range row {
		if !c.numeric[j] {
			continue
		}
		switch classify(cell, c.point) {
		case number:
			found++
		case other:
			wrong++
		}
	}
	if found <= wrong {
		return 0
	}
	return found
}

func (c candidate) layout(lines [][]byte) (layout, bool) {
	l := layout{separator: c.separator, point: c.point, fields: c.fields, first: -1}
	for i, row := range c.cells {
		if c.numbers(row) > 0 {
			l.first = i
			break
		}
	}
	if l.first < 0 {
		return layout{}, false
	}
	l.rate, l.rates = statedRate(lines[:l.first], l.point)
	l.text, l.stamp = make([]bool, c.fields), make([]bool, c.fields)
	for j := range l.text {
		l.stamp[j] = c.numeric[j] && j < len(c.cells[l.first]) && isStamp(c.cells[l.first][j])
		l.text[j] = !c.numeric[j] && c.holdsText(l.first, j)
	}
	l.idle = !c.numeric[c.fields-1] && !l.text[c.fields-1]
	l.units = make([]string, c.fields)
	above, rows := l.above(lines, l.first)
	if above >= 0 {
		if units := l.fitted(lines[above]); allUnits(units) {
			if names, _ := l.above(lines, above); names >= 0 {
				l.units, above = units, names
			}
		}
	}
	if above >= 0 {
		l.names, l.named = l.fitted(lines[above]), true
		l.first = rows
		for j, name := range l.names {
			l.names[j] = name
			if _, unit := bracketed(name); unit != "" {
				l.units[j] = unit
			}
		}
		return l, true
	}
	for j := range c.fields {
		l.names = append(l.names, fmt.Sprintf("column %d", j+1))
	}
	return l, true
}

func (c candidate) holdsText(first, column int) bool {
	for _, row := range c.cells[first:] {
		if len(row) == c.fields && classify(row[column], c.point) == other {
			return true
		}
	}
	return false
}

// above returns the line with the names (or units) of the rows below that line, -1 for none: the last one with as many
// fields. Free text ends the search; a comment is taken only if no plain line is. Rows that are hurt may stand between: the
// first of them is the first row.
func (l layout) above(lines [][]byte, before int) (at, first int) {
	comment, last := -1, before
	first = before
	for i := before - 1; i >= 0; i-- {
		fits := l.fitted(lines[i]) != nil
		switch {
		case len(bytes.TrimSpace(lines[i])) == 0:
		case !skipped(lines[i]):
			if l.hurt(lines[i]) {
				last = i
				continue
			}
			if fits {
				return i, last
			}
			return comment, first
		case fits && comment < 0:
			comment, first = i, last
		}
	}
	return comment, first
}

// hurt tells whether a line that is no row was meant as one: it holds nothing but numbers and what stands for none.
func (l layout) hurt(line []byte) bool {
	numbers, cells := 0, split(line, l.separator)
	for _, cell := range cells {
		switch classify(cell, l.point) {
		case number:
			numbers++
		case other:
			if !infinite(cell) {
				return false
			}
		}
	}
	return numbers > 0 || len(cells) == l.fields
}

// infinite tells whether a field says that a number is too large to be written.
func infinite(cell []byte) bool {
	word := strings.ToLower(string(bytes.TrimLeft(cell, "+-")))
	return word == "inf" || word == "infinity"
}

// fitted returns the fields of a line above the rows, as many as a row has, or nil. Rows or that line may end in one separator more.
func (l layout) fitted(line []byte) []string {
	cells := l.cut(line)
	switch n := len(cells); {
	case n == l.fields:
		return cells
	case n == l.fields+1 && n > 2 && cells[n-1] == "":
		return cells[:l.fields]
	case n == l.fields-1 && n > 1 && l.idle:
		return append(cells, "")
	}
	return nil
}

// cut splits a line above the rows, without a comment mark.
func (l layout) cut(line []byte) []string {
	var out []string
	for _, cell := range split(uncomment(line), l.separator) {
		out = append(out, string(cell))
	}
	return out
}

func uncomment(line []byte) []byte {
	line = bytes.TrimLeft(line, " \t")
	for _, mark := range commentMarks {
		if rest, ok := bytes.CutPrefix(line, []byte(mark)); ok {
			return bytes.TrimLeft(rest, "#% \t")
		}
	}
	return line
}

var commentMarks = []string{"#", "%", "//"}

// skipped tells whether a line holds no row at all.
func skipped(line []byte) bool {
	line = bytes.TrimSpace(line)
	return len(line) == 0 || line[0] == '#' || line[0] == '%' || line[0] == '/' && len(line) > 1 && line[1] == '/'
}

type class uint8

const (
	empty class = iota
	number
	other
)

func classify(cell []byte, point byte) class {
	if missing(cell) {
		return empty
	}
	if _, ok := parseDecimal(cell, point); ok || isStamp(cell) {
		return number
	}
	return other
}

// missing tells whether a field says that there is no sample.
func missing(cell []byte) bool {
	switch len(cell) {
	case 0:
		return true
	case 2, 3, 4:
		return cell[0]|0x20 == 'n' && (strings.EqualFold(string(cell), "nan") || strings.EqualFold(string(cell), "null") ||
			strings.EqualFold(string(cell), "na"))
	}
	return false
}

// bracketed splits "gyro x [deg/s]" or "gyro x (deg/s)" into name and unit.
func bracketed(name string) (plain, unit string) {
	for _, pair := range []string{"[]", "()"} {
		open := strings.LastIndexByte(name, pair[0])
		if open > 0 && strings.HasSuffix(name, pair[1:]) {
			return strings.TrimSpace(name[:open]), strings.TrimSpace(name[open+1 : len(name)-1])
		}
	}
	return name, ""
}

// allUnits tells whether the fields of a line are units, or empty but not all of them.
func allUnits(cells []string) bool {
	some := false
	for _, cell := range cells {
		cell = strings.Trim(cell, "[]()")
		if cell == "" {
			continue
		}
		if _, err := quantity.ParseUnit(cell); err != nil {
			return false
		}
		some = true
	}
	return some
}

// header describes the columns. Names that several columns have are told apart by their places.
func (l layout) header() recording.Header {
	h := recording.Header{Rate: l.rate}
	times := map[string]int{}
	for _, name := range l.names {
		times[name]++
	}
	for j, name := range l.names {
		switch {
		case name == "":
			name = fmt.Sprintf("column %d", j+1)
		case times[name] > 1:
			name = fmt.Sprintf("%s #%d", name, j+1)
		}
		c := recording.Column{Name: name, Unit: strings.Trim(l.units[j], "[]()"), Text: l.text[j]}
		if l.stamp[j] {
			c.Unit = "s" // of what the clock makes of it
		}
		h.Columns = append(h.Columns, c)
	}
	for _, s := range separatorNames {
		if s.mark == l.separator && l.fields > 1 {
			h.Notes = append(h.Notes, "fields are separated by "+s.name)
		}
	}
	if l.rates {
		h.Notes = append(h.Notes, "the lines above the samples state rates that differ; none is believed")
	}
	if l.rate > 0 {
		h.Notes = append(h.Notes, fmt.Sprintf("the lines above the samples state a rate of %.6g Hz", l.rate))
	}
	if l.point == ',' {
		h.Notes = append(h.Notes, "numbers have a decimal comma")
	}
	if !l.named {
		h.Notes = append(h.Notes, "there is no line of names; columns are called column 1, column 2 and so on")
	}
	return h
}
