package job

import (
	"errors"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"strings"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/stage"
)

// targets evaluates every stage without figures, which checks all that can be
// checked now, and then looks for the files that the job reads and compares
// where it writes.
func (l *loader) targets() {
	arguments := make([]stage.Arguments, len(l.job.Stages))
	for i, st := range l.job.Stages {
		var diags hcl.Diagnostics
		arguments[i], _, diags = st.Evaluate(nil)
		l.diags = append(l.diags, diags...)
	}
	written := map[string]*Stage{}
	for i, st := range l.job.Stages {
		eachPath(st, arguments[i], stage.Target, func(argument, name string) {
			clean := path.Clean(filepath.ToSlash(name))
			if other, taken := written[clean]; taken {
				l.wrong(st.ArgumentRange(argument), "Two stages write one path", "stage %s writes %s as well", other.Label, name)
				return
			}
			written[clean] = st
			full := name
			if !filepath.IsAbs(name) {
				full = filepath.Join(l.job.Folder, filepath.FromSlash(name))
			}
			for _, source := range l.job.Sources {
				if filepath.Clean(full) == filepath.Join(l.job.Folder, source.File) {
					l.wrong(st.ArgumentRange(argument), "Job would be overwritten", "%s is a file of the job itself; write to another path, such as \"report/page.html\"", name)
				}
			}
		})
	}
	for i, st := range l.job.Stages {
		eachPath(st, arguments[i], stage.File, func(argument, name string) {
			if _, given := st.arguments[argument]; !given || made(name, written) {
				return
			}
			full := name
			if !filepath.IsAbs(name) {
				full = filepath.Join(l.job.Folder, filepath.FromSlash(name))
			}
			if _, err := os.Stat(full); errors.Is(err, fs.ErrNotExist) {
				text := "there is no file " + name + " in the folder of the job file"
				if filepath.IsAbs(name) {
					text = "there is no file " + name
				}
				if near := nearEntry(full); near != "" {
					text += "; did you mean " + path.Join(path.Dir(filepath.ToSlash(name)), near) + "?"
				}
				l.wrong(st.ArgumentRange(argument), "No such file", "%s", text)
			}
		})
	}
}

// made reports whether a stage of the job writes the file or a folder above it.
func made(name string, written map[string]*Stage) bool {
	for p := path.Clean(filepath.ToSlash(name)); p != "." && p != "/" && p != ""; p = path.Dir(p) {
		if _, ok := written[p]; ok {
			return true
		}
		if !strings.Contains(p, "/") {
			return false
		}
	}
	return false
}

// eachPath visits the paths of one kind among the arguments and in their lists.
func eachPath(st *Stage, arguments stage.Arguments, kind stage.TypeKind, visit func(argument, name string)) {
	for _, spec := range st.Description.Arguments {
		switch v := arguments[spec.Name].(type) {
		case string:
			if spec.Type.Kind == kind {
				visit(spec.Name, v)
			}
		case []any:
			if spec.Type.Element != nil && spec.Type.Element.Kind == kind {
				for _, e := range v {
					if s, ok := e.(string); ok {
						visit(spec.Name, s)
					}
				}
			}
		}
	}
}
