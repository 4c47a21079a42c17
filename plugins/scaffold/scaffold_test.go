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
			spoil(t, folder, kind)
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

// spoil lets a written extension ignore its argument: its own test must say so, in words.
func spoil(t *testing.T, folder, kind string) {
	t.Helper()
	x := map[string]struct{ read, ignore, want string }{
		"stage":   {`call.Arguments.SI("from")`, "20.0", "argument from changes nothing: with"},
		"element": {`options.Number("factor")`, "1", "option factor changes nothing: with 2, 0.5 the matrices are the same to the last byte; is it read?"},
		"reader":  {`options.Text("separator")`, `","`, `option separator changes nothing: with ";" the outcome is the same to the last byte; is it read?`},
	}[kind]
	path := filepath.Join(folder, kind+".go")
	whole, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	spoiled := strings.ReplaceAll(string(whole), x.read, x.ignore)
	if spoiled == string(whole) {
		t.Fatalf("%s does not read %s", path, x.read)
	}
	if err := os.WriteFile(path, []byte(spoiled), 0o644); err != nil {
		t.Fatal(err)
	}
	c := exec.Command("go", "test", "-run", "^Test(Stage|Element|Reader)$", ".")
	c.Dir = folder
	if out, err := c.CombinedOutput(); err == nil || !strings.Contains(string(out), x.want) {
		t.Errorf("with %s ignored (%v), want %q:\n%s", x.read, err, x.want, out)
	}
	if err := os.WriteFile(path, whole, 0o644); err != nil {
		t.Fatal(err)
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
