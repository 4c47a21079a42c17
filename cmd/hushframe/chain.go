package main

import (
	"fmt"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

func (a *app) chainCommand() *cobra.Command {
	var job jobFlags
	c := &cobra.Command{
		Use:   "chain JOB",
		Short: "Show the steps of a job and which results are already there",
		Long: `Shows for each step whether a run would find its result, and how long it took
when it ran. A step marked as open depends on one that has to run first.`,
		Args:              oneJob,
		ValidArgsFunction: completeJob,
	}
	job.add(c)
	c.RunE = func(c *cobra.Command, args []string) error {
		folder, err := jobFolder(args[0])
		if err != nil {
			return err
		}
		h, err := a.openHost(c.Context(), folder)
		if err != nil {
			return err
		}
		defer h.Close()
		p, err := a.load(c.Context(), h, args[0], &job)
		if err != nil {
			return err
		}
		looks := run.LookAhead(c.Context(), run.Options{
			Plan: p, Source: h, Store: store.View(p.Job.Folder, registry()), Program: program(),
		})
		section := stage.Section{Title: p.Job.Name, Text: p.Job.About, Columns: []stage.Column{
			{Name: "step"}, {Name: "stage"}, {Name: "result"}, {Name: "took", Right: true}, {Name: "needs"}}}
		for i, l := range looks {
			state, took := "open", ""
			switch {
			case l.Stored:
				state, took = "stored", duration(time.Duration(l.Record.Seconds*float64(time.Second)))
			case l.Diagnostics.HasErrors():
				state = "arguments are wrong"
			case l.Key != "":
				state = "to run"
			}
			section.Rows = append(section.Rows, []string{l.Label, l.Kind, state, took, strings.Join(p.Steps[i].Needs, ", ")})
			a.diagnose(p.Job, l.Diagnostics)
		}
		writeSection(a.out, section)
		fmt.Fprintln(a.out)
		return nil
	}
	return c
}
