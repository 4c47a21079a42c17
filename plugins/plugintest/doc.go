// Package plugintest is the suite that authors of extensions run.
//
//	func TestStage(t *testing.T) {
//		plugintest.Stage(t, mystage.Stage{}, kinds, plugintest.Case{Arguments: ...})
//		plugintest.Stage(t, plugintest.Process(t, ".", "mystage"), kinds, plugintest.Case{...})
//	}
//
// The first line runs the stage within the test, the second in a process of
// its own, built from the package that has its main function. Both must do the
// same.
package plugintest

import (
	"context"
	"os/exec"
	"path/filepath"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/host"
)

// Case is one step that the stage must be able to run.
type Case struct {
	Name string
	// Folder is the folder of the job, against which files are read.
	Folder    string
	Arguments stage.Arguments
	Inputs    map[string][]*artifact.Artifact
}

// Stage reports each problem of a stage as an error of the test.
func Stage(t *testing.T, s stage.Stage, registry artifact.Registry, cases ...Case) {
	t.Helper()
	for _, p := range Check(t.TempDir(), s, registry, cases...) {
		t.Error(p)
	}
}

// Process builds an executable from a main package (an import path or a
// folder), starts it as a host does and gives a stage of it.
func Process(t *testing.T, main, name string) stage.Stage {
	t.Helper()
	return served(t, build(t, main), name)
}

func build(t *testing.T, main string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "extension.exe")
	if out, err := exec.Command("go", "build", "-o", path, main).CombinedOutput(); err != nil {
		t.Fatalf("plugintest: %v\n%s", err, out)
	}
	return path
}

func served(t *testing.T, path, name string) stage.Stage {
	t.Helper()
	e, err := host.Find(path)
	if err != nil {
		t.Fatal(err)
	}
	h, err := host.Open(context.Background(), host.Options{
		Extensions: []host.Executable{e}, Output: func(process, line string) { t.Logf("%s: %s", process, line) },
	})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(h.Close)
	s, ok := h.Stage(name)
	if !ok {
		t.Fatalf("plugintest: the executable offers no stage %q", name)
	}
	return s
}
