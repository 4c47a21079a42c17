package store

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
)

// writeWhole writes a file so that it is there whole or not at all.
func (s *Store) writeWhole(path string, data []byte) error {
	dir := s.scratch
	if dir == "" {
		dir = filepath.Dir(path)
	}
	f, err := os.CreateTemp(dir, "write-")
	if err != nil {
		return err
	}
	_, err = f.Write(data)
	if err == nil {
		err = f.Sync()
	}
	if cerr := f.Close(); err == nil {
		err = cerr
	}
	if err == nil {
		err = os.Chmod(f.Name(), 0o644)
	}
	if err == nil {
		err = os.Rename(f.Name(), path)
	}
	if err != nil {
		_ = os.Remove(f.Name())
		return err
	}
	syncFolder(filepath.Dir(path))
	return nil
}

// syncTree flushes all files of a folder to the disk, then its folders.
func syncTree(folder string) error {
	return filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() {
			syncFolder(path)
			return nil
		}
		f, err := os.OpenFile(path, os.O_RDWR, 0)
		if errors.Is(err, fs.ErrPermission) {
			return nil // read-only files of a stage; the next run checks sizes
		}
		if err != nil {
			return err
		}
		defer f.Close()
		return f.Sync()
	})
}

// syncFolder flushes the names in a folder, where the system can.
func syncFolder(path string) {
	if f, err := os.Open(path); err == nil {
		_ = f.Sync()
		_ = f.Close()
	}
}

// treeSize is the number of bytes in a folder.
func treeSize(folder string) int64 {
	var total int64
	_ = filepath.WalkDir(folder, func(_ string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return nil
		}
		if info, err := d.Info(); err == nil {
			total += info.Size()
		}
		return nil
	})
	return total
}
