package plugintest

import (
	"os"
	"path/filepath"
	"testing"

	"hushframe/core/pipeline/stage"
	"hushframe/stages"
)

// What the built-in stages describe is held to what is asked of others: defaults and examples that a job takes, wrong
// values refused by name.
func TestBuiltinDescriptions(t *testing.T) {
	// Examples that name something of the job around them.
	leans := map[string]bool{"import with": true, "mesh options": true}
	for _, s := range stages.Builtin() {
		d := s.Describe()
		for i, a := range d.Arguments {
			if leans[d.Name+" "+a.Name] {
				d.Arguments[i].Example = ""
			}
		}
		x := &trial{folder: t.TempDir(), d: d, word: "argument", given: map[string]string{}}
		for _, a := range d.Arguments {
			if !a.Required {
				continue
			}
			kind := a.Type
			if a.Type.Kind == stage.List {
				kind = *a.Type.Element
			}
			text := a.Example
			switch kind.Kind {
			case stage.Artifact:
				text = x.reference(kind.Kinds[0])
			case stage.File:
				path := filepath.Join(t.TempDir(), "file")
				if err := os.WriteFile(path, nil, 0o644); err != nil {
					t.Fatal(err)
				}
				text = inJob(path)
			}
			if a.Type.Kind == stage.List && kind.Kind != a.Type.Kind && text != a.Example {
				text = "[" + text + "]"
			}
			x.given[a.Name] = text
		}
		for _, p := range x.checkDescribed() {
			t.Errorf("%s: %s", d.Name, p)
		}
	}
}
