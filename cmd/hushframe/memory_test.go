package main

import (
	"runtime"
	"strings"
	"testing"

	"hushframe/plugins/host"
)

// A limit that nobody watches is said to be one, with its place; where it is watched nothing is said.
func TestUnwatchedMemory(t *testing.T) {
	w := newTower(t)
	w.write("limited.hcl", "job \"limited\" {}\nstage \"ring\" \"great\" {\n  bell = \"great.txt\"\n  memory_limit = \"2 GiB\"\n}\n")
	const warning = "memory is not watched on this system"
	for _, verb := range [][]string{{"check", "limited.hcl"}, {"run", "bells.hcl", "--memory", "8 GiB"}} {
		path := w.dir + "/" + verb[1]
		args := append([]string{verb[0], path}, verb[2:]...)
		w.unwatched = false
		if code, _, err := w.call(args...); code != 0 || strings.Contains(err, warning) {
			t.Errorf("%q where memory is watched: exit %d\n%s", verb, code, err)
		}
		w.unwatched = true
		code, _, err := w.call(args...)
		if code != 0 || strings.Count(err, warning) != 1 {
			t.Errorf("%q where memory is not watched: exit %d\n%s", verb, code, err)
		}
		if verb[0] == "check" && !strings.Contains(strings.Join(strings.Fields(err), " "), `Warning: Limit not watched limited.hcl, line 2, in stage "ring" "great"`) {
			t.Errorf("the warning has no place:\n%s", err)
		}
	}
	if got, want := host.WatchesMemory(), runtime.GOOS == "linux"; got != want {
		t.Errorf("the host says that memory is watched: %v, on %s", got, runtime.GOOS)
	}
}
