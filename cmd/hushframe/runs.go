package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

func (a *app) runsCommand() *cobra.Command {
	var forget string
	c := &cobra.Command{
		Use:   "runs JOB",
		Short: "List the runs of a job that are remembered, and those that have a name",
		Long: `Lists the last runs of a job that came to something else, the latest first, and
every run with a name in the store beside it. Each has an id, the hash of all it
was made of and came to: equal runs have equal ids and are listed once.

` + runHelp,
		Args:              oneJob,
		ValidArgsFunction: completeJob,
	}
	c.Flags().StringVar(&forget, "forget", "", "take the name from a run, so that prune may remove it")
	c.RunE = func(_ *cobra.Command, args []string) error {
		folder, err := jobFolder(args[0])
		if err != nil {
			return err
		}
		s := store.View(folder, registry())
		if forget != "" {
			if err := s.ForgetRun(forget); err != nil {
				return err
			}
			fmt.Fprintf(a.out, "the name %s is free\n", forget)
			return nil
		}
		labels := map[string][]string{} // by id
		for _, label := range s.NamedRuns() {
			if r, err := s.FindRun("", label); err == nil {
				labels[r.ID] = append(labels[r.ID], label)
			}
		}
		section := stage.Section{Title: "Runs of " + jobName(args[0]), Columns: []stage.Column{{Name: ""}, {Name: "id"}, {Name: "name"}, {Name: "settings given"}, {Name: "requirements"}}}
		add := func(ago string, id string) {
			section.Rows = append(section.Rows, append([]string{ago, shortRun(id), strings.Join(labels[id], ", ")}, tellRun(folder, id)...))
			delete(labels, id)
		}
		last, err := s.LastRun(jobName(args[0]))
		switch {
		case fault.KindOf(err) == fault.Missing && len(labels) > 0:
		case err != nil:
			return err
		default:
			if last.ID != "" {
				add("last", last.ID)
			}
			for i, id := range last.Earlier {
				add(fmt.Sprintf("-%d", i+1), id)
			}
		}
		if len(section.Rows) > 0 {
			writeSection(a.out, section)
		}
		others := stage.Section{Title: "Other runs with a name", Columns: []stage.Column{{Name: "name"}, {Name: "id"}, {Name: "job"}, {Name: "settings given"}, {Name: "requirements"}}}
		for _, label := range s.NamedRuns() {
			r, err := s.FindRun("", label)
			if err != nil || labels[r.ID] == nil {
				continue
			}
			others.Rows = append(others.Rows, append([]string{label, shortRun(r.ID), r.Job}, tellRun(folder, r.ID)...))
		}
		if len(others.Rows) > 0 {
			writeSection(a.out, others)
		}
		fmt.Fprintln(a.out)
		return nil
	}
	return c
}

// tellRun says which settings were given to a run and how its requirements stand.
func tellRun(folder, id string) []string {
	r := &storedRun{words: id, store: store.View(folder, registry())}
	x, err := r.open(id)
	if err != nil {
		return []string{"", "pruned"}
	}
	var given []string
	acc := account.Decode(x)
	for _, s := range acc.Settings {
		if s.Overridden {
			given = append(given, s.Name+"="+s.Value)
		}
	}
	holds := 0
	for _, v := range acc.Verdicts {
		if v.Holds {
			holds++
		}
	}
	stand := "none"
	if n := len(acc.Verdicts); n > 0 {
		stand = fmt.Sprintf("%d of %d hold", holds, n)
	}
	return []string{strings.Join(given, ", "), stand}
}
