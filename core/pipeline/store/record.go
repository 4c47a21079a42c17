package store

import (
	"encoding/json"
	"os"
	"path/filepath"
	"sort"
	"strings"
	"time"

	"hushframe/core/pipeline/stage"
)

// Record is the result of a step, with all it depended on beyond its key.
type Record struct {
	Stage   string            `json:"stage"`
	Outputs map[string]Output `json:"outputs"`
	Outcome stage.Outcome     `json:"outcome"`
	Files   []stage.FileUse   `json:"files,omitempty"`
	Tools   []ToolUse         `json:"tools,omitempty"`
	// Seconds is how long the step took, for the user's information.
	Seconds float64 `json:"seconds"`
}

// Output is an artifact by kind and content hash.
type Output struct {
	Kind string `json:"kind"`
	Hash string `json:"hash"`
}

// ToolUse is an element type or reader that a step called, with the checksum
// of its executable. A use of kind "list" stands for the list of all.
type ToolUse struct {
	Kind string `json:"kind"`
	Name string `json:"name"`
	Hash string `json:"hash"`
}

// World tells what files and tools are like now.
type World struct {
	// File gives the SHA-256 of a file as a step names it, "" if there is none.
	File func(path string) string
	// Tool gives the checksum of a tool, "" if there is none.
	Tool func(kind, name string) string
}

// Find looks for a record of the step whose files and tools are as they are
// now and whose artifacts are all there; full reads and hashes those.
func (s *Store) Find(key string, now World, full bool) (*Record, bool) {
	dir := filepath.Join(s.folder, "steps", key)
	entries, err := os.ReadDir(dir) // sorted by name
	if err != nil {
		return nil, false
	}
	for _, e := range entries {
		name, ok := strings.CutSuffix(e.Name(), ".json")
		if !ok {
			continue
		}
		path := filepath.Join(dir, e.Name())
		data, err := os.ReadFile(path)
		if err != nil || sum(data) != name {
			continue
		}
		r := &Record{}
		if json.Unmarshal(data, r) != nil || !r.current(now) || !s.complete(r, full) {
			continue
		}
		if s.lock != nil { // so that Prune knows what is in use
			t := time.Now()
			_ = os.Chtimes(path, t, t)
		}
		return r, true
	}
	return nil, false
}

func (r *Record) current(now World) bool {
	for _, t := range r.Tools {
		if now.Tool(t.Kind, t.Name) != t.Hash {
			return false
		}
	}
	for _, f := range r.Files {
		if now.File(f.Path) != f.Hash {
			return false
		}
	}
	return true
}

func (s *Store) complete(r *Record, full bool) bool {
	for _, o := range r.Outputs {
		if !s.Holds(o.Hash, full) {
			return false
		}
	}
	return true
}

// Save keeps a record under the key of its step. The artifacts it names must
// be in the store.
func (s *Store) Save(key string, r *Record) error {
	sort.Slice(r.Tools, func(i, j int) bool {
		a, b := r.Tools[i], r.Tools[j]
		return a.Kind < b.Kind || a.Kind == b.Kind && a.Name < b.Name
	})
	data, err := json.MarshalIndent(r, "", "  ")
	if err != nil {
		return storeFault(err)
	}
	dir := filepath.Join(s.folder, "steps", key)
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return storeFault(err)
	}
	if err := s.writeWhole(filepath.Join(dir, sum(data)+".json"), data); err != nil {
		return storeFault(err)
	}
	return nil
}
