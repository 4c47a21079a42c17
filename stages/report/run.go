package report

import (
	"strings"
)

// runSection states what it takes to make the page again.
func runSection(c *content) *section {
	s := &section{ID: "run", Title: "How this was made"}
	if r := c.run; r != nil {
		settings := &table{Name: "settings", Title: "Settings", Columns: []column{{"setting", "", false}, {"value", "", true}, {"default", "", true}, {"about", "", false}}}
		for _, x := range r.Settings {
			row := []cell{words(x.Name), words(x.Value), words(x.Default), words(x.About)}
			if x.Value != x.Default {
				row[1].Strong = true
			}
			settings.Rows = append(settings.Rows, row)
		}
		s.table(settings)
		executables := &table{Name: "versions", Title: "Versions", Columns: []column{{"program", "", false}, {"version", "", false}, {"SHA-256", "", false}}}
		for _, x := range r.Executables {
			executables.Rows = append(executables.Rows, []cell{words(x.Name), words(x.Version), words(x.Hash)})
		}
		s.table(executables)
		files := &table{Name: "files", Title: "Files read", Columns: []column{{"file", "", false}, {"SHA-256", "", false}}}
		for _, x := range r.Inputs {
			files.Rows = append(files.Rows, []cell{words(x.Path), words(x.Hash)})
		}
		s.table(files)
	}
	sources := &table{Name: "artifacts", Title: "Artifacts shown", Columns: []column{{"artifact", "", false}, {"kind", "", false}, {"content SHA-256", "", false}}}
	for _, x := range c.sources {
		if x.Kind != "run" {
			sources.Rows = append(sources.Rows, []cell{words(x.From), words(x.Kind), words(x.Hash)})
		}
	}
	s.table(sources)
	if r := c.run; r != nil {
		for _, f := range r.Files {
			s.Blocks = append(s.Blocks, block{Name: f.Path, Code: strings.TrimRight(f.Text, "\n")})
		}
	}
	return s
}
