package main

import (
	"fmt"
	"path/filepath"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/report"
)

// checkPage refuses a file that is no page.
func checkPage(path string) error {
	if ext := strings.ToLower(filepath.Ext(path)); ext != ".html" && ext != ".htm" {
		return fault.New(fault.Input, "--page is %q; it does not end in .html", path)
	}
	return nil
}

// writePage writes the page of a difference and its tables, and tells how many files lie beside it.
func (d *differences) writePage(path string) (beside int, err error) {
	x := &report.Changes{
		Title: fmt.Sprintf("%s: before and after", d.runs[1].account.Job), About: fmt.Sprintf("%s, set against %s", d.runs[1].words, d.runs[0].words),
		Closing: d.closing(), Worse: d.worse(), Tables: append([]stage.Section{d.heads()}, d.rest()...), Notes: d.notes,
	}
	for _, f := range d.frames {
		x.Branches = append(x.Branches, report.Branch{Label: f.labels[1], Difference: f.Difference})
	}
	doc, err := report.ChangesPage(x, filepath.Base(path))
	if err != nil {
		return 0, err
	}
	for _, name := range sortedKeys(doc.Files) {
		if err := run.PublishFile(filepath.Join(filepath.Dir(path), filepath.FromSlash(name)), doc.Files[name]); err != nil {
			return 0, fault.New(fault.Input, "%v", err).In("write", path).Do("give a path that can be written")
		}
	}
	return len(doc.Files) - 1, nil
}
