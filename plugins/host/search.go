package host

import (
	"os"
	"path/filepath"
	"runtime"
	"sort"
	"strings"

	"hushframe/core/pipeline/fault"
)

// FolderName is the folder of extensions beside a job.
const FolderName = "extensions"

// FolderEnv names the environment variable that puts the folder of a user's extensions elsewhere.
const FolderEnv = "HUSHFRAME_EXTENSIONS"

// Found is an executable in a folder of extensions. Nothing has been started to find it.
type Found struct {
	Executable
	Name string // of the file, without .exe
	// Refused says why it cannot be trusted, "" when it can be looked at further.
	Refused string
}

// Folders lists where extensions are looked for: beside the job (jobFolder, "" for none), then the user's own.
func Folders(jobFolder string) []string {
	var out []string
	if jobFolder != "" {
		out = append(out, filepath.Join(jobFolder, FolderName))
	}
	if own := os.Getenv(FolderEnv); own != "" {
		return append(out, own)
	}
	if own, err := os.UserConfigDir(); err == nil {
		out = append(out, filepath.Join(own, "hushframe", FolderName))
	}
	return out
}

// Search lists the executables in folders, in their order, then by name. A folder that is not there has none.
func Search(folders []string) ([]Found, error) {
	var out []Found
	for _, folder := range folders {
		entries, err := os.ReadDir(folder) // sorted
		if os.IsNotExist(err) {
			continue
		}
		if err != nil {
			return nil, fault.New(fault.Input, "%v", err).In("look for extensions", folder)
		}
		for _, e := range entries {
			path := filepath.Join(folder, e.Name())
			info, err := os.Stat(path) // what a link leads to
			if err != nil || !info.Mode().IsRegular() || !executable(info) {
				continue
			}
			x, err := Find(path)
			if err != nil {
				return nil, err
			}
			f := Found{Executable: x, Name: strings.TrimSuffix(e.Name(), ".exe")}
			if loose := looseAt(folder, path, info); loose != "" {
				f.Refused = loose
			}
			out = append(out, f)
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].Name < out[j].Name })
	return out, nil
}

func executable(info os.FileInfo) bool {
	if runtime.GOOS == "windows" {
		return strings.HasSuffix(strings.ToLower(info.Name()), ".exe")
	}
	return info.Mode().Perm()&0o111 != 0
}

// looseAt says when anyone on this machine may replace a file.
func looseAt(folder, path string, info os.FileInfo) string {
	if runtime.GOOS == "windows" {
		return "" // its permissions are not told by mode bits
	}
	const others = 0o002
	if info.Mode().Perm()&others != 0 {
		return "anyone may write to " + path
	}
	if f, err := os.Stat(folder); err == nil && f.Mode().Perm()&others != 0 && f.Mode()&os.ModeSticky == 0 {
		return "anyone may write to " + folder
	}
	return ""
}
