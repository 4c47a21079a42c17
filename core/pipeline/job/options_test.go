package job

import (
	"context"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// taping is a stage whose reader may come from outside.
var taping = stage.Description{Name: "tape", About: "reads", Arguments: []stage.Argument{
	{Name: "reader", Type: stage.Type{Kind: stage.Text}, Default: "auto", Choices: []string{"auto", "wave"}, Extension: "reader"},
	{Name: "options", Type: stage.Type{Kind: stage.Map, Element: &stage.Type{Kind: stage.Text}}, OptionsOf: "reader",
		Variants: map[string][]stage.Argument{"wave": {{Name: "scale", Type: stage.Type{Kind: stage.Text}}}}},
}}

var pebble = stage.Extension{Kind: "reader", Name: "pebble", About: "reads pebbles", Arguments: []stage.Argument{
	{Name: "range", About: "full scale", Type: stage.Type{Kind: stage.Amount, Dimension: "angular rate", Unit: "deg/s"}, Example: `"2000 deg/s"`, Above: new(float64)},
	{Name: "channels", About: "how many", Type: stage.Type{Kind: stage.Whole}, Default: 3.0},
}}

func taped(t *testing.T, body string, extensions ...stage.Extension) (stage.Arguments, string) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "job.hcl")
	if err := os.WriteFile(path, []byte("job \"j\" {}\nstage \"tape\" \"t\" {\n"+body+"\n}\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	j, diags := Load(context.Background(), path, Options{Extensions: extensions,
		Describe: func(context.Context, string) (stage.Description, error) { return taping, nil }})
	var texts []string
	for _, d := range diags {
		texts = append(texts, d.Summary+": "+d.Detail+" @"+string(d.Subject.SliceBytes(j.Sources[0].Bytes)))
	}
	if diags.HasErrors() {
		return nil, strings.Join(texts, "\n")
	}
	a, _, diags := j.Stages[0].Evaluate(nil)
	if diags.HasErrors() {
		t.Fatal(diags)
	}
	return a, ""
}

// Options of an extension are checked as those of a stage are, at their place in the file.
func TestOptionsOfExtensions(t *testing.T) {
	rate, err := quantity.ParseAs("2000 deg/s", "angular rate")
	if err != nil {
		t.Fatal(err)
	}
	for body, want := range map[string]map[string]any{
		`reader = "pebble"` + "\n" + `options = { range = "2000 deg/s" }`: {"range": rate, "channels": 3.0},
		`reader = "pebble"`:                                    {"channels": 3.0},
		`options = { anything = "goes" }`:                      {"anything": "goes"},
		`reader = "wave"` + "\n" + `options = { scale = "2" }`: {"scale": "2"},
		`reader = "wave"`:                                      {},
	} {
		a, wrong := taped(t, body, pebble)
		if got := a.Map("options"); wrong != "" || !reflect.DeepEqual(got, want) {
			t.Errorf("%s: %v %s, want %v", body, got, wrong, want)
		}
	}
	needy := pebble
	needy.Arguments = append([]stage.Argument{{Name: "axis", About: "which one", Type: stage.Type{Kind: stage.Text}, Required: true}}, needy.Arguments...)
	for body, want := range map[string]string{
		`reader = "pebbles"`: `Not a choice: reader cannot be "pebbles"; did you mean "pebble"? @"pebbles"`,
		`reader = "pebble"` + "\n" + `options = { rang = 1 }`:       `Unknown member: options has no member "rang"; did you mean "range"? @rang`,
		`reader = "pebble"` + "\n" + `options = { range = 5 }`:      `Unit missing: options.range takes an angular rate with a unit, and this is a bare number; write "5 deg/s" @5`,
		`reader = "pebble"` + "\n" + `options = { channels = 1.5 }`: `Not a whole number: options.channels takes a whole number, not 1.5 @1.5`,
		`reader = "wave"` + "\n" + `options = { scales = "2" }`:     `Unknown member: options has no member "scales"; did you mean "scale"? @scales`,
		`reader = "needy"`: `Missing member: options needs axis, a text (which one) @stage "tape" "t"`,
	} {
		named := needy
		named.Name = "needy"
		if _, wrong := taped(t, body, pebble, named); !strings.Contains(wrong, want) {
			t.Errorf("%s:\n got %s\nwant %s", body, wrong, want)
		}
	}
}

func TestCheckExtension(t *testing.T) {
	if err := CheckExtension(pebble); err != nil {
		t.Error(err)
	}
	for want, a := range map[string]stage.Argument{
		"the option m of x is neither text":       {Name: "m", Type: stage.Type{Kind: stage.Artifact, Kinds: []string{"mesh"}}},
		`the argument name "no good" is reserved`: {Name: "no good", Type: stage.Type{Kind: stage.Text}},
		`argument w: "m" is no unit of mass`:      {Name: "w", Type: stage.Type{Kind: stage.Amount, Dimension: "mass", Unit: "m"}},
		"argument d: the default does not fit":    {Name: "d", Type: stage.Type{Kind: stage.Number}, Default: "two"},
	} {
		if err := CheckExtension(stage.Extension{Name: "x", Arguments: []stage.Argument{a}}); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %s", err, want)
		}
	}
}

// A name that is no choice says what is known of it, such as that it lies there but is not trusted.
func TestAbsentExtension(t *testing.T) {
	path := filepath.Join(t.TempDir(), "job.hcl")
	if err := os.WriteFile(path, []byte("job \"j\" {}\nstage \"tape\" \"t\" {\nreader = \"moss\"\n}\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	_, diags := Load(context.Background(), path, Options{
		Describe: func(context.Context, string) (stage.Description, error) { return taping, nil },
		Absent: func(kind, name string) error {
			return fault.New(fault.Input, "%s %s is not pinned", kind, name).Do("pin it")
		},
	})
	if !diags.HasErrors() || !strings.Contains(diags.Error(), "reader moss is not pinned; pin it") {
		t.Errorf("the job says %v", diags)
	}
}
