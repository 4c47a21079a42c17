package report

import (
	"fmt"
	"strings"

	"hushframe/core/pipeline/run/account"
)

// banner is the verdict on the whole run.
type banner struct{ Class, Sign, Words, More string }

// judge sums up the verdicts.
func judge(verdicts []account.Verdict) *banner {
	broken, open := 0, 0
	for _, v := range verdicts {
		switch {
		case !v.Judged:
			open++
		case !v.Holds:
			broken++
		}
	}
	more := ""
	if open > 0 && broken > 0 {
		more = fmt.Sprintf("%d more could not be judged.", open)
	}
	switch n := len(verdicts); {
	case n == 0:
		return &banner{"open", "○", "Nothing was required", "The job states no requirements, so there is no verdict."}
	case broken == 0 && open == 0 && n == 1:
		return &banner{"holds", "✓", "The requirement holds", ""}
	case broken == 0 && open == 0:
		return &banner{"holds", "✓", fmt.Sprintf("All %d requirements hold", n), ""}
	case broken == 0:
		return &banner{"open", "○", fmt.Sprintf("%d of %d requirements could not be judged", open, n), "Figures that they need were not computed."}
	case n == 1:
		return &banner{"broken", "✕", "The requirement is broken", ""}
	default:
		return &banner{"broken", "✕", fmt.Sprintf("%d of %d requirements %s broken", broken, n, map[bool]string{true: "is", false: "are"}[broken == 1]), more}
	}
}

// requirement is one verdict on the page.
type requirement struct {
	Class, Sign, State string
	account.Verdict
}

func requirements(verdicts []account.Verdict) []requirement {
	var out []requirement
	for _, v := range verdicts {
		x := requirement{"holds", "✓", "holds", v}
		switch {
		case !v.Judged:
			x.Class, x.Sign, x.State = "open", "○", "could not be judged"
		case !v.Holds:
			x.Class, x.Sign, x.State = "broken", "✕", "is broken"
		}
		x.Margin = sign(v.Margin)
		out = append(out, x)
	}
	return out
}

// requirementTable is the same for the folder of tables.
func requirementTable(verdicts []account.Verdict) *table {
	t := &table{Name: "requirements", Title: "Requirements", Columns: []column{{"requirement", "", false}, {"verdict", "", false}, {"value", "", true}, {"bound", "", true}, {"margin", "", true}, {"because", "", false}}}
	for _, v := range requirements(verdicts) {
		t.Rows = append(t.Rows, []cell{words(v.Name), words(v.State), words(v.Value), words(v.Bound), words(v.Margin), words(v.Because)})
	}
	return t
}

// runSection states what it takes to make the page again.
func runSection(c *content) *section {
	s := &section{ID: "run", Title: "How this was made"}
	r := c.run
	if r != nil {
		s.table(requirementTable(r.Verdicts))
		settings := &table{Name: "settings", Title: "Settings", Columns: []column{{"setting", "", false}, {"value", "", false}, {"about", "", false}, {"remark", "", false}}}
		for _, x := range r.Settings {
			row := []cell{words(x.Name), words(x.Value), words(x.About), words("")}
			if x.Overridden {
				row[1].Strong, row[3] = true, words("from the command line")
			}
			settings.Rows = append(settings.Rows, row)
		}
		s.table(settings)
		steps := &table{Name: "steps", Title: "Steps", Columns: []column{{"step", "", false}, {"stage", "", false}, {"state", "", false}, {"about", "", false}, {"executable, SHA-256", "", false}}}
		for _, x := range r.Steps {
			row := []cell{words(x.Label), words(x.Stage), words(x.State), words(x.About), hash(x.Executable)}
			row[2].Strong = x.State != "finished"
			steps.Rows = append(steps.Rows, row)
		}
		s.table(steps)
		executables := &table{Name: "versions", Title: "Versions", Columns: []column{{"program", "", false}, {"version", "", false}, {"SHA-256", "", false}}}
		for _, x := range r.Executables {
			executables.Rows = append(executables.Rows, []cell{words(x.Name), words(x.Version), hash(x.SHA256)})
		}
		s.table(executables)
		files := &table{Name: "files", Title: "Files read", Columns: []column{{"step", "", false}, {"file", "", false}, {"SHA-256", "", false}}}
		for _, x := range r.Files {
			sum := hash(x.SHA256)
			if x.SHA256 == "" {
				sum = cell{Text: "looked for, not there", Quiet: true}
			}
			files.Rows = append(files.Rows, []cell{words(x.Step), words(x.Path), sum})
		}
		s.table(files)
	}
	sources := &table{Name: "artifacts", Title: "Artifacts shown", Columns: []column{{"artifact", "", false}, {"kind", "", false}, {"content, SHA-256", "", false}}}
	for _, x := range c.sources {
		if x.Kind != account.KindName {
			sources.Rows = append(sources.Rows, []cell{words(x.From), words(x.Kind), hash(x.Hash)})
		}
	}
	s.table(sources)
	if r != nil {
		var notes []string
		for _, n := range r.Notes {
			notes = append(notes, n.Step+": "+n.Text)
		}
		if len(notes) > 0 {
			s.heading("Notes of the steps")
			s.list(notes)
		}
		for _, f := range r.Sources {
			s.Blocks = append(s.Blocks, block{Name: f.Name, Code: strings.TrimRight(f.Text, "\n")})
		}
	}
	return s
}

// hash shows a checksum in full, in letters of equal width.
func hash(s string) cell { return cell{Text: s, Raw: s, Mono: true} }
