package main

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"

	"hushframe/core/pipeline/pins"
)

// shortIDs are ids and checksums as tables show them.
var shortIDs = regexp.MustCompile(`\b[0-9a-f]{12}\b`)

// newPlank is a folder with the job of a plank.
func newPlank(t *testing.T) *tower {
	w := &tower{t: t, dir: t.TempDir()}
	w.job = filepath.Join(w.dir, "plank.hcl")
	w.write("plank.hcl", plankJob)
	return w
}

func (w *tower) must(code int, args ...string) string {
	w.t.Helper()
	got, out, err := w.call(args...)
	if got != code {
		w.t.Fatalf("%v: exit %d, want %d: %s", args, got, code, err)
	}
	return out
}

// Half as thick again and on another mesh: the shapes are those of before, the frequencies half as high again, the fourth
// mode leaves what was solved, and a requirement breaks.
func TestDiff(t *testing.T) {
	w := newPlank(t)
	w.must(exitHeld, "run", w.job, "--name", "thin")
	w.must(exitBroken, "run", w.job, "--set", "thickness=3mm", "--set", "columns=14")
	text := w.must(exitBroken, "diff", w.job+"@thin", w.job)
	heads, rest, _ := strings.Cut(text, "\nModes before")
	approve(t, "diff", "\nModes before"+rest)
	if len(shortIDs.FindAllString(heads, -1)) != 2 || !strings.Contains(heads, "plank.hcl@thin  ") {
		t.Errorf("%s", heads)
	}
	for line := range strings.Lines(text) {
		if n := len([]rune(strings.TrimRight(line, "\n"))); n > 120 {
			t.Errorf("%d columns: %s", n, line)
		}
	}
	for _, args := range [][]string{{w.job}, {w.job + "@-1"}, {w.job + "@thin"}, {w.dir + "@thin", w.job}, {w.job + "@thin", w.job}} {
		if got := w.must(exitBroken, append([]string{"diff"}, args...)...); strings.SplitAfterN(got, "Modes before", 2)[1] != strings.SplitAfterN(text, "Modes before", 2)[1] {
			t.Errorf("%v shows something else:\n%s", args, got)
		}
	}
	if back := w.must(exitHeld, "diff", w.job, "@thin"); !strings.Contains(back, "1 requirement holds now") || !strings.Contains(back, "-33.3") {
		t.Errorf("the other way round:\n%s", back)
	}
	if same := w.must(exitHeld, "diff", w.job, w.job); !strings.Contains(same, "They are the same") {
		t.Errorf("a run with itself:\n%s", same)
	}

	var doc diffDocument
	if err := json.Unmarshal([]byte(w.must(exitBroken, "diff", w.job+"@thin", w.job, "--json")), &doc); err != nil {
		t.Fatal(err)
	}
	if doc.Format != 1 || doc.Exit != exitBroken || len(doc.Frames) != 1 || len(doc.Settings) != 2 || *doc.Settings[1].After != "3mm" {
		t.Fatalf("%+v", doc)
	}
	x := doc.Frames[0].Difference
	if x.Units["modes"]["frequency_after"] != "Hz" || x.Tables["spectrum"] != nil || len(x.Tables["modes"]) != 3 {
		t.Errorf("%v, %v", x.Units, x.Tables["modes"])
	}
	for _, m := range x.Tables["modes"] {
		before, after, mac := m["frequency_before"].(float64), m["frequency_after"].(float64), m["assurance"].(float64)
		if math.Abs(after/before-1.5) > 1e-12 || mac < 1-1e-4 || mac > 1 {
			t.Errorf("%v", m)
		}
	}
	// A peak of the plank has a density in proportion to 1/f², so half as high again is 20 log10(1/1.5) = -3.52 dB.
	peaks := 0
	for _, p := range x.Tables["peaks"] {
		if c, ok := p["change"].(float64); ok {
			peaks++
			if math.Abs(c+20*math.Log10(1.5)) > 1e-9 {
				t.Errorf("%v", p)
			}
		}
	}
	if peaks != 2 { // the second mode on roll and pitch; the third goes beyond the sweep
		t.Errorf("%d peaks followed: %v", peaks, x.Tables["peaks"])
	}
	states := map[string]string{}
	for _, q := range doc.Requirements {
		states[q.Name] = q.Before.State + " " + q.After.State
	}
	if states["slow"] != "holds broken" || states["not-too-slow"] != "holds holds" {
		t.Errorf("%v", states)
	}
}

