// Package plugintest is the suite that authors of extensions run.
//
//	func TestStage(t *testing.T) {
//		plugintest.Stage(t, mystage.Stage{}, kinds, plugintest.Case{Arguments: ...})
//		plugintest.Stage(t, plugintest.Process(t, ".", "mystage"), kinds, plugintest.Case{...})
//	}
//
// The first line runs the stage within the test, the second in a process of
// its own, built from the package that has its main function. Both must do the
// same. Element and ElementProcess, Reader and ReaderProcess do so for element
// types and recording readers.
package plugintest

import (
	"context"
	"os/exec"
	"path/filepath"
	"testing"

	"hushframe/core/extension"
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
	// Vary holds other right values of arguments, besides those that the suite thinks of: for files of other content,
	// maps, and whatever has no range, choices or example to go by.
	Vary map[string][]any
	// Inert names arguments that change nothing in this case, each with the reason.
	Inert map[string]string

	hollow string // the input whose files are taken away
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

// ElementProcess does the same and gives an element type.
func ElementProcess(t *testing.T, main, name string) extension.Element {
	t.Helper()
	return ElementExecutable(t, build(t, main), name)
}

// ReaderProcess does the same and gives a recording reader, which reads files: its sources must be of type *os.File.
func ReaderProcess(t *testing.T, main, name string) extension.Reader {
	t.Helper()
	return ReaderExecutable(t, build(t, main), name)
}

// ReaderExecutable is ReaderProcess for an executable that is there already, in whatever language.
func ReaderExecutable(t *testing.T, path, name string) extension.Reader {
	t.Helper()
	h := open(t, path)
	return extension.RemoteReader(find(t, h, extension.ReaderKind, name), caller(h, extension.ReaderKind, name), t.TempDir())
}

// ElementExecutable does the same for an element type.
func ElementExecutable(t *testing.T, path, name string) extension.Element {
	t.Helper()
	h := open(t, path)
	return extension.RemoteElement(find(t, h, extension.ElementKind, name), caller(h, extension.ElementKind, name), t.TempDir())
}

func caller(h *host.Host, kind, name string) extension.Caller {
	return func(ctx context.Context, r stage.ExtensionRequest) error { return h.Call(ctx, kind, name, r) }
}

func find(t *testing.T, h *host.Host, kind, name string) stage.Extension {
	t.Helper()
	for _, x := range h.Extensions() {
		if x.Kind == kind && x.Name == name {
			return x
		}
	}
	t.Fatalf("plugintest: the executable offers no %s %q", kind, name)
	return stage.Extension{}
}

func served(t *testing.T, path, name string) stage.Stage {
	t.Helper()
	s, ok := open(t, path).Stage(name)
	if !ok {
		t.Fatalf("plugintest: the executable offers no stage %q", name)
	}
	return s
}

func open(t *testing.T, path string) *host.Host {
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
	return h
}
