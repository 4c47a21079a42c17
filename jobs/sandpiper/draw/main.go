// Command draw writes the cut files of the Sandpiper, an invented five-inch
// survey quadrotor, into the folder given (default: ../cut beside its source).
//
//	go run ./jobs/sandpiper/draw jobs/sandpiper/cut
//
// Every dimension of the frame stands in plates.go, in millimetres.
package main

import (
	"fmt"
	"os"
	"path/filepath"

	"hushframe/jobs/drawing"
)

func main() {
	folder := filepath.Join("jobs", "sandpiper", "cut")
	if len(os.Args) > 1 {
		folder = os.Args[1]
	}
	if err := drawing.WriteAll(folder, drawings()...); err != nil {
		fmt.Fprintln(os.Stderr, "draw:", err)
		os.Exit(1)
	}
}
