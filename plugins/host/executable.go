package host

import (
	"crypto/sha256"
	"encoding/hex"
	"io"
	"os"
	"runtime"

	"hushframe/core/pipeline/fault"
)

// Executable is a file that can be started.
type Executable struct {
	Path   string
	SHA256 string // hex

	self bool
}

// runningFile is the file of the running executable, also after a build has
// replaced it under its name. Linux alone has such a name.
const runningFile = "/proc/self/exe"

// Self is the running executable.
func Self() (Executable, error) {
	path, err := os.Executable()
	if err != nil {
		return Executable{}, fault.New(fault.Internal, "the running executable cannot be found: %v", err)
	}
	read := path
	if runtime.GOOS == "linux" {
		read = runningFile
	}
	e, err := Find(read)
	e.Path, e.self = path, true
	return e, err
}

// file is what to start: the path, unless it holds another file by now.
func (e Executable) file() string {
	if !e.self || runtime.GOOS != "linux" {
		return e.Path
	}
	now, err1 := os.Stat(e.Path)
	own, err2 := os.Stat(runningFile)
	if err1 == nil && err2 == nil && os.SameFile(now, own) {
		return e.Path
	}
	return runningFile
}

// unchanged looks once more at a file from outside, just before it is started.
func (e Executable) unchanged() error {
	if e.self || e.SHA256 == "" {
		return nil
	}
	now, err := Find(e.Path)
	if err != nil {
		return err
	}
	if now.SHA256 != e.SHA256 {
		return fault.New(fault.Input, "the executable has changed since it was checked: SHA-256 %s, was %s", now.SHA256, e.SHA256).
			Do("run again; if you did not change it, find out who did")
	}
	return nil
}

// Find takes the checksum of an executable.
func Find(path string) (Executable, error) {
	f, err := os.Open(path)
	if err != nil {
		return Executable{}, fault.New(fault.Missing, "%v", err).In("find extension", path)
	}
	defer f.Close()
	h := sha256.New()
	if _, err := io.Copy(h, f); err != nil {
		return Executable{}, fault.New(fault.Missing, "%v", err).In("find extension", path)
	}
	return Executable{Path: path, SHA256: hex.EncodeToString(h.Sum(nil))}, nil
}
