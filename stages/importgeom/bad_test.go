package importgeom

import (
	"context"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

var update = flag.Bool("update", false, "write the messages that faults give to testdata, to be read over before they are kept")

type quiet struct{}

func (quiet) Progress(string, float64)        {}
func (quiet) Log(stage.Level, string, ...any) {}

// run calls the stage on a file of a folder.
func run(t testing.TB, folder, name string, with map[string]any) (*stage.Outcome, *stage.Call, error) {
	t.Helper()
	call := &stage.Call{
		Arguments: stage.Arguments{"airframe": name, "with": with},
		Outputs:   map[string]string{"geometry": t.TempDir(), "properties": t.TempDir()},
		Files:     stage.NewFiles(folder),
		Report:    quiet{},
	}
	out, err := Stage{}.Run(context.Background(), call)
	return out, call, err
}

// Every airframe file in testdata/geometry/bad is refused with the message beside it, and nothing is written.
func TestBadInput(t *testing.T) {
	folder := filepath.Join("..", "..", "testdata", "geometry", "bad")
	files, _ := filepath.Glob(filepath.Join(folder, "*.hcl"))
	if len(files) < 40 {
		t.Fatalf("only %d bad files", len(files))
	}
	for _, file := range files {
		name := filepath.Base(file)
		t.Run(strings.TrimSuffix(name, ".hcl"), func(t *testing.T) {
			out, call, err := run(t, folder, name, nil)
			if err == nil {
				t.Fatalf("was imported: %v", out.Figures)
			}
			f := fault.From(err)
			if f.Kind != fault.Input && f.Kind != fault.Missing || f.Argument != "airframe" {
				t.Errorf("kind %s, argument %q", f.Kind, f.Argument)
			}
			// The one thing that depends on the machine is where the folder is.
			got := strings.ReplaceAll(filepath.ToSlash(err.Error()), filepath.ToSlash(folder), "FOLDER") + "\n"
			golden := strings.TrimSuffix(file, ".hcl") + ".txt"
			if *update {
				if err := os.WriteFile(golden, []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(golden)
			if err != nil {
				t.Fatal(err)
			}
			if strings.ReplaceAll(string(want), "\r\n", "\n") != got {
				t.Errorf("got  %swant %s", got, want)
			}
			for output, dir := range call.Outputs {
				if left, _ := os.ReadDir(dir); len(left) > 0 {
					t.Errorf("%s was written: %v", output, left)
				}
			}
		})
	}
}
