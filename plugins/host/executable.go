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
}

// Self is the running executable. On Linux it is addressed so that a build
// that replaces the file during a run changes nothing.
func Self() (Executable, error) {
	path, err := os.Executable()
	if err != nil {
		return Executable{}, fault.New(fault.Internal, "the running executable cannot be found: %v", err)
	}
	if runtime.GOOS == "linux" {
		path = "/proc/self/exe"
	}
	return Find(path)
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
