package store

import (
	"encoding/json"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
)

// RunRecord is one run of a job.
type RunRecord struct {
	Job string `json:"job"`
	// ID is the content hash of the account of the run, an artifact: runs that were made of the same and came to the same
	// have the same one. It is empty when the run was stopped.
	ID    string    `json:"id,omitempty"`
	Steps []RunStep `json:"steps"`
	// Earlier are the ids of the runs before, of the last run of a job; the latest first.
	Earlier []string `json:"earlier,omitempty"`
}

// RunStep is one step of a run.
type RunStep struct {
	Label string `json:"label"`
	Stage string `json:"stage"`
	State string `json:"state"`
	Key   string `json:"key,omitempty"`
	// Inputs are the content hashes of the artifacts it took, by argument.
	Inputs  map[string][]string `json:"inputs,omitempty"`
	Outputs map[string]Output   `json:"outputs,omitempty"`
	Seconds float64             `json:"seconds,omitempty"`
}

// mostEarlier is how many runs of a job are remembered besides the last.
const mostEarlier = 50

// shortID is how much of an id is enough to name a run.
const shortID = 6

// labelForm is what a run may be called.
var labelForm = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9._-]{0,63}$`)

// CheckLabel says what is wrong with the name of a run.
func CheckLabel(label string) error {
	if labelForm.MatchString(label) {
		return nil
	}
	return fault.New(fault.Input, "a run cannot be called %q", label).Do("begin with a letter and use letters, digits, dots, dashes and underscores, 64 at most")
}

// SaveRun notes the last run under a name, that of the job file or folder, and remembers it by its id.
func (s *Store) SaveRun(name string, r *RunRecord) error {
	last := *r
	last.Earlier = nil
	if before, err := s.LastRun(name); err == nil {
		last.Earlier = before.Earlier
		if before.ID != "" {
			last.Earlier = append([]string{before.ID}, last.Earlier...)
		}
		last.Earlier = slices.DeleteFunc(last.Earlier, func(id string) bool { return id == r.ID })
		last.Earlier = last.Earlier[:min(mostEarlier, len(last.Earlier))]
	}
	if r.ID != "" {
		if err := s.writeRun(s.runFile(byID, r.ID), r.bare()); err != nil {
			return err
		}
	}
	return s.writeRun(s.runFile("", name), &last)
}

// NameRun keeps a run under a label: Prune leaves what it is made of alone until another run has that label or
// ForgetRun is called.
func (s *Store) NameRun(label string, r *RunRecord) error {
	if err := CheckLabel(label); err != nil {
		return err
	}
	return s.writeRun(s.runFile(named, label), r.bare())
}

// ForgetRun lets go of a label; a fault of kind Missing when there is none.
func (s *Store) ForgetRun(label string) error {
	err := os.Remove(s.runFile(named, label))
	if errors.Is(err, fs.ErrNotExist) {
		return s.unknownRun(label, s.NamedRuns())
	}
	if err != nil {
		return storeFault(err)
	}
	return nil
}

// NamedRuns lists the labels, sorted.
func (s *Store) NamedRuns() []string { return s.runFiles(named) }

// LastRun gives the last run under a name; a fault of kind Missing if there was none.
func (s *Store) LastRun(name string) (*RunRecord, error) {
	r, err := readRun(s.runFile("", name))
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fault.New(fault.Missing, "%s has not been run here", name).Do("run it first")
	}
	return r, err
}

// FindRun gives a run by its label, by the beginning of its id (six digits or more), or of the job of a name by how
// many runs ago it was ("-1" is the run before the last; only runs that came to something else count). The empty text
// is the last run of that name. A fault of kind Missing says what there is.
func (s *Store) FindRun(name, which string) (*RunRecord, error) {
	if which == "" {
		return s.LastRun(name)
	}
	if labelForm.MatchString(which) {
		if r, err := readRun(s.runFile(named, which)); !errors.Is(err, fs.ErrNotExist) {
			return r, err
		}
	}
	if n, err := strconv.Atoi(which); err == nil && n < 0 {
		last, err := s.LastRun(name)
		if err != nil {
			return nil, err
		}
		if -n > len(last.Earlier) {
			return nil, fault.New(fault.Missing, "%d earlier runs of %s are remembered, not %d", len(last.Earlier), name, -n).Do("list them with the verb runs")
		}
		return s.runByID(last.Earlier[-n-1])
	}
	var found []string
	if len(which) >= shortID {
		for _, id := range s.runFiles(byID) {
			if strings.HasPrefix(id, which) {
				found = append(found, id)
			}
		}
	}
	switch len(found) {
	case 0:
		return nil, s.unknownRun(which, s.NamedRuns())
	case 1:
		return s.runByID(found[0])
	}
	return nil, fault.New(fault.Input, "%d runs have ids that begin with %s", len(found), which).Do("give more of the id")
}

func (s *Store) unknownRun(which string, labels []string) error {
	f := fault.New(fault.Missing, "there is no run %q here", which)
	switch n := nearest.Name(which, labels); {
	case n != "":
		return f.Do("did you mean %q?", n)
	case len(labels) > 0:
		return f.Do("name one of %s, an id from the verb runs, or -1 for the run before the last", strings.Join(labels, ", "))
	}
	return f.Do("give an id from the verb runs, or -1 for the run before the last; name a run with run --name")
}

func (s *Store) runByID(id string) (*RunRecord, error) {
	r, err := readRun(s.runFile(byID, id))
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fault.New(fault.Missing, "run %.12s has been pruned", id).Do("run it again")
	}
	return r, err
}

// bare is a run without what differs between runs that are the same.
func (r *RunRecord) bare() *RunRecord {
	out := &RunRecord{Job: r.Job, ID: r.ID}
	for _, step := range r.Steps {
		step.Seconds = 0
		if step.State == "ran" || step.State == "reused" {
			step.State = "finished"
		}
		out.Steps = append(out.Steps, step)
	}
	return out
}

// uses lists the artifacts of a run, its account among them.
func (r *RunRecord) uses() []string {
	seen := map[string]bool{}
	out := []string{}
	add := func(hash string) {
		if hash != "" && !seen[hash] {
			seen[hash] = true
			out = append(out, hash)
		}
	}
	add(r.ID)
	for _, step := range r.Steps {
		for _, o := range step.Outputs {
			add(o.Hash)
		}
	}
	return out
}

// Folders below runs.
const (
	byID  = "id"
	named = "named"
)

func (s *Store) runFile(folder, name string) string {
	return filepath.Join(s.folder, "runs", folder, filepath.Base(name)+".json")
}

// runFiles lists the names of the records in a folder below runs, sorted.
func (s *Store) runFiles(folder string) (names []string) {
	for _, e := range list(filepath.Join(s.folder, "runs", folder)) {
		if name, ok := strings.CutSuffix(e.Name(), ".json"); ok && !e.IsDir() {
			names = append(names, name)
		}
	}
	return names
}

func (s *Store) writeRun(path string, r *RunRecord) error {
	data, err := json.MarshalIndent(r, "", "  ")
	if err == nil {
		err = os.MkdirAll(filepath.Dir(path), 0o755)
	}
	if err == nil {
		err = s.writeWhole(path, data)
	}
	if err != nil {
		return storeFault(err)
	}
	return nil
}

// readRun reads a record; fs.ErrNotExist when there is none.
func readRun(path string) (*RunRecord, error) {
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, err
	}
	r := &RunRecord{}
	if err == nil {
		err = json.Unmarshal(data, r)
	}
	if err != nil {
		return nil, storeFault(err)
	}
	return r, nil
}
