package store

import (
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
	"time"

	"hushframe/core/pipeline/fault"
)

// record is a run of a job with one step that made one artifact.
func record(t *testing.T, s *Store, mass float64) *RunRecord {
	t.Helper()
	made, account := put(t, s, beads(mass)), put(t, s, beads(mass, mass))
	key := fmt.Sprintf("k%g", mass)
	if err := s.Save(key, &Record{Stage: "mesh", Outputs: map[string]Output{"o": {"beads", made}}}); err != nil {
		t.Fatal(err)
	}
	return &RunRecord{Job: "j", ID: account, Steps: []RunStep{{Label: "a", Stage: "mesh", State: "ran", Key: key,
		Inputs: map[string][]string{"in": {"x"}}, Outputs: map[string]Output{"o": {"beads", made}}, Seconds: mass}}}
}

func TestFindRun(t *testing.T) {
	dir := t.TempDir()
	s := open(t, dir)
	runs := []*RunRecord{record(t, s, 1), record(t, s, 2), record(t, s, 3)}
	for _, i := range []int{0, 1, 2, 1, 1} { // the run of 2 again is no other run
		if err := s.SaveRun("job.hcl", runs[i]); err != nil {
			t.Fatal(err)
		}
	}
	if err := s.NameRun("A", runs[0]); err != nil {
		t.Fatal(err)
	}
	for which, want := range map[string]int{"": 1, "-1": 2, "-2": 0, "A": 0, runs[2].ID[:6]: 2, runs[1].ID: 1} {
		got, err := View(dir, nil).FindRun("job.hcl", which)
		if err != nil || got.ID != runs[want].ID {
			t.Errorf("%q: %+v, %v", which, got, err)
		}
	}
	for which, words := range map[string]string{"-3": "2 earlier runs", "B": "name one of A", runs[2].ID[:5]: "no run", "-": "no run"} {
		if _, err := s.FindRun("job.hcl", which); fault.KindOf(err) != fault.Missing || !strings.Contains(err.Error(), words) {
			t.Errorf("%q: %v", which, err)
		}
	}
	// A record by its id has nothing that differs between equal runs.
	got, _ := s.FindRun("", "A")
	want := *runs[0]
	want.Steps = append([]RunStep{}, want.Steps...)
	want.Steps[0].State, want.Steps[0].Seconds = "finished", 0
	if !reflect.DeepEqual(got, &want) {
		t.Errorf("got %+v, want %+v", got, &want)
	}
	for _, label := range []string{"", "-1", "3", "a b", "../x", "a/b", strings.Repeat("x", 65)} {
		if s.NameRun(label, runs[0]) == nil {
			t.Errorf("a run was called %q", label)
		}
	}
}

func TestRunsAreForgottenAtLast(t *testing.T) {
	s := open(t, t.TempDir())
	for i := range mostEarlier + 10 {
		if err := s.SaveRun("job.hcl", &RunRecord{ID: fmt.Sprintf("%064d", i)}); err != nil {
			t.Fatal(err)
		}
	}
	last, err := s.LastRun("job.hcl")
	if err != nil || len(last.Earlier) != mostEarlier || last.Earlier[0] != fmt.Sprintf("%064d", mostEarlier+8) {
		t.Errorf("%d earlier, %v", len(last.Earlier), err)
	}
}

// A run with a label keeps artifacts and step records, one without goes with its age.
func TestPruneKeepsNamedRuns(t *testing.T) {
	dir := t.TempDir()
	s := open(t, dir)
	old, named, young := record(t, s, 1), record(t, s, 2), record(t, s, 3)
	for _, r := range []*RunRecord{old, named, young} {
		if err := s.SaveRun("job.hcl", r); err != nil {
			t.Fatal(err)
		}
	}
	if err := s.NameRun("A", named); err != nil {
		t.Fatal(err)
	}
	s.Close()
	before := time.Now().Add(-time.Hour)
	for _, r := range []*RunRecord{old, named} {
		files, _ := filepath.Glob(filepath.Join(dir, FolderName, "steps", r.Steps[0].Key, "*"))
		for _, f := range append(files, s.runFile(byID, r.ID)) {
			if err := os.Chtimes(f, before, before); err != nil {
				t.Fatal(err)
			}
		}
	}
	report, err := Prune(dir, PruneOptions{UnusedFor: time.Minute, Size: -1})
	if err != nil || report.Records != 1 || report.Artifacts != 2 {
		t.Errorf("%+v, %v", report, err)
	}
	holds := func(r *RunRecord) bool { return s.Holds(r.ID, true) && s.Holds(r.Steps[0].Outputs["o"].Hash, true) }
	if holds(old) || !holds(named) || !holds(young) {
		t.Errorf("old %v, named %v, young %v", holds(old), holds(named), holds(young))
	}
	if _, err := s.FindRun("job.hcl", "-2"); fault.KindOf(err) != fault.Missing || !strings.Contains(err.Error(), "pruned") {
		t.Errorf("%v", err)
	}
	if _, ok := s.Find(named.Steps[0].Key, World{}, false); !ok {
		t.Error("the step record of the named run is gone")
	}
	if report, err = Prune(dir, PruneOptions{Size: 0}); err != nil || holds(young) || !holds(named) {
		t.Errorf("%+v, %v: young %v, named %v", report, err, holds(young), holds(named))
	}
	if err := s.ForgetRun("A"); err != nil {
		t.Fatal(err)
	}
	if report, err = Prune(dir, PruneOptions{Size: 0}); err != nil || holds(named) || report.Left != 0 {
		t.Errorf("%+v, %v", report, err)
	}
	if err := s.ForgetRun("A"); fault.KindOf(err) != fault.Missing {
		t.Errorf("%v", err)
	}
}
