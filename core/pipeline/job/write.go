package job

import (
	"bufio"
	"fmt"
	"io"
	"sort"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
)

const (
	red, yellow, bold, plainText = "\x1b[31m", "\x1b[33m", "\x1b[1m", "\x1b[0m"
)

// WriteDiagnostics writes diagnostics for people: what is wrong, where, the line
// with the offending text marked, and what would be right. Width 0 means no
// wrapping; color adds terminal escapes.
func WriteDiagnostics(w io.Writer, diags hcl.Diagnostics, sources []Source, width int, color bool) error {
	out := &diagnosticWriter{w: bufio.NewWriter(w), width: width, color: color, sources: map[string]*source{}}
	for _, s := range sources {
		out.sources[s.Name] = &source{bytes: s.Bytes, name: s.Name}
	}
	for i, d := range diags {
		if i > 0 {
			out.w.WriteString("\n")
		}
		out.write(d)
	}
	return out.w.Flush()
}

type source struct {
	name   string
	bytes  []byte
	parsed bool
	blocks hclsyntax.Blocks
}

// block gives the header of the block around a place, "" when there is none.
func (s *source) block(at hcl.Pos) string {
	if !s.parsed {
		s.parsed = true
		if nesting(s.bytes, s.name) == nil {
			if f, _ := hclsyntax.ParseConfig(s.bytes, s.name, hcl.InitialPos); f != nil {
				s.blocks = f.Body.(*hclsyntax.Body).Blocks
			}
		}
	}
	for _, b := range s.blocks {
		if b.Range().ContainsPos(at) {
			text := b.Type
			for _, l := range b.Labels {
				text += fmt.Sprintf(" %q", l)
			}
			return text
		}
	}
	return ""
}

type diagnosticWriter struct {
	w       *bufio.Writer
	width   int
	color   bool
	sources map[string]*source
}

func (o *diagnosticWriter) paint(code, text string) string {
	if !o.color || text == "" {
		return text
	}
	return code + text + plainText
}

func (o *diagnosticWriter) write(d *hcl.Diagnostic) {
	word, code := "Error", red
	if d.Severity == hcl.DiagWarning {
		word, code = "Warning", yellow
	}
	fmt.Fprintf(o.w, "%s: %s\n", o.paint(code, word), o.paint(bold, d.Summary))
	if d.Subject != nil {
		where := fmt.Sprintf("%s, line %d", d.Subject.Filename, d.Subject.Start.Line)
		src := o.sources[d.Subject.Filename]
		if src == nil {
			fmt.Fprintf(o.w, "  %s\n", where)
		} else {
			if b := src.block(d.Subject.Start); b != "" {
				where += ", in " + b
			}
			fmt.Fprintf(o.w, "  %s\n", where)
			o.line(src.bytes, *d.Subject, code)
		}
	}
	for _, paragraph := range strings.Split(d.Detail, "\n") {
		if paragraph != "" {
			o.wrapped(paragraph)
		}
	}
}

// line shows the line on which the subject starts, with the subject marked.
func (o *diagnosticWriter) line(src []byte, rng hcl.Range, code string) {
	start := min(max(rng.Start.Byte, 0), len(src))
	first, last := start, start
	for first > 0 && src[first-1] != '\n' {
		first--
	}
	for last < len(src) && src[last] != '\n' {
		last++
	}
	end := min(max(rng.End.Byte, start), last)
	before, marked := string(src[first:start]), string(src[start:end])
	after := strings.TrimRight(string(src[end:last]), "\r")
	text := before + marked + after
	if strings.TrimSpace(text) == "" || !utf8.ValidString(text) || strings.ContainsFunc(text, func(r rune) bool { return r != '\t' && unicode.IsControl(r) }) {
		return
	}
	before, marked, after = o.cut(before, marked, after)
	number := fmt.Sprintf("%5d | ", rng.Start.Line)
	fmt.Fprintf(o.w, "%s%s%s%s\n", number, before, o.paint(code, marked), after)
	// Tabs stay tabs below, so that the mark stands where the text does.
	pad := strings.Map(func(r rune) rune {
		if r == '\t' {
			return r
		}
		return ' '
	}, before)
	carets := strings.Repeat("^", max(1, utf8.RuneCountInString(marked)))
	fmt.Fprintf(o.w, "      | %s%s\n", pad, o.paint(code, carets))
}

// cut shortens a very long line around what is marked.
func (o *diagnosticWriter) cut(before, marked, after string) (string, string, string) {
	room := 160
	if o.width > 40 {
		room = o.width - 8
	}
	b, m, a := []rune(before), []rune(marked), []rune(after)
	if len(b)+len(m)+len(a) <= room {
		return before, marked, after
	}
	if len(m) > room/2 {
		m = append(m[:room/2:room/2], '…')
		a = nil
	}
	if keep := room - len(m) - min(len(a), room/4); len(b) > keep {
		b = append([]rune{'…'}, b[len(b)-max(keep-1, 0):]...)
	}
	if keep := room - len(m) - len(b); len(a) > keep {
		a = append(a[:max(keep-1, 0):max(keep-1, 0)], '…')
	}
	return string(b), string(m), string(a)
}

// wrapped writes a paragraph, indented, in lines of the width.
func (o *diagnosticWriter) wrapped(text string) {
	indent := "  " + text[:len(text)-len(strings.TrimLeft(text, " "))]
	used := 0
	for _, piece := range pieces(strings.TrimLeft(text, " ")) {
		n := utf8.RuneCountInString(piece)
		switch {
		case used == 0:
			o.w.WriteString(indent)
			used = len(indent)
		case o.width > 0 && used+1+n > o.width:
			o.w.WriteString("\n" + indent)
			used = len(indent)
		default:
			o.w.WriteString(" ")
			used++
		}
		o.w.WriteString(piece)
		used += n
	}
	o.w.WriteString("\n")
}

// pieces splits a text at spaces, but not within short quotes and parentheses,
// which would be hard to read in two lines.
func pieces(text string) []string {
	const longest = 40
	var out []string
	from, depth, quoted := 0, 0, false
	for i, r := range text {
		switch r {
		case '"':
			quoted = !quoted
		case '(', '[', '{':
			depth++
		case ')', ']', '}':
			depth = max(0, depth-1)
		case ' ':
			if !quoted && depth == 0 || i-from > longest {
				out = append(out, text[from:i])
				from, depth, quoted = i+1, 0, false
			}
		}
	}
	return append(out, text[from:])
}

// arrange sorts diagnostics by file and place, those without a place first, and
// drops repetitions.
func arrange(diags hcl.Diagnostics) hcl.Diagnostics {
	key := func(d *hcl.Diagnostic) (string, int) {
		if d.Subject == nil {
			return "", -1
		}
		return d.Subject.Filename, d.Subject.Start.Byte
	}
	sort.SliceStable(diags, func(i, j int) bool {
		fi, bi := key(diags[i])
		fj, bj := key(diags[j])
		if fi != fj {
			return fi < fj
		}
		return bi < bj
	})
	var out hcl.Diagnostics
	seen := map[string]bool{}
	for _, d := range diags {
		k := d.Summary + "\x00" + d.Detail
		if d.Subject != nil {
			k += "\x00" + d.Subject.String()
		}
		if !seen[k] {
			seen[k] = true
			out = append(out, d)
		}
	}
	return out
}
