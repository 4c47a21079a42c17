package store

import (
	"context"
	"crypto/rand"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"time"

	"github.com/gofrs/flock"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
)

// FolderName is the name of the store beside the job.
const FolderName = ".hushframe"

// Store is an open store. Its methods may be called at once.
type Store struct {
	folder   string
	registry artifact.Registry
	lock     *flock.Flock // nil for one that is only looked at
	scratch  string
	own      *flock.Flock
}

// Open opens the store of a job folder for a run and makes it if needed. It
// waits while the store is being pruned. The registry holds the artifact kinds
// that may enter.
func Open(ctx context.Context, jobFolder string, registry artifact.Registry) (*Store, error) {
	s := View(jobFolder, registry)
	for _, d := range []string{"artifacts", "steps", "kept", "runs", "scratch"} {
		if err := os.MkdirAll(filepath.Join(s.folder, d), 0o755); err != nil {
			return nil, storeFault(err)
		}
	}
	// The folder is no part of the job, whatever the ignore file around says.
	ignore := filepath.Join(s.folder, ".gitignore")
	if _, err := os.Stat(ignore); errors.Is(err, fs.ErrNotExist) {
		if err := os.WriteFile(ignore, []byte("*\n"), 0o644); err != nil {
			return nil, storeFault(err)
		}
	}
	s.lock = flock.New(filepath.Join(s.folder, "lock"))
	if ok, err := s.lock.TryRLockContext(ctx, 50*time.Millisecond); !ok {
		return nil, storeFault(err)
	}
	if err := s.enter(ctx); err != nil {
		s.Close()
		return nil, err
	}
	return s, nil
}

// View gives a store to look at: it makes nothing, locks nothing and finds
// nothing where there is no store yet.
func View(jobFolder string, registry artifact.Registry) *Store {
	return &Store{folder: filepath.Join(jobFolder, FolderName), registry: registry}
}

// enter clears the scratch of runs that are gone and makes our own.
func (s *Store) enter(ctx context.Context) error {
	gate := flock.New(filepath.Join(s.folder, "scratch.lock"))
	if ok, err := gate.TryLockContext(ctx, 10*time.Millisecond); !ok {
		return storeFault(err)
	}
	defer gate.Close()
	all := filepath.Join(s.folder, "scratch")
	entries, err := os.ReadDir(all)
	if err != nil {
		return storeFault(err)
	}
	for _, e := range entries {
		id, isLock := strings.CutSuffix(e.Name(), ".lock")
		if !isLock {
			continue
		}
		other := flock.New(filepath.Join(all, e.Name()))
		if ok, err := other.TryLock(); !ok || err != nil {
			continue // it lives
		}
		// What cannot be removed now is tried again by the next run.
		if os.RemoveAll(filepath.Join(all, id)) == nil {
			_ = other.Close()
			_ = os.Remove(filepath.Join(all, e.Name()))
		}
		_ = other.Close()
	}
	id := rand.Text()
	s.scratch = filepath.Join(all, id)
	s.own = flock.New(s.scratch + ".lock")
	if ok, err := s.own.TryLock(); !ok {
		return storeFault(err)
	}
	if err := os.Mkdir(s.scratch, 0o755); err != nil {
		return storeFault(err)
	}
	return nil
}

// Close removes the scratch of this run and lets go of the store.
func (s *Store) Close() error {
	var err error
	if s.own != nil {
		err = os.RemoveAll(s.scratch)
		_ = s.own.Close()
		_ = os.Remove(s.scratch + ".lock")
	}
	if s.lock != nil {
		_ = s.lock.Close()
	}
	if err != nil {
		return storeFault(err)
	}
	return nil
}

// Scratch makes an empty folder in the scratch of this run.
func (s *Store) Scratch(name string) (string, error) {
	dir, err := os.MkdirTemp(s.scratch, name+"-")
	if err == nil {
		err = os.Chmod(dir, 0o755) // it may become an artifact that others read
	}
	if err != nil {
		return "", storeFault(err)
	}
	return dir, nil
}

// Folder is where an artifact lies or would lie.
func (s *Store) Folder(hash string) string { return filepath.Join(s.folder, "artifacts", hash) }

// Put writes an artifact of the host into the store.
func (s *Store) Put(a *artifact.Artifact) (hash string, err error) {
	dir, err := s.Scratch(a.Kind.Name)
	if err != nil {
		return "", err
	}
	if hash, err = artifact.Write(dir, a); err != nil {
		return "", err
	}
	return hash, s.settle(dir, hash)
}

// Adopt checks an artifact that a stage wrote to a folder in scratch and moves
// it into the store. Nothing of what the folder says of itself is trusted: it
// is read whole, checked against its kind and hashed.
func (s *Store) Adopt(folder, kind string) (hash string, err error) {
	a, err := artifact.OpenExact(folder, s.registry)
	if err != nil {
		return "", err
	}
	if a.Kind.Name != kind {
		return "", fault.New(fault.Protocol, "it is an artifact of kind %q, where %q was declared", a.Kind.Name, kind)
	}
	if hash, err = artifact.Seal(folder, a); err != nil {
		return "", err
	}
	return hash, s.settle(folder, hash)
}

// settle moves a complete folder to its address, unless it is there already.
func (s *Store) settle(folder, hash string) error {
	to := s.Folder(hash)
	if artifact.Present(to, hash) == nil {
		return nil
	}
	if err := syncTree(folder); err != nil {
		return storeFault(err)
	}
	err := os.Rename(folder, to)
	if err != nil && artifact.Present(to, hash) != nil {
		// A damaged one is in the way.
		aside, serr := s.Scratch("damaged")
		if serr != nil {
			return serr
		}
		if os.Rename(to, filepath.Join(aside, hash)) == nil {
			err = os.Rename(folder, to)
		}
	}
	if err != nil && artifact.Present(to, hash) != nil {
		return storeFault(err)
	}
	syncFolder(filepath.Dir(to))
	return nil
}

// Holds tells whether an artifact is in the store: by manifest and sizes, or,
// in full, by reading and hashing all of it.
func (s *Store) Holds(hash string, full bool) bool {
	if artifact.Present(s.Folder(hash), hash) != nil {
		return false
	}
	if full {
		a, err := artifact.OpenExact(s.Folder(hash), s.registry)
		return err == nil && a.Hash() == hash
	}
	return true
}

// Load reads an artifact.
func (s *Store) Load(hash string) (*artifact.Artifact, error) {
	return artifact.OpenExact(s.Folder(hash), s.registry)
}

func storeFault(err error) error {
	switch {
	case err == nil:
		return fault.New(fault.Internal, "the store could not be locked").In("use the store", FolderName)
	case errors.Is(err, context.Canceled):
		return fault.From(err)
	case errors.Is(err, fs.ErrPermission):
		return fault.New(fault.Input, "%v", err).In("use the store", FolderName).Do("make the folder of the job writable")
	}
	return fault.New(fault.Limit, "%v", err).In("use the store", FolderName)
}
