package store

import (
	"encoding/json"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"sort"
	"time"

	"github.com/gofrs/flock"

	"hushframe/core/pipeline/fault"
)

// PruneOptions say what to remove. Artifacts that no record names and kept
// results that are damaged are always removed. What a run with a label is made of
// is left alone, its step records too.
type PruneOptions struct {
	// UnusedFor removes what no run has used for longer; 0 means no such limit.
	UnusedFor time.Duration
	// Size removes what was used longest ago until the rest takes no more
	// bytes; negative means no such limit.
	Size int64
	// Pretend counts without removing.
	Pretend bool
}

// PruneReport says what was removed and what is left.
type PruneReport struct {
	Records, Artifacts, Kept int   // removed
	Freed, Left              int64 // bytes
}

// item is the record of a step or a run with what it needs, or a kept result.
type item struct {
	path string
	key  string // of a step
	used time.Time
	size int64    // of a kept result
	uses []string // artifacts of a record
}

// Prune shrinks the store of a job folder. No run may be using it.
func Prune(jobFolder string, o PruneOptions) (PruneReport, error) {
	var report PruneReport
	s := View(jobFolder, nil)
	if _, err := os.Stat(s.folder); errors.Is(err, fs.ErrNotExist) {
		return report, nil
	}
	lock := flock.New(filepath.Join(s.folder, "lock"))
	ok, err := lock.TryLock()
	if err != nil {
		return report, storeFault(err)
	}
	if !ok {
		return report, fault.New(fault.Input, "a run is using it").In("prune the store", FolderName).Do("wait for the run to end")
	}
	defer lock.Close()

	items := s.items()
	sizes := map[string]int64{}
	users := map[string]int{}
	for _, e := range list(filepath.Join(s.folder, "artifacts")) {
		sizes[e.Name()] = treeSize(s.Folder(e.Name()))
	}
	var total int64
	for _, n := range sizes {
		total += n
	}
	for _, it := range items {
		total += it.size
		for _, hash := range it.uses {
			users[hash]++
		}
	}
	remove := func(path string, size int64) error {
		report.Freed += size
		total -= size
		if o.Pretend {
			return nil
		}
		return os.RemoveAll(path)
	}
	held, keys := s.held()
	for hash := range held {
		users[hash]++
	}
	for hash, size := range sizes {
		if users[hash] == 0 {
			report.Artifacts++
			if err := remove(s.Folder(hash), size); err != nil {
				return report, storeFault(err)
			}
		}
	}
	for _, it := range items { // oldest first
		old := o.UnusedFor > 0 && time.Since(it.used) > o.UnusedFor
		if !old && (o.Size < 0 || total <= o.Size) || it.key != "" && keys[it.key] {
			continue
		}
		switch {
		case it.uses == nil:
			report.Kept++
		case it.key != "":
			report.Records++
		}
		// The record goes first, so that none ever names a missing artifact.
		if err := remove(it.path, it.size); err != nil {
			return report, storeFault(err)
		}
		for _, hash := range it.uses {
			if users[hash]--; users[hash] > 0 {
				continue
			}
			report.Artifacts++
			if err := remove(s.Folder(hash), sizes[hash]); err != nil {
				return report, storeFault(err)
			}
		}
		if it.key != "" {
			_ = os.Remove(filepath.Dir(it.path)) // when it was the last record of its key
		}
	}
	report.Left = total
	return report, nil
}

// held gives the artifacts and the keys of the steps of runs with a label.
func (s *Store) held() (artifacts, keys map[string]bool) {
	artifacts, keys = map[string]bool{}, map[string]bool{}
	for _, label := range s.NamedRuns() {
		r, err := readRun(s.runFile(named, label))
		if err != nil {
			continue
		}
		for _, hash := range r.uses() {
			artifacts[hash] = true
		}
		for _, step := range r.Steps {
			if step.Key != "" {
				keys[step.Key] = true
			}
		}
	}
	return artifacts, keys
}

// items lists records of steps and runs and kept results, that used longest ago first.
func (s *Store) items() []item {
	var items []item
	for _, key := range list(filepath.Join(s.folder, "steps")) {
		dir := filepath.Join(s.folder, "steps", key.Name())
		for _, e := range list(dir) {
			it := item{path: filepath.Join(dir, e.Name()), key: key.Name(), uses: []string{}}
			if info, err := e.Info(); err == nil {
				it.used = info.ModTime()
			}
			var r Record
			if data, err := os.ReadFile(it.path); err == nil && json.Unmarshal(data, &r) == nil {
				seen := map[string]bool{}
				for _, out := range r.Outputs {
					if !seen[out.Hash] {
						seen[out.Hash] = true
						it.uses = append(it.uses, out.Hash)
					}
				}
			}
			items = append(items, it)
		}
	}
	for _, id := range s.runFiles(byID) {
		it := item{path: s.runFile(byID, id), uses: []string{}}
		if info, err := os.Stat(it.path); err == nil {
			it.used = info.ModTime()
		}
		if r, err := readRun(it.path); err == nil {
			it.uses = r.uses()
		}
		items = append(items, it)
	}
	for _, e := range list(filepath.Join(s.folder, "kept")) {
		place := filepath.Join(s.folder, "kept", e.Name())
		it := item{path: place, size: treeSize(place)}
		if info, err := os.Stat(filepath.Join(place, keptManifest)); err == nil && wholeKept(place) {
			it.used = info.ModTime()
		}
		items = append(items, it)
	}
	sort.SliceStable(items, func(i, j int) bool { return items[i].used.Before(items[j].used) })
	return items
}

func list(dir string) []fs.DirEntry {
	entries, _ := os.ReadDir(dir)
	return entries
}
