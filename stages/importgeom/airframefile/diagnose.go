package airframefile

import (
	"fmt"
	"sort"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
)

// mistake makes a diagnostic at a range; remedy may be "".
func mistake(at hcl.Range, summary, detail string) *hcl.Diagnostic {
	return &hcl.Diagnostic{Severity: hcl.DiagError, Summary: summary, Detail: detail, Subject: &at}
}

// asFault makes one fault of all diagnostics, by line, each with the line it is about.
func asFault(path string, source []byte, diags hcl.Diagnostics) *fault.Error {
	diags = job.Explain(diags)
	type finding struct {
		line, column int
		text, quote  string
	}
	var all []finding
	for _, d := range diags {
		if d.Severity != hcl.DiagError {
			continue
		}
		f := finding{text: clause(d.Detail)}
		if f.text == "" {
			f.text = clause(d.Summary)
		}
		if d.Subject != nil {
			f.line, f.column = d.Subject.Start.Line, d.Subject.Start.Column
			f.quote = sourceLine(source, f.line)
		}
		all = append(all, f)
	}
	sort.SliceStable(all, func(i, j int) bool {
		if all[i].line != all[j].line {
			return all[i].line < all[j].line
		}
		return all[i].column < all[j].column
	})
	out := fault.New(fault.Input, "").In("read airframe", path).Of("airframe")
	if len(all) == 1 {
		if all[0].line > 0 {
			out = out.At("line %d", all[0].line)
		}
		out.Text = withQuote(all[0].text, all[0].quote)
		return out
	}
	lines := []string{fmt.Sprintf("%d mistakes", len(all))}
	for _, f := range all {
		lines = append(lines, fmt.Sprintf("  line %d: %s", f.line, withQuote(f.text, f.quote)))
	}
	out.Text = strings.Join(lines, "\n")
	return out
}

func withQuote(text, quote string) string {
	if quote == "" {
		return text
	}
	return text + " (in `" + quote + "`)"
}

// clause turns a sentence into a part of one.
func clause(s string) string {
	s = strings.TrimSpace(s)
	if !strings.HasSuffix(s, "...") {
		s = strings.TrimSuffix(s, ".")
	}
	r, n := utf8.DecodeRuneInString(s)
	if second, _ := utf8.DecodeRuneInString(s[n:]); unicode.IsUpper(second) {
		return s
	}
	return string(unicode.ToLower(r)) + s[n:]
}

func sourceLine(source []byte, line int) string {
	lines := strings.Split(string(source), "\n")
	if line < 1 || line > len(lines) {
		return ""
	}
	s := []rune(strings.TrimSpace(lines[line-1]))
	if len(s) > 80 {
		return string(s[:77]) + "..."
	}
	return string(s)
}
