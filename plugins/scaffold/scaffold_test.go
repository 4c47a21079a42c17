package scaffold

import (
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
)

// Each kind builds, passes the suite and runs in its sample job as it stands.
func TestWrittenExtensionsWork(t *testing.T) {
	root := t.TempDir()
	program := filepath.Join(root, "hushframe.exe")
	run := func(folder string, command ...string) string {
		t.Helper()
		c := exec.Command(command[0], command[1:]...)
		c.Dir = folder
		c.Env = append(os.Environ(), "HUSHFRAME_EXTENSIONS="+filepath.Join(root, "none"))
		out, err := c.CombinedOutput()
		if err != nil {
			t.Errorf("%s: %v\n%s", strings.Join(command, " "), err, out)
		}
		return string(out)
	}
	run(".", "go", "build", "-o", program, "hushframe/cmd/hushframe")
	for _, kind := range Kinds() {
		t.Run(kind, func(t *testing.T) {
			folder := filepath.Join(root, "my-"+kind)
			if _, err := Write(Options{Kind: kind, Name: "my-" + kind, Folder: folder, Source: "../.."}); err != nil {
				t.Fatal(err)
			}
			if out := run(folder, "gofmt", "-l", "."); out != "" {
				t.Errorf("gofmt would change %s", out)
			}
			run(folder, "go", "vet", ".")
			run(folder, "go", "test", ".")
			run(folder, "go", "build", "-o", "extensions/", ".")
			run(folder, program, "extensions", "pin", "job.hcl")
			if out := run(folder, program, "run", "job.hcl"); !strings.Contains(out, "every requirement holds") || strings.Contains(out, "not judged") {
				t.Errorf("the sample job:\n%s", out)
			}
			// What is there already is never written over.
			if _, err := Write(Options{Kind: kind, Name: "my-" + kind, Folder: folder, Source: "../.."}); fault.KindOf(err) != fault.Input {
				t.Errorf("into a folder with files: %v", err)
			}
		})
	}
}

func TestRefusals(t *testing.T) {
	for want, o := range map[string]Options{
		`"filter" is no kind of extension; write one of stage, element, reader`: {Kind: "filter", Name: "a", Source: "../.."},
		`"My Reader" is no name`:               {Kind: "reader", Name: "My Reader", Source: "../.."},
		"the source of hushframe is not there": {Kind: "reader", Name: "a", Source: "."},
		"its go.mod is of another module":      {Kind: "reader", Name: "a", Source: "../pebble"},
	} {
		o.Folder = filepath.Join(t.TempDir(), "x")
		if _, err := Write(o); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %s", err, want)
		}
		if _, err := os.Stat(o.Folder); err == nil {
			t.Errorf("a refusal left %s", o.Folder)
		}
	}
}
