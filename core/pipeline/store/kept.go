package store

import (
	"encoding/json"
	"io/fs"
	"os"
	"path/filepath"
	"time"
)

// keptManifest lists the files of a kept folder with their sizes.
const keptManifest = "kept.json"

// FindKept looks for an intermediate result of an executable.
func (s *Store) FindKept(executable, key string) (folder string, ok bool) {
	place := filepath.Join(s.folder, "kept", keptKey(executable, key))
	if !wholeKept(place) {
		return "", false
	}
	t := time.Now()
	_ = os.Chtimes(filepath.Join(place, keptManifest), t, t)
	return filepath.Join(place, "content"), true
}

// NewKept makes an empty folder in scratch to be filled and given to CommitKept.
func (s *Store) NewKept() (string, error) {
	dir, err := s.Scratch("kept")
	if err != nil {
		return "", err
	}
	content := filepath.Join(dir, "content")
	if err := os.Mkdir(content, 0o755); err != nil {
		return "", storeFault(err)
	}
	return content, nil
}

// CommitKept keeps a filled folder of NewKept. When another run was first, its
// result is used.
func (s *Store) CommitKept(executable, key, content string) (folder string, err error) {
	dir, place := filepath.Dir(content), filepath.Join(s.folder, "kept", keptKey(executable, key))
	sizes, err := keptSizes(content)
	if err != nil {
		return "", storeFault(err)
	}
	data, err := json.MarshalIndent(sizes, "", "  ")
	if err == nil {
		err = os.WriteFile(filepath.Join(dir, keptManifest), data, 0o644)
	}
	if err == nil {
		err = syncTree(dir)
	}
	if err != nil {
		return "", storeFault(err)
	}
	err = os.Rename(dir, place)
	if err != nil && !wholeKept(place) {
		aside, serr := s.Scratch("damaged")
		if serr != nil {
			return "", serr
		}
		if os.Rename(place, filepath.Join(aside, "kept")) == nil {
			err = os.Rename(dir, place)
		}
	}
	if err != nil && !wholeKept(place) {
		return "", storeFault(err)
	}
	syncFolder(filepath.Dir(place))
	return filepath.Join(place, "content"), nil
}

func wholeKept(place string) bool {
	data, err := os.ReadFile(filepath.Join(place, keptManifest))
	if err != nil {
		return false
	}
	var want map[string]int64
	if json.Unmarshal(data, &want) != nil {
		return false
	}
	got, err := keptSizes(filepath.Join(place, "content"))
	if err != nil || len(got) != len(want) {
		return false
	}
	for path, size := range want {
		if n, ok := got[path]; !ok || n != size {
			return false
		}
	}
	return true
}

func keptSizes(content string) (map[string]int64, error) {
	sizes := map[string]int64{}
	err := filepath.WalkDir(content, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		info, err := d.Info()
		if err != nil {
			return err
		}
		rel, err := filepath.Rel(content, path)
		sizes[filepath.ToSlash(rel)] = info.Size()
		return err
	})
	return sizes, err
}
