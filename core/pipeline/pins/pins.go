// Package pins reads and writes the pins file of a job folder: which extensions its jobs may start, with version,
// protocol and SHA-256 per platform. The file is made to be reviewed in git; only a person's command writes it.
package pins

import (
	"bytes"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"

	"hushframe/core/pipeline/fault"
)

// FileName is the name of the pins file, beside the job.
const FileName = "extensions.pins.json"

// File is a pins file.
type File struct {
	About      string `json:"about"`
	Extensions []Pin  `json:"extensions"` // sorted by name
}

const about = "Extensions that jobs in this folder may start. Written by \"hushframe extensions pin\"; review a change as you review code."

// Pin is one extension.
type Pin struct {
	// Name is that of its executable, without .exe.
	Name     string `json:"name"`
	Version  string `json:"version"`
	Protocol int    `json:"protocol"`
	// Offers lists what it offers: "stage vtk-modes", "element solid-wedge".
	Offers []string `json:"offers"`
	// SHA256 of the executable in hex, by platform, such as "linux/amd64".
	SHA256 map[string]string `json:"sha256"`
}

// Platform is that of this program.
func Platform() string { return runtime.GOOS + "/" + runtime.GOARCH }

// Read reads the pins file of a folder; without one nothing is pinned.
func Read(folder string) (*File, error) {
	path := filepath.Join(folder, FileName)
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return &File{}, nil
	}
	if err != nil {
		return nil, fault.New(fault.Input, "%v", err).In("read pins", path)
	}
	f := &File{}
	d := json.NewDecoder(bytes.NewReader(data))
	d.DisallowUnknownFields()
	if err := d.Decode(f); err != nil {
		offset := d.InputOffset()
		var syntax *json.SyntaxError
		if errors.As(err, &syntax) {
			offset = syntax.Offset
		}
		line := 1 + bytes.Count(data[:min(offset, int64(len(data)))], []byte("\n"))
		return nil, fault.New(fault.Input, "it cannot be read: %v", err).In("read pins", path).At("near line %d", line).
			Do("take it from git, or write it anew with \"hushframe extensions pin\"")
	}
	seen := map[string]bool{}
	for _, p := range f.Extensions {
		if problem := p.problem(); problem != "" || seen[p.Name] {
			if problem == "" {
				problem = "it is there twice"
			}
			return nil, fault.New(fault.Input, "extension %q: %s", p.Name, problem).In("read pins", path).
				Do("take the file from git, or write it anew with \"hushframe extensions pin\"")
		}
		seen[p.Name] = true
	}
	return f, nil
}

func (p Pin) problem() string {
	if p.Name == "" || p.Name != filepath.Base(p.Name) || strings.ContainsAny(p.Name, `/\`) {
		return "the name is no file name"
	}
	for _, platform := range sortedKeys(p.SHA256) {
		if b, err := hex.DecodeString(p.SHA256[platform]); err != nil || len(b) != 32 {
			return fmt.Sprintf("the checksum for %s is no SHA-256 in hex", platform)
		}
	}
	return ""
}

// Find gives the pin of a name.
func (f *File) Find(name string) (Pin, bool) {
	for _, p := range f.Extensions {
		if p.Name == name {
			return p, true
		}
	}
	return Pin{}, false
}

// Offering gives the pin of what offers something, such as "stage vtk-modes".
func (f *File) Offering(what string) (Pin, bool) {
	for _, p := range f.Extensions {
		if slices.Contains(p.Offers, what) {
			return p, true
		}
	}
	return Pin{}, false
}

// Set puts a pin in. Sums of other platforms stay only where the version is the same; those dropped are returned.
func (f *File) Set(p Pin) (dropped []string) {
	old, ok := f.Find(p.Name)
	sums := map[string]string{}
	for platform, sum := range p.SHA256 {
		sums[platform] = sum
	}
	for _, platform := range sortedKeys(old.SHA256) {
		if _, given := p.SHA256[platform]; given {
			continue
		}
		if old.Version == p.Version {
			sums[platform] = old.SHA256[platform]
		} else {
			dropped = append(dropped, platform)
		}
	}
	p.SHA256 = sums
	if ok {
		f.Extensions = slices.DeleteFunc(f.Extensions, func(x Pin) bool { return x.Name == p.Name })
	}
	f.Extensions = append(f.Extensions, p)
	slices.SortFunc(f.Extensions, func(a, b Pin) int { return strings.Compare(a.Name, b.Name) })
	return dropped
}

// Write writes the pins file of a folder; equal pins give equal bytes.
func (f *File) Write(folder string) error {
	f.About = about
	data, err := json.MarshalIndent(f, "", "  ")
	if err != nil {
		panic("pins: " + err.Error()) // texts and numbers only
	}
	path := filepath.Join(folder, FileName)
	temporary := path + ".new"
	if err := os.WriteFile(temporary, append(data, '\n'), 0o644); err != nil {
		return fault.New(fault.Input, "%v", err).In("write pins", path)
	}
	if err := os.Rename(temporary, path); err != nil {
		return fault.New(fault.Input, "%v", err).In("write pins", path)
	}
	return nil
}

func sortedKeys[V any](m map[string]V) []string {
	var keys []string
	for k := range m {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	return keys
}
