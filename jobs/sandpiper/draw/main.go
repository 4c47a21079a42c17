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
)

func main() {
	folder := filepath.Join("jobs", "sandpiper", "cut")
	if len(os.Args) > 1 {
		folder = os.Args[1]
	}
	if err := write(folder); err != nil {
		fmt.Fprintln(os.Stderr, "draw:", err)
		os.Exit(1)
	}
}

// write puts every drawing of the frame into the folder.
func write(folder string) error {
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return err
	}
	for _, d := range drawings() {
		if err := os.WriteFile(filepath.Join(folder, d.name+".dxf"), d.bytes(), 0o644); err != nil {
			return err
		}
		fmt.Printf("%s.dxf: %d entities\n", d.name, d.count)
	}
	return nil
}
