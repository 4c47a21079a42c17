package report

import (
	"strconv"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// Changes is what a page says of two runs that are set side by side.
type Changes struct {
	Title, About string
	// Closing sums up in a line; Worse tells that a requirement that held before does not now.
	Closing string
	Worse   bool
	// Branches are the branches of the job that both runs have.
	Branches []Branch
	// Tables say what else differs; Notes what could not be compared.
	Tables []stage.Section
	Notes  []string
}

// Branch is one branch of a job with its difference; the label is shown where there are several.
type Branch struct {
	Label      string
	Difference *kinds.Difference
}

// ChangesPage makes the page of two runs; name is its file name, ending in .html.
func ChangesPage(x *Changes, name string) (*kinds.Document, error) {
	return compose(&content{changes: x}, x.Title, name)
}

// changedBanner is the verdict on a change.
func changedBanner(x *Changes) *banner {
	if x.Worse {
		return &banner{"broken", "✕", "A requirement that held before does not now", upper(x.Closing) + "."}
	}
	return &banner{"holds", "✓", "No requirement that held before fails now", upper(x.Closing) + "."}
}

// changedSections shows each branch, then what else differs.
func changedSections(c *content) []*section {
	var out []*section
	for k, b := range c.changes.Branches {
		s := differenceSection(c, b.Difference, func(ch *draw.Chart) {
			if k > 0 {
				ch.ID += "-" + strconv.Itoa(k+1)
			}
		})
		if k > 0 {
			s.ID += "-" + strconv.Itoa(k+1)
			for _, x := range s.all() {
				if x.Table != nil {
					x.Table.Name += "-" + strconv.Itoa(k+1)
				}
			}
		}
		if len(c.changes.Branches) > 1 {
			s.Title += ": " + b.Label
		}
		out = append(out, s)
	}
	s := &section{ID: "runs", Title: "What the runs are made of"}
	for _, x := range c.changes.Tables {
		t := &table{Name: slug(x.Title), Title: x.Title, About: x.Text}
		for _, col := range x.Columns {
			t.Columns = append(t.Columns, column{Name: col.Name, Right: col.Right})
		}
		for _, row := range x.Rows {
			var cells []cell
			for _, text := range row {
				cells = append(cells, words(text))
			}
			t.Rows = append(t.Rows, cells)
		}
		s.table(t)
	}
	if len(c.changes.Notes) > 0 {
		s.list(c.changes.Notes)
	}
	return append(out, s)
}
