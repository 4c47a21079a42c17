package main

import (
	"fmt"
	"io"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"

	"github.com/jedib0t/go-pretty/v6/table"
	"github.com/jedib0t/go-pretty/v6/text"

	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// summary writes the results of a run: what each step has to say, responses in a few lines, findings,
// requirements, and where reports are. The folder is that of the job.
func (a *app) summary(folder string, st *store.Store, r *run.Result) {
	titles := map[string]int{}
	for _, s := range r.Steps {
		for _, section := range s.Outcome.Summary {
			titles[section.Title]++
		}
	}
	for _, s := range r.Steps {
		for _, section := range s.Outcome.Summary {
			if titles[section.Title] > 1 {
				section.Title += " of " + s.Label
			}
			writeSection(a.out, section)
		}
		a.responseStrips(st, s)
	}
	findings := stage.Section{Title: "Warnings", Columns: []stage.Column{{Name: "step"}, {Name: "warning"}, {Name: "finding"}}}
	for _, s := range r.Steps {
		for _, w := range s.Outcome.Warnings {
			words := w.Text
			if w.Where != "" {
				words = w.Where + ": " + words
			}
			if w.Remedy != "" {
				words += "; " + w.Remedy
			}
			findings.Rows = append(findings.Rows, []string{s.Label, w.ID, words})
		}
	}
	if len(findings.Rows) > 0 {
		writeSection(a.out, findings)
	}
	if len(r.Verdicts) > 0 {
		section := stage.Section{Title: "Requirements", Columns: []stage.Column{{Name: "requirement"}, {Name: ""}, {Name: "condition"}, {Name: "margin", Right: true}}}
		for _, v := range r.Verdicts {
			section.Rows = append(section.Rows, []string{v.Name, standing(v), v.Shown, v.Margin})
		}
		writeSection(a.out, section)
	}
	a.published(folder, r)
}

// published says where reports are, from where the user stands: the main file
// of each, and how many lie beside it.
func (a *app) published(folder string, r *run.Result) {
	files := stage.NewFiles(folder)
	for _, s := range r.Steps {
		if len(s.Published) == 0 {
			continue
		}
		more := ""
		if n := len(s.Published) - 1; n > 0 {
			more = fmt.Sprintf(" (and %s beside it)", count(n, "file", "files"))
		}
		fmt.Fprintf(a.out, "\n%s wrote %s%s\n", s.Label, files.Path(s.Published[0]), more)
	}
}

// closing counts how the steps ended.
func closing(r *run.Result, took time.Duration) string {
	n := map[run.State]int{}
	for _, s := range r.Steps {
		n[s.State]++
	}
	var parts []string
	for _, x := range []struct {
		state run.State
		words string
	}{{run.Ran, "ran"}, {run.Reused, "as before"}, {run.Failed, "failed"}, {run.Skipped, "skipped"}, {run.Stopped, "stopped"}} {
		if n[x.state] > 0 {
			parts = append(parts, fmt.Sprintf("%d %s", n[x.state], x.words))
		}
	}
	line := fmt.Sprintf("%s: %s; %s", count(len(r.Steps), "step", "steps"), strings.Join(parts, ", "), duration(took))
	broken, unjudged := 0, 0
	for _, v := range r.Broken() {
		if v.Judged {
			broken++
		} else {
			unjudged++
		}
	}
	switch {
	case broken > 0:
		line += fmt.Sprintf("; %s broken", count(broken, "requirement is", "requirements are"))
	case unjudged > 0:
		line += fmt.Sprintf("; %s not judged", count(unjudged, "requirement was", "requirements were"))
	case len(r.Verdicts) > 0:
		line += "; every requirement holds"
	}
	return line
}

// harmless makes a text that comes from files fit for a terminal: what would steer it, or turn the direction of writing, is
// shown as a mark.
func harmless(s string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsControl(r) && r != '\n' && r != '\t' || unicode.Is(unicode.Bidi_Control, r) {
			return unicode.ReplacementChar
		}
		return r
	}, s)
}

