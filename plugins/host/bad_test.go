package host

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"hushframe/core/extension"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	runner "hushframe/core/pipeline/run"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
	"hushframe/core/signal/recording"
)

// badOnce builds the deliberately bad extension once for all tests.
var badOnce = sync.OnceValues(func() ([]byte, error) {
	folder, err := os.MkdirTemp("", "bad")
	if err != nil {
		return nil, err
	}
	defer os.RemoveAll(folder)
	path := filepath.Join(folder, "bad.exe")
	if out, err := exec.Command("go", "build", "-o", path, "./testdata/bad").CombinedOutput(); err != nil {
		return nil, fmt.Errorf("%v\n%s", err, out)
	}
	return os.ReadFile(path)
})

// buildBad puts it in a folder under a name.
func buildBad(t *testing.T, folder, name string) Executable {
	t.Helper()
	data, err := badOnce()
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(folder, name+".exe")
	if err := os.WriteFile(path, data, 0o755); err != nil {
		t.Fatal(err)
	}
	e, err := Find(path)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

// A bad extension gives a clear error in the job, and harms neither host nor store nor leaves a process.
func TestBadStageInJob(t *testing.T) {
	e := buildBad(t, t.TempDir(), "bad")
	folder := t.TempDir()
	beads := artifact.NewRegistry(artifact.Kind{Name: "beads", Version: 1, Tables: []artifact.TableSpec{
		{Name: "beads", Columns: []artifact.Column{{Name: "mass", Type: artifact.Float, Unit: "kg"}}}}})
	carry := func(how, limits string) (*runner.Result, time.Duration) {
		t.Helper()
		text := "job \"j\" {}\nstage \"bad\" \"b\" {\n  how = \"" + how + "\"\n" + limits + "\n}\n"
		path := filepath.Join(folder, "job.hcl")
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		ctx := context.Background()
		h, err := Open(ctx, Options{Extensions: []Executable{e}, Grace: 300 * time.Millisecond})
		if err != nil {
			t.Fatal(err)
		}
		defer h.Close()
		j, diags := job.Load(ctx, path, job.Options{Describe: func(_ context.Context, name string) (stage.Description, error) {
			s, _ := h.Stage(name)
			return s.Describe(), nil
		}})
		if diags.HasErrors() {
			t.Fatal(diags)
		}
		p, _ := plan.Make(j)
		st, err := store.Open(ctx, folder, beads)
		if err != nil {
			t.Fatal(err)
		}
		defer st.Close()
		began := time.Now()
		r, err := runner.Run(ctx, runner.Options{Plan: p, Source: h, Store: st, Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		return r, time.Since(began)
	}
	const output = "take over output: beads: stage bad did not write its output as declared: "
	for _, c := range []struct {
		how, limits string
		kind        fault.Kind
		want, line  string
	}{
		{"crash", "", fault.Crash, "the process ended without answering (exit status 9)", "about to fall"},
		{"panic", "", fault.Internal, "a mistake in the program: lost count", "misbehave"},
		{"deaf", `time_limit = "0.3 s"`, fault.Limit, "it did not finish within 300ms", ""},
		{"leak", `memory_limit = "200 MiB"`, fault.Limit, "where 200 MiB were granted, and was killed", ""},
		{"other-kind", "", fault.Protocol, output + `the artifact kind "pearls" is not known`, ""},
		{"ill-typed", "", fault.Protocol, output + "beads: column beads.mass is utf8 in the file, where the kind wants float", ""},
		{"nothing", "", fault.Missing, output + "there is no artifact.json", ""},
		{"stray-file", "", fault.Protocol, output + "the file diary.txt is no part of the artifact", ""},
		{"oversized", "", fault.Protocol, "beads.arrow has 1099511627776 bytes, its artifact says", ""},
		{"cut", "", fault.Protocol, "beads.arrow has 100 bytes, its artifact says", ""},
		{"lost-figure", "", fault.Protocol, `stage bad reports the figure "weight", which it does not declare`, ""},
		{"large-answer", "", fault.Limit, "figures and summary take 40 MiB, where 32 are allowed", ""},
		{"plain-error", "", fault.Internal, "it did not work", ""},
	} {
		r, took := carry(c.how, c.limits)
		f := r.Steps[0].Fault
		if f == nil || f.Kind != c.kind || !strings.Contains(f.Error(), c.want) {
			t.Errorf("%s: %+v, want %s %s", c.how, f, c.kind, c.want)
			continue
		}
		if all := strings.Join(f.Lines, "\n"); !strings.Contains(all, c.line) {
			t.Errorf("%s: lines %q lack %q", c.how, all, c.line)
		}
		if took > 20*time.Second {
			t.Errorf("%s: it took %v", c.how, took)
		}
		waitNoChildren(t)
		// The account of a run is the host's own; nothing of the stage may be there.
		left, _ := filepath.Glob(filepath.Join(folder, ".hushframe", "artifacts", "*", "*.arrow"))
		for _, file := range left {
			manifest, err := os.ReadFile(filepath.Join(filepath.Dir(file), "artifact.json"))
			var a struct{ Kind string }
			if err != nil || json.Unmarshal(manifest, &a) != nil || a.Kind != account.KindName {
				t.Errorf("%s: the store took %s: %s", c.how, file, manifest)
			}
		}
		if len(left) == 0 {
			t.Errorf("%s: the store has no account of the run", c.how)
		}
	}
	// Printing is no misdeed, and the store is still good.
	for _, how := range []string{"print", ""} {
		if r, _ := carry(how, ""); r.Failed() {
			t.Errorf("%q: %v", how, r.Steps[0].Fault)
		}
	}
	if r, _ := carry("", ""); r.Steps[0].State != runner.Reused {
		t.Errorf("a good result is not found again: %v", r.Steps[0].State)
	}
}

// Calls of element types and readers are looked after as steps are.
func TestBadTools(t *testing.T) {
	e := buildBad(t, t.TempDir(), "bad")
	h, err := Open(context.Background(), Options{Extensions: []Executable{e}, Grace: 300 * time.Millisecond})
	if err != nil {
		t.Fatal(err)
	}
	defer h.Close()
	file, err := os.Open(os.Args[0])
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	call := func(kind, name string) extension.Caller {
		return func(ctx context.Context, r stage.ExtensionRequest) error {
			r.Threads, r.Memory = 1, 200<<20
			return h.Call(ctx, kind, name, r)
		}
	}
	brick := extension.RemoteElement(stage.Extension{Kind: "element", Name: "brick"}, call("element", "brick"), t.TempDir())
	tape := extension.RemoteReader(stage.Extension{Kind: "reader", Name: "tape"}, call("reader", "tape"), t.TempDir())
	in := &element.Batch{Nodes: make([]float64, 9), Section: make([]int32, 1), Sections: make([]laminate.Section, 1)}
	for _, c := range []struct {
		how  string
		kind fault.Kind
		want string
	}{
		{"crash", fault.Crash, "the process ended without answering (exit status 9)"},
		{"panic", fault.Internal, "a mistake in the program: lost count"},
		{"leak", fault.Limit, "where 200 MiB were granted, and was killed"},
		{"deaf", fault.Limit, "it did not end within 300ms and its process was killed"},
	} {
		for kind, f := range map[string]func(ctx context.Context) error{
			"element": func(ctx context.Context) error {
				return brick.Matrices(ctx, stage.Arguments{"how": c.how}, in, element.NewMatrices(1, 18))
			},
			"reader": func(ctx context.Context) error {
				return tape.Read(ctx, file, stage.Arguments{"how": c.how}, recording.Request{Columns: []string{"gx"}}, func(recording.Batch) error { return nil })
			},
		} {
			limit := 30 * time.Second
			if c.how == "deaf" {
				limit = 200 * time.Millisecond
			}
			ctx, cancel := context.WithTimeout(context.Background(), limit)
			err := f(ctx)
			cancel()
			if fault.KindOf(err) != c.kind || !strings.Contains(err.Error(), c.want) {
				t.Errorf("%s, %s: %v, want %s", kind, c.how, err, c.want)
			}
		}
	}
	if err := tape.Read(context.Background(), file, stage.Arguments{"how": ""}, recording.Request{Columns: []string{"gx"}}, func(recording.Batch) error { return nil }); fault.KindOf(err) != fault.Protocol {
		t.Errorf("no rows and no error: %v", err)
	}
	h.Close()
	waitNoChildren(t)
}

func TestBadStarts(t *testing.T) {
	folder := t.TempDir()
	for name, want := range map[string]string{
		"bad-crash": "the process ended at its start (exit status 4)",
		"bad-print": `it printed "hello, host" where the handshake of the protocol was due`,
		"bad-twice": `two executables offer the element "brick"`,
	} {
		_, err := Open(context.Background(), Options{Extensions: []Executable{buildBad(t, folder, name)}})
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, want %s", name, err, want)
		}
	}
	// A file that changes after it was checked is not started.
	e := buildBad(t, folder, "bad")
	data, _ := os.ReadFile(e.Path)
	if err := os.WriteFile(e.Path, append(data, 0), 0o755); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(context.Background(), Options{Extensions: []Executable{e}}); err == nil || !strings.Contains(err.Error(), "has changed since it was checked") || !strings.Contains(err.Error(), e.SHA256) {
		t.Errorf("a changed executable: %v", err)
	}
	waitNoChildren(t)
}
