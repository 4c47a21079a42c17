// Command judge sets the modes that identify finds in a flight of the Sandpiper against the truth behind it:
//
//	go run ./jobs/sandpiper/judge
//	go run ./jobs/sandpiper/judge FOLDER...
//
// Each folder holds what fly wrote. A true mode counts as seen by the gyro if it makes more than half of the density at its
// own frequency along its own direction.
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
	for _, folder := range folders {
		if err := one(context.Background(), os.Stdout, *job, folder); err != nil {
			fmt.Fprintln(os.Stderr, "judge:", err)
			os.Exit(1)
		}
	}
}

// one judges the flight in a folder.
func one(ctx context.Context, w io.Writer, job, folder string) error {
	t, err := readTruth(filepath.Join(folder, "hover-03-truth.json"))
	if err != nil {
		return err
	}
	recording, err := filepath.Abs(filepath.Join(folder, "hover-03.csv.gz"))
	if err != nil {
		return err
	}
	x, err := identify(ctx, job, recording)
	if err != nil {
		return err
	}
	fmt.Fprintln(w, folder)
	judge(t, x).print(w)
	return nil
}
