package store

import (
	"encoding/json"
	"errors"
	"io/fs"
	"os"
	"path/filepath"

	"hushframe/core/pipeline/fault"
)

// RunRecord is the last run of a job, for inspect and chain.
type RunRecord struct {
	Job   string    `json:"job"`
	Steps []RunStep `json:"steps"`
}

// RunStep is one step of the last run.
type RunStep struct {
	Label   string            `json:"label"`
	Stage   string            `json:"stage"`
	State   string            `json:"state"`
	Key     string            `json:"key,omitempty"`
	Outputs map[string]Output `json:"outputs,omitempty"`
	Seconds float64           `json:"seconds,omitempty"`
}

// SaveRun notes the last run under a name: that of the job file or folder.
func (s *Store) SaveRun(name string, r *RunRecord) error {
	data, err := json.MarshalIndent(r, "", "  ")
	if err == nil {
		err = s.writeWhole(s.runFile(name), data)
	}
	if err != nil {
		return storeFault(err)
	}
	return nil
}

// LastRun gives the last run under a name; a fault of kind Missing if there
// was none.
func (s *Store) LastRun(name string) (*RunRecord, error) {
	data, err := os.ReadFile(s.runFile(name))
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fault.New(fault.Missing, "%s has not been run here", name).Do("run it first")
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

func (s *Store) runFile(name string) string {
	return filepath.Join(s.folder, "runs", filepath.Base(name)+".json")
}