// writeSection writes a titled table: a heading line under the title, no boxes.
func writeSection(out io.Writer, s stage.Section) {
	s.Title, s.Text = harmless(s.Title), harmless(s.Text)
	fmt.Fprintf(out, "\n%s\n", s.Title)
	if s.Text != "" {
		for line := range strings.Lines(text.WrapSoft(s.Text, tableWidth(out)) + "\n") {
			io.WriteString(out, strings.TrimRight(line, " \n")+"\n")
		}
	}
	if len(s.Columns) == 0 {
		return
	}
	t := table.NewWriter()
	t.SetStyle(sectionStyle)
	header := table.Row{}
	var columns []table.ColumnConfig
	widths := fit(s, tableWidth(out))
	for i, c := range s.Columns {
		header = append(header, harmless(c.Name))
		align := text.AlignLeft
		if c.Right {
			align = text.AlignRight
		}
		columns = append(columns, table.ColumnConfig{Number: i + 1, Align: align, AlignHeader: align,
			WidthMax: widths[i], WidthMaxEnforcer: text.WrapSoft})
	}
	t.AppendHeader(header)
	t.SetColumnConfigs(columns)
	for _, cells := range s.Rows {
		row := table.Row{}
		for i := range s.Columns {
			if i < len(cells) {
				row = append(row, harmless(cells[i]))
			} else {
				row = append(row, "")
			}
		}
		t.AppendRow(row)
	}
	for line := range strings.Lines(t.Render() + "\n") {
		io.WriteString(out, strings.TrimRight(line, " \n")+"\n")
	}
}

// fit gives the width of each column, the widest first giving way until the table fits into a width: headers of
// numbers by wrapping at their spaces; columns of words down to a comfortable width, then to their longest word; at
// last long words, which are cut. Numbers are never wrapped.
func fit(s stage.Section, width int) []int {
	const comfortable, narrowest, gap = 20, 12, 2
	n := len(s.Columns)
	widths, numbers, words := make([]int, n), make([]int, n), make([]int, n)
	total := 0
	for i, c := range s.Columns {
		header, word := utf8.RuneCountInString(c.Name), longestWord(c.Name)
		cells := 0
		for _, row := range s.Rows {
			if i < len(row) {
				cells = max(cells, utf8.RuneCountInString(row[i]))
				word = max(word, longestWord(row[i]))
			}
		}
		widths[i], numbers[i], words[i] = max(header, cells), max(longestWord(c.Name), cells), word
		total += widths[i] + gap
	}
	shrink := func(least func(i int) int) {
		for total > width {
			widest := -1
			for i := range s.Columns {
				if widths[i] > least(i) && (widest < 0 || widths[i] > widths[widest]) {
					widest = i
				}
			}
			if widest < 0 {
				return
			}
			widths[widest]--
			total--
		}
	}
	// of returns the least width of a column of words, while numbers keep theirs.
	of := func(least func(i int) int) func(i int) int {
		return func(i int) int {
			if s.Columns[i].Right {
				return numbers[i]
			}
			return least(i)
		}
	}
	shrink(of(func(i int) int { return widths[i] }))
	shrink(of(func(i int) int { return max(comfortable, words[i]) }))
	shrink(of(func(i int) int { return max(narrowest, words[i]) }))
	shrink(of(func(int) int { return comfortable }))
	return widths
}

// longestWord is the number of letters of the longest word. Paths may be cut, so that their folders are words.
func longestWord(text string) int {
	n := 0
	for _, w := range strings.FieldsFunc(text, func(r rune) bool { return unicode.IsSpace(r) || r == '/' || r == '\\' }) {
		n = max(n, utf8.RuneCountInString(w))
	}
	return n
}

// sectionStyle: two spaces between columns, a thin line under the header.
var sectionStyle = table.Style{
	Box: table.BoxStyle{
		MiddleHorizontal: "─", MiddleSeparator: "─", PaddingRight: "  ", UnfinishedRow: "…",
	},
	Format:  table.FormatOptions{Header: text.FormatDefault},
	Options: table.Options{SeparateHeader: true},
}
