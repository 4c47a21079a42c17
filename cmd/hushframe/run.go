package main

import (
	"fmt"
	"math"
	"runtime"
	"time"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/store"
)

func (a *app) runCommand() *cobra.Command {
	var (
		job           jobFlags
		threads       int
		memory, name  string
		force, verify bool
		asJSON        bool
	)
	c := &cobra.Command{
		Use:   "run JOB",
		Short: "Run a job: compute what has changed, judge the requirements, write the reports",
		Long: `Runs a job file, or a folder of them. Steps whose inputs are as before are not
run again; independent steps run side by side. Results go to standard output;
progress, log lines and mistakes to standard error. With --json the whole result
is one object with figures, requirements, tables, warnings and artifacts; its
numbers are in SI units, and runs that come to the same write the same bytes.

` + exitHelp,
		Example:           "  hushframe run baseline.hcl --set arm_thickness=6mm",
		Args:              oneJob,
		ValidArgsFunction: completeJob,
	}
	job.add(c)
	c.Flags().IntVar(&threads, "threads", 0, "threads for all steps together (default: as many as the machine has)")
	c.Flags().StringVar(&memory, "memory", "", `memory for all steps together, such as "8 GiB" (default: no limit)`)
	c.Flags().StringVar(&name, "name", "", "keep the run under a name, for diff; prune leaves it alone")
	c.Flags().BoolVar(&asJSON, "json", false, "write the result as one JSON object in place of tables")
	c.Flags().BoolVar(&force, "force", false, "run every step, also those whose inputs are as before")
	c.Flags().BoolVar(&verify, "verify", false, "read and check stored results in full before they are reused")
	c.RunE = func(c *cobra.Command, args []string) error {
		began, ctx := time.Now(), c.Context()
		if threads < 0 {
			return fault.New(fault.Input, "--threads is %d; it cannot be negative", threads)
		}
		if threads == 0 {
			threads = runtime.GOMAXPROCS(0)
		}
		if name != "" {
			if err := store.CheckLabel(name); err != nil {
				return fault.From(err).In("read --name", name)
			}
		}
		bytes := 0.0
		if memory != "" {
			var err error
			if bytes, err = amount("--memory", memory, "memory", math.MaxInt64/2); err != nil {
				return err
			}
			if !a.watchesMemory {
				a.log.Warn().Msg("--memory: " + unwatchedText)
			}
		}
		folder, err := jobFolder(args[0])
		if err != nil {
			return err
		}
		h, err := a.openHost(ctx, folder)
		if err != nil {
			return err
		}
		defer h.Close()
		p, err := a.load(ctx, h, args[0], &job)
		if err != nil {
			return err
		}
		st, err := store.Open(ctx, p.Job.Folder, registry())
		if err != nil {
			return err
		}
		defer st.Close()
		w := a.watch(p)
		result, err := run.Run(ctx, run.Options{
			Plan: p, Source: h, Store: st, Observer: w, Name: jobName(args[0]), Program: program(), Label: name,
			Threads: threads, Memory: int64(bytes), Force: force, Verify: verify,
		})
		w.close()
		if err != nil {
			return err
		}
		code := runExit(result)
		if asJSON {
			if err := writeJSON(a.out, describeRun(p, result, code)); err != nil {
				return err
			}
		} else {
			a.summary(p.Job.Folder, st, result)
		}
		a.diagnose(p.Job, result.Diagnostics)
		for _, s := range result.Steps {
			if s.State == run.Failed {
				a.lines(s.Label, s.Fault)
			}
		}
		if !asJSON {
			fmt.Fprintf(a.out, "\n%s\n", closing(result, time.Since(began)))
		}
		if code != exitHeld {
			return exitError(code)
		}
		return nil
	}
	return c
}

// runExit is the exit code of a run.
func runExit(r *run.Result) int {
	switch {
	case r.Stopped:
		return exitStopped
	case r.Failed():
		return exitFailed
	case len(r.Broken()) > 0:
		return exitBroken
	}
	return exitHeld
}
