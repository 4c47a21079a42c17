// Command knock writes the recording of the hammer test anew: go run ./jobs/bench/knock.
package main

import (
	"compress/gzip"
	"fmt"
	"os"
	"path/filepath"

	"hushframe/jobs/bench"
)

func main() {
	if err := write(filepath.Join("jobs", "bench", "arm.csv.gz")); err != nil {
		fmt.Fprintln(os.Stderr, "knock:", err)
		os.Exit(1)
	}
}

func write(path string) error {
	f, err := os.Create(path)
	if err != nil {
		return err
	}
	defer f.Close()
	z, err := gzip.NewWriterLevel(f, gzip.BestCompression)
	if err != nil {
		return err
	}
	if err := bench.Knock(z); err != nil {
		return err
	}
	if err := z.Close(); err != nil {
		return err
	}
	return f.Close()
}
