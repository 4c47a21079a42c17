// Package scaffold writes a new extension: a module that builds, passes the suite of plugins/plugintest and runs in a
// sample job as it stands.
package scaffold

import (
	"bytes"
	"embed"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"text/template"

	"hushframe/core/pipeline/fault"
)

//go:embed files
var files embed.FS

// Kinds lists what can be written.
func Kinds() []string { return []string{"stage", "element", "reader"} }

// Options say what is written.
type Options struct {
	Kind   string
	Name   string // used in jobs, and as name of the module
	Folder string // new or empty
	Source string // folder of the hushframe module
}

var nameForm = regexp.MustCompile(`^[a-z][a-z0-9]*(-[a-z0-9]+)*$`)

// Write writes a new extension and lists its files, slash-separated and sorted.
func Write(o Options) ([]string, error) {
	if !slices.Contains(Kinds(), o.Kind) {
		return nil, fault.New(fault.Input, "%q is no kind of extension", o.Kind).In("write extension", o.Name).Do("write one of %s", strings.Join(Kinds(), ", "))
	}
	if !nameForm.MatchString(o.Name) {
		return nil, fault.New(fault.Input, "%q is no name: lower-case words joined by -", o.Name).In("write extension", o.Name)
	}
	if old, err := os.ReadDir(o.Folder); err == nil && len(old) > 0 {
		return nil, fault.New(fault.Input, "the folder is not empty").In("write extension", o.Folder).Do("name a new folder")
	}
	source, err := filepath.Abs(o.Source)
	if err != nil {
		return nil, fault.From(err)
	}
	fill, sums, err := moduleOf(source)
	if err != nil {
		return nil, err
	}
	fill.Name, fill.Kind, fill.Article = o.Name, o.Kind, "a"
	if o.Kind == "element" {
		fill.Article = "an"
	}
	out := map[string][]byte{"go.sum": sums}
	for _, from := range []string{"files", "files/" + o.Kind} {
		entries, err := fs.ReadDir(files, from)
		if err != nil {
			return nil, fault.New(fault.Internal, "%v", err)
		}
		for _, e := range entries {
			name, ok := strings.CutSuffix(e.Name(), ".tmpl")
			if !ok {
				continue
			}
			t, err := template.ParseFS(files, path.Join(from, e.Name()))
			if err != nil {
				return nil, fault.New(fault.Internal, "%v", err)
			}
			var b bytes.Buffer
			if err := t.Execute(&b, fill); err != nil {
				return nil, fault.New(fault.Internal, "%v", err)
			}
			out[name] = b.Bytes()
		}
	}
	switch o.Kind {
	case "stage":
		out["sample.csv"] = samples("t,gx\n", func(t, v float64) string { return fmt.Sprintf("%.4f,%.3f\n", t, v) })
	case "reader":
		out["sample.txt"] = samples("rate 2000\ngx deg/s\n", func(_, v float64) string { return fmt.Sprintf("%.3f\n", v) })
	case "element":
		out["strip.dxf"] = rectangle(60, 20)
	}
	var names []string
	for name := range out {
		names = append(names, name)
	}
	slices.Sort(names)
	if err := os.MkdirAll(filepath.Join(o.Folder, "extensions"), 0o755); err != nil {
		return nil, fault.New(fault.Input, "%v", err).In("write extension", o.Folder)
	}
	for _, name := range names {
		if err := os.WriteFile(filepath.Join(o.Folder, name), out[name], 0o644); err != nil {
			return nil, fault.New(fault.Input, "%v", err).In("write extension", o.Folder)
		}
	}
	return names, nil
}

// filling is what the templates use.
type filling struct {
	Name, Kind, Article, Go, Source string
	Requires                        []string
}

// moduleOf reads what a module of its own needs of hushframe's: version of Go, requirements and their sums.
func moduleOf(source string) (filling, []byte, error) {
	bad := func(err error) error {
		return fault.New(fault.Missing, "the source of hushframe is not there: %v", err).In("write extension", source).
			Do("name the folder of a checkout with --source")
	}
	mod, err := os.ReadFile(filepath.Join(source, "go.mod"))
	if err != nil {
		return filling{}, nil, bad(err)
	}
	if !strings.HasPrefix(string(mod), "module hushframe\n") {
		return filling{}, nil, bad(errors.New("its go.mod is of another module"))
	}
	sums, err := os.ReadFile(filepath.Join(source, "go.sum"))
	if err != nil {
		return filling{}, nil, bad(err)
	}
	f := filling{Source: filepath.ToSlash(source)}
	for _, line := range strings.Split(string(mod), "\n") {
		line, _, _ = strings.Cut(line, "//")
		words := strings.Fields(line)
		switch {
		case len(words) == 2 && words[0] == "go":
			f.Go = words[1]
		case len(words) == 2 && strings.HasPrefix(words[1], "v"):
			f.Requires = append(f.Requires, words[0]+" "+words[1])
		}
	}
	return f, sums, nil
}

// samples makes two seconds at 2 kHz of a tone of 140 Hz.
func samples(head string, row func(t, v float64) string) []byte {
	out := []byte(head)
	for i := range 4000 {
		t := float64(i) / 2000
		out = append(out, row(t, 20*math.Sin(2*math.Pi*140*t)+0.5*math.Sin(float64(i*i)))...)
	}
	return out
}

// rectangle draws a cut file in mm, its lower left corner at the origin.
func rectangle(length, width float64) []byte {
	var b bytes.Buffer
	b.WriteString("0\nSECTION\n2\nHEADER\n9\n$INSUNITS\n70\n4\n0\nENDSEC\n0\nSECTION\n2\nENTITIES\n")
	corners := [5][2]float64{{0, 0}, {length, 0}, {length, width}, {0, width}, {0, 0}}
	for i := range 4 {
		fmt.Fprintf(&b, "0\nLINE\n8\ncut\n10\n%g\n20\n%g\n11\n%g\n21\n%g\n", corners[i][0], corners[i][1], corners[i+1][0], corners[i+1][1])
	}
	b.WriteString("0\nENDSEC\n0\nEOF\n")
	return b.Bytes()
}
