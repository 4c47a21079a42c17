package signal

import (
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/known"
)

// No row of signals is forgotten, nor a file that lies beside the rows: a test within this folder names each, as text in the code and not in a comment.
func TestEveryRowIsChecked(t *testing.T) {
	var code strings.Builder
	err := filepath.WalkDir(".", func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || !strings.HasSuffix(path, "_test.go") || path == "rows_test.go" {
			return err
		}
		text, err := os.ReadFile(path)
		if err != nil {
			return err
		}
		for line := range strings.Lines(string(text)) {
			if at := strings.Index(line, "//"); at >= 0 {
				line = line[:at] + "\n"
			}
			code.WriteString(line)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range known.Rows(t, "F_signals.json", "F-") {
		if !strings.Contains(code.String(), `"`+row.ID+`"`) {
			t.Errorf("row %s, %s, is checked nowhere", row.ID, row.Title)
		}
	}
	beside, err := filepath.Glob("../../testdata/known/F-*")
	if err != nil || len(beside) == 0 {
		t.Fatalf("files beside the rows: %v, %v", beside, err)
	}
	for _, path := range beside {
		if name := filepath.Base(path); !strings.Contains(code.String(), `"`+name+`"`) {
			t.Errorf("the file %s is read nowhere", name)
		}
	}
}
