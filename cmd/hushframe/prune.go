package main

import (
	"fmt"
	"math"
	"time"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/store"
)

func (a *app) pruneCommand() *cobra.Command {
	var unused, size string
	var pretend bool
	c := &cobra.Command{
		Use:   "prune JOB",
		Short: "Shrink the store of results beside a job",
		Long: `Removes results that no run has used for a time, then those used longest ago
until the store is small enough. Whatever is removed is computed again when a job
needs it. The store is shared by all jobs of the folder.`,
		Args:              oneJob,
		ValidArgsFunction: completeJob,
	}
	c.Flags().StringVar(&unused, "unused-for", "720 h", "remove what no run has used for so long")
	c.Flags().StringVar(&size, "size", "", `remove what was used longest ago until this is left, such as "2 GiB"`)
	c.Flags().BoolVar(&pretend, "pretend", false, "say what would be removed and remove nothing")
	c.RunE = func(_ *cobra.Command, args []string) error {
		folder, err := jobFolder(args[0])
		if err != nil {
			return err
		}
		o := store.PruneOptions{Size: -1, Pretend: pretend}
		seconds, err := amount("--unused-for", unused, "time", math.MaxInt64/2/float64(time.Second))
		if err != nil {
			return err
		}
		o.UnusedFor = time.Duration(seconds * float64(time.Second))
		if size != "" {
			bytes, err := amount("--size", size, "memory", math.MaxInt64/2)
			if err != nil {
				return err
			}
			o.Size = int64(bytes)
		}
		r, err := store.Prune(folder, o)
		if err != nil {
			return err
		}
		did := "removed"
		if pretend {
			did = "would remove"
		}
		fmt.Fprintf(a.out, "%s %s, %s and %s: %s; %s left\n", did, count(r.Records, "result", "results"),
			count(r.Artifacts, "artifact", "artifacts"), count(r.Kept, "intermediate result", "intermediate results"),
			bytesText(r.Freed), bytesText(r.Left))
		return nil
	}
	return c
}

// bytesText writes a size in powers of 1024.
func bytesText(n int64) string {
	x, unit := float64(n), "B"
	for _, u := range []string{"KiB", "MiB", "GiB", "TiB"} {
		if x < 1024 {
			break
		}
		x, unit = x/1024, u
	}
	if unit == "B" {
		return fmt.Sprintf("%d B", n)
	}
	return fmt.Sprintf("%.1f %s", x, unit)
}