// Two jobs in two folders, and a run that is no longer there.
func TestDiffAcrossStores(t *testing.T) {
	a, b := newPlank(t), newPlank(t)
	a.must(exitHeld, "run", a.job)
	b.write("plank.hcl", strings.ReplaceAll(strings.Replace(plankJob, `"plank" "deck"`, `"plank" "board"`, 1), "stage.deck", "stage.board"))
	b.must(exitHeld, "run", b.job)
	if out := a.must(exitHeld, "diff", a.job, b.job); !strings.Contains(out, "4 modes followed, 0 lost, 0 new, roll +0.0 dB") || !strings.Contains(out, "Texts and files that differ") {
		t.Errorf("%s", out)
	}
	if err := os.RemoveAll(filepath.Join(b.dir, ".hushframe", "artifacts")); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		args []string
		word string
	}{
		{[]string{a.job, b.job}, "no longer in the store; run the job again"},
		{[]string{a.job + "@thick", a.job}, `there is no run "thick" here`},
		{[]string{a.job + "@", a.job}, "names no run"},
		{[]string{a.job}, "0 earlier runs of plank.hcl are remembered, not 1"},
		{[]string{"nowhere.hcl", a.job}, "there is no job nowhere.hcl"},
		{[]string{a.job, "nowhere@x"}, "there is no job nowhere"},
	} {
		if code, _, err := a.call(append([]string{"diff"}, c.args...)...); code != exitUsage || !strings.Contains(err, c.word) {
			t.Errorf("%v: exit %d, %s", c.args, code, err)
		}
	}
	if code, _, err := a.call("run", a.job, "--name", "no good"); code != exitUsage || !strings.Contains(err, `cannot be called "no good"`) {
		t.Errorf("exit %d, %s", code, err)
	}
}

// Prune leaves a run with a name alone, whatever its age, until the name is taken from it.
func TestNamedRunsStay(t *testing.T) {
	w := newPlank(t)
	w.must(exitHeld, "run", w.job, "--name", "thin")
	w.must(exitBroken, "run", w.job, "--set", "thickness=3mm")
	w.must(exitHeld, "run", w.job, "--set", "thickness=1.9mm")
	list := w.must(exitHeld, "runs", w.job)
	for _, words := range []string{"last ", "thickness=1.9mm", "-1 ", "thickness=3mm", "1 of 2 hold", "-2 ", "thin ", "2 of 2 hold"} {
		if !strings.Contains(list, words) {
			t.Errorf("%q is missing in\n%s", words, list)
		}
	}
	time.Sleep(5 * time.Millisecond)
	w.must(exitHeld, "prune", w.job, "--unused-for", "1 ms")
	if code, _, err := w.call("diff", w.job+"@-1", w.job); code != exitUsage || !strings.Contains(err, "has been pruned; run it again") {
		t.Errorf("exit %d: %s", code, err)
	}
	if out := w.must(exitHeld, "runs", w.job); !strings.Contains(out, "pruned") || !strings.Contains(out, "thin") {
		t.Errorf("%s", out)
	}
	w.must(exitBroken, "run", w.job, "--set", "thickness=3mm")
	w.must(exitBroken, "diff", w.job+"@thin")
	if out := w.must(exitHeld, "run", w.job); !strings.Contains(out, "1 as before") {
		t.Errorf("the step of the named run was pruned:\n%s", out)
	}
	w.must(exitHeld, "runs", w.job, "--forget", "thin")
	if code, _, err := w.call("runs", w.job, "--forget", "thin"); code != exitUsage || !strings.Contains(err, `there is no run "thin" here`) {
		t.Errorf("exit %d: %s", code, err)
	}
	time.Sleep(5 * time.Millisecond)
	w.must(exitHeld, "prune", w.job, "--unused-for", "1 ms")
	if left, _ := filepath.Glob(filepath.Join(w.dir, ".hushframe", "artifacts", "*")); len(left) > 0 {
		t.Errorf("artifacts are left: %v", left)
	}
}

// The account of a run tells the pins beside the job: they came between these two runs.
func TestAccountTellsPins(t *testing.T) {
	w := newPlank(t)
	w.must(exitHeld, "run", w.job)
	w.write(pins.FileName, "{\"extensions\": []}\n")
	w.must(exitHeld, "run", w.job)
	if text := w.must(exitHeld, "diff", w.job); !strings.Contains(text, pins.FileName) {
		t.Errorf("the runs differ by their pins, and this says nothing of them:\n%s", text)
	}
}
