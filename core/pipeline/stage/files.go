package stage

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"sort"
	"sync"

	"hushframe/core/pipeline/fault"
)

// Files reads the files that a job names, relative to the folder of the job
// file, and remembers each with its content hash, so that the host knows what
// the step depends on: also a file that was looked for and not found.
type Files struct {
	folder string
	mu     sync.Mutex
	used   map[string]string
}

// NewFiles roots file access in the folder of the job file.
func NewFiles(folder string) *Files {
	return &Files{folder: folder, used: map[string]string{}}
}

// Folder is the folder of the job file.
func (f *Files) Folder() string { return f.folder }

// Add notes files that were read elsewhere: in the process of the stage.
func (f *Files) Add(uses ...FileUse) {
	for _, u := range uses {
		f.note(u.Path, u.Hash)
	}
}

// FileUse is one file a step read or looked for.
type FileUse struct {
	// Path as named, slash-separated, relative to the job folder if it was.
	Path string `json:"path"`
	// Hash is the SHA-256 of the content, or empty if there was no file.
	Hash string `json:"hash"`
}

// Path gives the place of a file on this machine.
func (f *Files) Path(name string) string {
	if filepath.IsAbs(name) {
		return name
	}
	return filepath.Join(f.folder, filepath.FromSlash(name))
}

// Read gives the whole content of a file.
func (f *Files) Read(name string) ([]byte, error) {
	data, err := os.ReadFile(f.Path(name))
	if err != nil {
		return nil, f.missing(name, err)
	}
	sum := sha256.Sum256(data)
	f.note(name, hex.EncodeToString(sum[:]))
	return data, nil
}

// Open hashes a file in one pass of bounded memory and opens it for a second.
// The caller closes it.
func (f *Files) Open(name string) (*os.File, error) {
	file, err := os.Open(f.Path(name))
	if err != nil {
		return nil, f.missing(name, err)
	}
	h := sha256.New()
	if _, err = io.Copy(h, file); err == nil {
		_, err = file.Seek(0, io.SeekStart)
	}
	if err != nil {
		file.Close()
		return nil, fault.New(fault.Input, "%v", err).In("read file", name)
	}
	f.note(name, hex.EncodeToString(h.Sum(nil)))
	return file, nil
}

func (f *Files) missing(name string, err error) error {
	if errors.Is(err, fs.ErrNotExist) {
		f.note(name, "")
		return fault.New(fault.Missing, "there is no such file").In("read file", name).
			Do("paths are relative to the folder of the job file; looked at %s", f.Path(name))
	}
	return fault.New(fault.Input, "%v", errors.Unwrap(err)).In("read file", name)
}

func (f *Files) note(name, hash string) {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.used[filepath.ToSlash(name)] = hash
}

// Used lists the files so far, sorted by path.
func (f *Files) Used() []FileUse {
	f.mu.Lock()
	defer f.mu.Unlock()
	out := make([]FileUse, 0, len(f.used))
	for p, h := range f.used {
		out = append(out, FileUse{p, h})
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Path < out[j].Path })
	return out
}
