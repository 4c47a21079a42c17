package main

import (
	"fmt"
	"os"
	"path/filepath"
	"sort"
	"strings"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

func (a *app) inspectCommand() *cobra.Command {
	var table string
	var most int
	c := &cobra.Command{
		Use:   "inspect JOB STEP[.OUTPUT] | inspect FOLDER",
		Short: "Show what is in an artifact of the last run",
		Long: `Shows kind, values, tables and files of an artifact: of the last run of a job,
by the label of the step and the name of its output, or of an artifact folder.
With --table, shows the rows of one table.`,
		Args:              wants(1, 2, "a job and one of its steps are wanted, or the folder of an artifact"),
		ValidArgsFunction: completeJob,
	}
	c.Flags().StringVar(&table, "table", "", "show the rows of this table")
	c.Flags().IntVar(&most, "rows", 20, "show at most so many rows; 0 for all")
	c.RunE = func(_ *cobra.Command, args []string) error {
		folder, err := a.artifactFolder(args)
		if err != nil {
			return err
		}
		x, err := artifact.Open(folder, registry())
		if err != nil {
			return err
		}
		if table != "" {
			return a.showTable(x, table, most)
		}
		a.showArtifact(x)
		return nil
	}
	return c
}

// artifactFolder finds the artifact meant by the arguments.
func (a *app) artifactFolder(args []string) (string, error) {
	if len(args) == 1 {
		if _, err := os.Stat(filepath.Join(args[0], artifact.ManifestName)); err == nil {
			return args[0], nil
		}
		return "", fault.New(fault.Missing, "%s is no artifact folder", args[0]).Do("name a job and a step of it, or a folder with %s", artifact.ManifestName)
	}
	folder, err := jobFolder(args[0])
	if err != nil {
		return "", err
	}
	s := store.View(folder, registry())
	last, err := s.LastRun(jobName(args[0]))
	if err != nil {
		return "", err
	}
	label, output, _ := strings.Cut(args[1], ".")
	var labels []string
	for _, step := range last.Steps {
		labels = append(labels, step.Label)
		if step.Label != label {
			continue
		}
		var names []string
		for n := range step.Outputs {
			names = append(names, n)
		}
		sort.Strings(names)
		if len(names) == 0 {
			return "", fault.New(fault.Missing, "step %s has no artifact: in the last run it was %s", label, step.State)
		}
		if output == "" && len(names) == 1 {
			output = names[0]
		}
		o, ok := step.Outputs[output]
		switch {
		case output == "":
			return "", fault.New(fault.Input, "step %s has several artifacts", label).Do("name one: %s", strings.Join(names, ", "))
		case !ok:
			return "", fault.New(fault.Missing, "step %s has no output %q%s", label, output, suggest(output, names))
		case !s.Holds(o.Hash, false):
			return "", fault.New(fault.Missing, "the artifact is no longer in the store").Do("run the job again")
		}
		return s.Folder(o.Hash), nil
	}
	return "", fault.New(fault.Missing, "the last run of %s has no step %q%s", args[0], label, suggest(label, labels))
}

func (a *app) showArtifact(x *artifact.Artifact) {
	fmt.Fprintf(a.out, "\n%s: %s\ncontent %s\n", x.Kind.Name, x.Kind.About, x.Hash())
	if len(x.Kind.Scalars) > 0 {
		section := stage.Section{Title: "Values", Columns: []stage.Column{{Name: "value"}, {Name: "", Right: true}, {Name: "unit"}, {Name: ""}}}
		for _, c := range x.Kind.Scalars {
			section.Rows = append(section.Rows, []string{c.Name, cellText(x.Scalars[c.Name]), c.Unit, c.About})
		}
		writeSection(a.out, section)
	}
	if len(x.Kind.Tables) > 0 {
		section := stage.Section{Title: "Tables", Columns: []stage.Column{{Name: "table"}, {Name: "rows", Right: true}, {Name: "columns"}}}
		for _, t := range x.Kind.Tables {
			var names []string
			for _, c := range t.Columns {
				names = append(names, heading(c))
			}
			section.Rows = append(section.Rows, []string{t.Name, fmt.Sprint(x.Table(t.Name).Rows()), strings.Join(names, ", ")})
		}
		writeSection(a.out, section)
	}
	if len(x.Files) > 0 {
		section := stage.Section{Title: "Files", Columns: []stage.Column{{Name: "file"}, {Name: "size", Right: true}}}
		var names []string
		for n := range x.Files {
			names = append(names, n)
		}
		sort.Strings(names)
		for _, n := range names {
			section.Rows = append(section.Rows, []string{n, bytesText(int64(len(x.Files[n])))})
		}
		writeSection(a.out, section)
	}
}

func heading(c artifact.Column) string {
	if c.Unit == "" || c.Unit == "1" {
		return c.Name
	}
	return fmt.Sprintf("%s [%s]", c.Name, c.Unit)
}

func (a *app) showTable(x *artifact.Artifact, name string, most int) error {
	var names []string
	found := false
	for _, t := range x.Kind.Tables {
		names = append(names, t.Name)
		found = found || t.Name == name
	}
	if !found {
		return fault.New(fault.Missing, "%s has no table %q%s", x.Kind.Name, name, suggest(name, names))
	}
	t := x.Table(name)
	n := t.Rows()
	if most > 0 {
		n = min(n, most)
	}
	section := stage.Section{Title: name, Text: t.Spec.About}
	cells := make([][]string, n)
	for _, c := range t.Spec.Columns {
		section.Columns = append(section.Columns, stage.Column{Name: heading(c), Right: c.Type == artifact.Float || c.Type == artifact.Int})
		for i := range n {
			cells[i] = append(cells[i], cellText(cellOf(t, c, i)))
		}
	}
	section.Rows = cells
	writeSection(a.out, section)
	if left := t.Rows() - n; left > 0 {
		fmt.Fprintf(a.out, "and %s\n", count(left, "more row", "more rows"))
	}
	return nil
}

func cellOf(t *artifact.Table, c artifact.Column, i int) any {
	switch c.Type {
	case artifact.Float:
		return t.Floats(c.Name)[i]
	case artifact.Int:
		return t.Ints(c.Name)[i]
	case artifact.Text:
		return t.Texts(c.Name)[i]
	case artifact.Truth:
		return t.Truths(c.Name)[i]
	case artifact.FloatList:
		return t.FloatLists(c.Name)[i]
	case artifact.IntList:
		return t.IntLists(c.Name)[i]
	case artifact.TextList:
		return t.TextLists(c.Name)[i]
	}
	return nil
}

// cellText writes a value for people; long lists are cut.
func cellText(v any) string {
	switch x := v.(type) {
	case float64:
		return fmt.Sprintf("%.6g", x)
	case []float64:
		return listText(len(x), func(i int) string { return fmt.Sprintf("%.4g", x[i]) })
	case []int64:
		return listText(len(x), func(i int) string { return fmt.Sprint(x[i]) })
	case []string:
		return listText(len(x), func(i int) string { return x[i] })
	case string:
		return cutTo(strings.Join(strings.Fields(x), " "), 60)
	}
	return fmt.Sprint(v)
}

func listText(n int, entry func(int) string) string {
	const shown = 6
	var parts []string
	for i := range min(n, shown) {
		parts = append(parts, entry(i))
	}
	if n > shown {
		parts = append(parts, fmt.Sprintf("… (%d)", n))
	}
	return strings.Join(parts, ", ")
}
