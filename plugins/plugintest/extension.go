package plugintest

import (
	"encoding/json"
	"fmt"
	"os"
	"reflect"

	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/stage"
)

// checkExtension holds what an element type or reader says of itself to what jobs and help need.
func checkExtension(d, again stage.Extension, kind string) (problems []string) {
	bad := func(format string, args ...any) {
		problems = append(problems, "description: "+fmt.Sprintf(format, args...))
	}
	if !reflect.DeepEqual(d, again) {
		bad("a second one differs; it must be constant")
	}
	data, err := json.Marshal(d)
	var back stage.Extension
	if err == nil {
		err = json.Unmarshal(data, &back)
	}
	if data2, _ := json.Marshal(back); err != nil || string(data2) != string(data) {
		bad("it does not survive the boundary: %v", err)
	}
	if d.Kind != kind {
		bad("its kind is %q, not %q", d.Kind, kind)
	}
	if !name.MatchString(d.Name) {
		bad("%q is no name: lower-case words joined by - or _", d.Name)
	}
	checkAbout(bad, "the "+kind, d.About)
	for _, a := range d.Arguments {
		checkAbout(bad, "option "+a.Name, a.About)
		if a.Type.Kind == stage.Amount && a.Type.Unit == "" {
			bad("option %s has no unit to be shown in", a.Name)
		}
	}
	if err := job.CheckExtension(d); err != nil {
		bad("%v", err)
	}
	if len(problems) > 0 {
		return problems
	}
	folder, err := os.MkdirTemp("", "plugintest-")
	if err != nil {
		return []string{err.Error()}
	}
	defer os.RemoveAll(folder)
	options := &trial{folder: folder, word: "option", d: stage.Description{Name: d.Name, Arguments: d.Arguments}, given: map[string]string{}}
	for _, a := range d.Arguments {
		if a.Required && a.Example == "" {
			bad("option %s is required and has no example", a.Name)
		} else if a.Required {
			options.given[a.Name] = a.Example
		}
	}
	if len(problems) == 0 {
		problems = options.checkDescribed()
	}
	return problems
}
