package run

import (
	"bytes"
	"os"
	"path"
	"path/filepath"
	"sort"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/stage"
)

// publish copies the files of published outputs out of the store, where they
// are absent or differ. A target names the main file; the artifact has a file
// of that base name, and its other files go beside it.
func (r *runner) publish(s *plan.Step, p *prepared, result *Step) error {
	for _, o := range s.Stage.Description.Outputs {
		if o.Publish == "" || !p.arguments.Has(o.Publish) {
			continue
		}
		target := strings.ReplaceAll(p.arguments.Text(o.Publish), `\`, "/")
		a, err := r.Store.Load(result.Outputs[o.Name].Hash)
		if err != nil {
			return err
		}
		if _, ok := a.Files[path.Base(target)]; !ok {
			return fault.New(fault.Protocol, "output %s has no file %q to publish", o.Name, path.Base(target)).Of(o.Publish)
		}
		names := make([]string, 0, len(a.Files))
		for n := range a.Files {
			names = append(names, n)
		}
		sort.Strings(names)
		files := stage.NewFiles(r.Plan.Job.Folder)
		for _, n := range names {
			name := path.Join(path.Dir(target), n)
			if err := PublishFile(files.Path(name), a.Files[n]); err != nil {
				return fault.New(fault.Input, "%v", err).In("write", name).Of(o.Publish).Do("give a path that can be written")
			}
			if n == path.Base(target) { // the main file first
				result.Published = append([]string{name}, result.Published...)
			} else {
				result.Published = append(result.Published, name)
			}
		}
	}
	return nil
}

// PublishFile writes a file whole or not at all, unless it is there already.
func PublishFile(to string, data []byte) error {
	if old, err := os.ReadFile(to); err == nil && bytes.Equal(old, data) {
		return nil
	}
	if err := os.MkdirAll(filepath.Dir(to), 0o755); err != nil {
		return err
	}
	f, err := os.CreateTemp(filepath.Dir(to), ".part-*")
	if err != nil {
		return err
	}
	_, err = f.Write(data)
	if cerr := f.Close(); err == nil {
		err = cerr
	}
	if err == nil {
		err = os.Chmod(f.Name(), 0o644)
	}
	if err == nil {
		err = os.Rename(f.Name(), to)
	}
	if err != nil {
		_ = os.Remove(f.Name())
	}
	return err
}
