package main

import (
	"bytes"
	"os"
	"path/filepath"
	"testing"
)

// TestCutFilesAreThoseDrawn holds the committed cut files to their generator.
func TestCutFilesAreThoseDrawn(t *testing.T) {
	for _, d := range drawings() {
		kept, err := os.ReadFile(filepath.Join("..", "cut", d.Name+".dxf"))
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(kept, d.Bytes()) {
			t.Errorf("cut/%s.dxf is not what this generator draws; run go run ./jobs/sandpiper/draw", d.Name)
		}
	}
}
