// Command judge sets the modes that identify finds in a flight of the Sandpiper against the truth behind it:
//
//	go run ./jobs/sandpiper/judge
//	go run ./jobs/sandpiper/judge FOLDER...
//
// Each folder holds what fly wrote. A true mode counts as seen by the gyro if it makes more than half of the density at its
// own frequency along its own direction. At best is the standard error that no unbiased method goes below who does not know the modes (package identify,
// Bound); where that is more than the limits the mode is not knowable from this recording. Several flights are summed up at the end.
package main

import (
	"context"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
)

func main() {
	job := flag.String("job", filepath.Join("jobs", "sandpiper", "judge", "judge.hcl"), "job that finds the modes")
	flag.Parse()
	folders := flag.Args()
	if len(folders) == 0 {
		folders = []string{filepath.Join("jobs", "sandpiper", "flights")}
	}
	var all verdict
	for _, folder := range folders {
		v, err := one(context.Background(), os.Stdout, *job, folder)
		if err != nil {
			fmt.Fprintln(os.Stderr, "judge:", err)
			os.Exit(1)
		}
		all.add(v)
	}
	if len(folders) > 1 {
		fmt.Printf("%d flights together\n", len(folders))
		all.sum(os.Stdout)
	}
}

// one judges the flight in a folder.
func one(ctx context.Context, w io.Writer, job, folder string) (verdict, error) {
	t, err := readTruth(filepath.Join(folder, "hover-03-truth.json"))
	if err != nil {
		return verdict{}, err
	}
	recording, err := filepath.Abs(filepath.Join(folder, "hover-03.csv.gz"))
	if err != nil {
		return verdict{}, err
	}
	x, err := identify(ctx, job, recording)
	if err != nil {
		return verdict{}, err
	}
	fmt.Fprintln(w, folder)
	v := judge(t, x)
	v.print(w)
	return v, nil
}
