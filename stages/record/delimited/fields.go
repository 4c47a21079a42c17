package delimited

import "bytes"

// split cuts a line into fields without surrounding blanks and quotes. A separator within quotes does not count.
func split(line []byte, separator byte) [][]byte {
	var out [][]byte
	rest := trimEnd(line)
	for {
		field, tail, more := next(rest, separator)
		out = append(out, field)
		if !more {
			return out
		}
		rest = tail
	}
}

// next takes one field off a line; more tells whether a separator followed.
func next(line []byte, separator byte) (field, rest []byte, more bool) {
	i := 0
	for i < len(line) && (line[i] == ' ' || line[i] == '\t' && separator != '\t') {
		i++
	}
	if i < len(line) && line[i] == '"' {
		if end := closing(line[i+1:]); end >= 0 {
			field = line[i+1 : i+1+end]
			if bytes.Contains(field, []byte(`""`)) { // rare, and a copy
				field = bytes.ReplaceAll(field, []byte(`""`), []byte(`"`))
			}
			field = trim(field)
			i += end + 2
			for i < len(line) && line[i] == ' ' {
				i++
			}
			if i < len(line) && (line[i] == separator || separator == blank && line[i] == '\t') {
				return field, line[i+1:], true
			}
			if separator == blank && i < len(line) {
				return field, line[i:], true
			}
			return field, nil, false
		}
	}
	start := i
	if separator == blank {
		for i < len(line) && line[i] != ' ' && line[i] != '\t' {
			i++
		}
	} else if end := bytes.IndexByte(line[i:], separator); end >= 0 {
		i += end
	} else {
		i = len(line)
	}
	if i == len(line) {
		return trim(line[start:]), nil, false
	}
	return trim(line[start:i]), line[i+1:], true
}

// closing returns where a quoted field ends, -1 if it does not. Two quotes in it stand for one.
func closing(line []byte) int {
	for i := 0; i < len(line); i++ {
		if line[i] != '"' {
			continue
		}
		if i+1 < len(line) && line[i+1] == '"' {
			i++
			continue
		}
		return i
	}
	return -1
}

func trim(cell []byte) []byte {
	for len(cell) > 0 && (cell[0] == ' ' || cell[0] == '\t') {
		cell = cell[1:]
	}
	return trimEnd(cell)
}

// trimEnd takes off blanks and line ends, but not tabs, which may separate empty fields.
func trimEnd(line []byte) []byte {
	for len(line) > 0 && (line[len(line)-1] == ' ' || line[len(line)-1] == '\r') {
		line = line[:len(line)-1]
	}
	return line
}
