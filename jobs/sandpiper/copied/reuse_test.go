package copied

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/run"
	"hushframe/jobs/inprocess"
)

// TestWhatRunsAgain changes one thing after another in a copy of the demo, and
// looks at what runs again.
func TestWhatRunsAgain(t *testing.T) {
	folder := copyFolder(t)
	set := map[string]string{"mesh_size": coarse}
	rerun := func() map[string]run.State {
		d, err := inprocess.Run(context.Background(), filepath.Join(folder, "baseline.hcl"), folder, set)
		if err != nil {
			t.Fatal(err)
		}
		states := map[string]run.State{}
		for _, s := range d.Result.Steps {
			states[s.Label] = s.State
		}
		return states
	}
	expect := func(what string, ran ...string) {
		t.Helper()
		got := rerun()
		want := map[string]bool{}
		for _, l := range ran {
			want[l] = true
		}
		for label, state := range got {
			if (state == run.Ran) != want[label] {
				t.Errorf("%s: step %s %s", what, label, state)
			}
		}
	}
	edit := func(name, old, new string) {
		t.Helper()
		path := filepath.Join(folder, name)
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		text := strings.Replace(string(data), old, new, 1)
		if text == string(data) {
			t.Fatalf("%s holds no %q", name, old)
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	kept := func() int {
		entries, err := os.ReadDir(filepath.Join(folder, ".hushframe", "kept"))
		if err != nil {
			t.Fatal(err)
		}
		return len(entries)
	}
	expect("first run", "frame", "shells", "modes", "flight", "hover", "check", "page")
	expect("unchanged job")
	edit("baseline.hcl", `from       = "80 Hz"`, `from       = "90 Hz"`)
	expect("another sweep", "flight", "check", "page")
	before := kept()
	// A loss factor neither meshes nor solves: the stage solve describes its modes anew from those it kept.
	set["carbon_loss_factor"] = "0.02"
	expect("another loss factor", "frame", "modes", "flight", "check", "page")
	if n := kept(); n != before {
		t.Errorf("another loss factor solved again: %d sets of modes are kept, not %d", n, before)
	}
	// One vertex of the clamp plate: all that depends on it, and not the recording.
	edit("cut/clamp.dxf", "-31.000000", "-31.100000")
	expect("a moved vertex", "frame", "shells", "modes", "flight", "check", "page")
	if n := kept(); n == before {
		t.Error("a moved vertex did not solve again")
	}
}
