package main

import (
	"fmt"

	"github.com/spf13/cobra"
)

func (a *app) checkCommand() *cobra.Command {
	var job jobFlags
	c := &cobra.Command{
		Use:   "check JOB",
		Short: "Check a job without running it, and show its plan",
		Long: `Reads a job, checks everything that can be checked before a stage runs, and
shows the steps in the order of the plan with what each takes from which other.

` + exitHelp,
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
		fmt.Fprint(a.out, p)
		return nil
	}
	return c
}
