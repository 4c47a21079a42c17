package job_test

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/job/jobtest"
	"hushframe/core/pipeline/stage"
)

// options are the fake stages.
func options() job.Options {
	return job.Options{Describe: jobtest.Describe, StageNames: jobtest.Names}
}

// load writes a job beside the files that jobs read and loads it.
func load(t *testing.T, text string, set map[string]string) (*job.Job, string) {
	t.Helper()
	folder := t.TempDir()
	write(t, folder, "airframe.hcl", "plate \"p\" {}\n")
	write(t, folder, "flights/hover.csv", "t,gy\n")
	write(t, folder, "job.hcl", text)
	opt := options()
	opt.Set = set
	j, diags := job.Load(context.Background(), filepath.Join(folder, "job.hcl"), opt)
	var b strings.Builder
	if err := job.WriteDiagnostics(&b, diags, j.Sources, 0, false); err != nil {
		t.Fatal(err)
	}
	return j, strings.ReplaceAll(b.String(), filepath.ToSlash(folder)+"/", "")
}

func write(t *testing.T, folder, name, text string) {
	t.Helper()
	full := filepath.Join(folder, filepath.FromSlash(name))
	if err := os.MkdirAll(filepath.Dir(full), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(full, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

const head = `
job "test" {}
setting "thickness" { value = "5 mm" }
setting "count" { value = 4 }
stage "import" "frame" { airframe = "airframe.hcl" }
stage "mesh" "shells" {
  geometry = stage.frame.geometry
}
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}
`

func find(t *testing.T, j *job.Job, label string) *job.Stage {
	t.Helper()
	for _, s := range j.Stages {
		if s.Label == label {
			return s
		}
	}
	t.Fatalf("no stage %s", label)
	return nil
}

func TestEvaluateKnown(t *testing.T) {
	j, text := load(t, head+`
stage "mesh" "finer" {
  geometry = stage.frame.geometry
  size     = quantity(number_in(setting.thickness, "mm") / 2, "mm")
  rows     = setting.count
  by_part  = { for p in ["a", "b"] : p => "linear-triangle" }
}
`, map[string]string{"thickness": "6mm"})
	if text != "" {
		t.Fatal(text)
	}
	args, inputs, diags := find(t, j, "finer").Evaluate(nil)
	if diags.HasErrors() {
		t.Fatal(diags)
	}
	if got := args.SI("size"); got != 0.003 {
		t.Errorf("size is %v, half of 6 mm is 0.003 m", got)
	}
	if args.Whole("rows") != 4 || args.Number("growth") != 1.3 || args.Text("element") != "quadratic-triangle" {
		t.Errorf("arguments %v", args)
	}
	if m := args.Map("by_part"); m["a"] != "linear-triangle" || len(m) != 2 {
		t.Errorf("by_part %v", m)
	}
	if r := inputs["geometry"]; len(r) != 1 || r[0] != (job.ArtifactRef{Label: "frame", Output: "geometry"}) {
		t.Errorf("inputs %v", inputs)
	}
	if !j.Settings[0].Overridden || j.Settings[0].Text != "6mm" || j.Settings[1].Text != "4" {
		t.Errorf("settings %+v", j.Settings)
	}
}

func TestBoundsAreInclusive(t *testing.T) {
	for arguments, fits := range map[string]bool{
		`growth = 1`: true, `growth = 4`: true, `growth = 0.999`: false, `growth = 4.001`: false,
		`size = "100 mm"`: true, `size = "100.1 mm"`: false, `size = "0 mm"`: false, `size = "0.001 mm"`: true,
	} {
		_, text := load(t, head+"stage \"mesh\" \"x\" {\n geometry = stage.frame.geometry\n "+arguments+"\n}\n", nil)
		if (text == "") != fits {
			t.Errorf("%s: %q", arguments, text)
		}
	}
}

func TestFiguresLater(t *testing.T) {
	j, text := load(t, head+`
stage "sweep" "flight" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = stage.modes.figures.lowest
  to         = quantity(2 * number_in(stage.modes.figures.lowest, "Hz"), "Hz")
  shapes_at  = [for m in stage.modes.figures.modes : m.frequency if m.gyro_pitch > 1]
}
`, nil)
	if text != "" {
		t.Fatal(text)
	}
	s := find(t, j, "flight")
	if got := strings.Join(s.Figures, " ") + "|" + strings.Join(s.Needs, " "); got != "modes|frame modes" {
		t.Errorf("figures and needs: %s", got)
	}
	args, _, diags := s.Evaluate(nil)
	if diags.HasErrors() || args.Has("from") || args.Has("shapes_at") {
		t.Fatalf("before the run: %v %v", args, diags)
	}
	hz := func(x float64) stage.Quantity { return stage.Quantity{SI: x, Dimension: "frequency"} }
	figures := job.Figures{"modes": {
		"lowest": hz(123.456),
		"modes": []any{
			map[string]any{"frequency": hz(150), "part": "arm", "gyro_pitch": 2.0},
			map[string]any{"frequency": hz(160), "part": "arm", "gyro_pitch": 0.5},
		},
	}}
	args, _, diags = s.Evaluate(figures)
	if diags.HasErrors() {
		t.Fatal(diags)
	}
	if args.SI("from") != 123.456 || args.SI("to") != 246.912 {
		t.Errorf("from %v to %v", args.SI("from"), args.SI("to"))
	}
	if got := args.SIs("shapes_at"); len(got) != 1 || got[0] != 150 {
		t.Errorf("shapes at %v", got)
	}
	figures["modes"]["lowest"] = hz(-1)
	if _, _, diags = s.Evaluate(figures); !diags.HasErrors() {
		t.Error("a negative frequency from a figure passes")
	}
}

// TestDeepText holds that text made to exhaust the stack is refused or read, in
// each way in which expressions nest.
func TestDeepText(t *testing.T) {
	const n = 10_000
	for name, value := range map[string]string{
		"not":          strings.Repeat("!", n) + "true",
		"minus":        strings.Repeat("- ", n) + "1",
		"sum":          strings.Repeat("1 + ", n) + "1",
		"brackets":     strings.Repeat("[", n) + strings.Repeat("]", n),
		"parentheses":  strings.Repeat("(\n", n) + "1" + strings.Repeat(")", n),
		"objects":      strings.Repeat("{a=", n) + "1" + strings.Repeat("}", n),
		"templates":    strings.Repeat(`"${`, n) + "1" + strings.Repeat(`}"`, n),
		"conditionals": strings.Repeat("true ? 1 : \n", n) + "1",
		"indices":      "[[1]]" + strings.Repeat("[abs(0)]", n),
		"calls":        strings.Repeat("abs(", n) + "1" + strings.Repeat(")", n),
		"splats":       "[1]" + strings.Repeat("[*]", n),
		"for":          strings.Repeat("[for a in [1] : ", n) + "1" + strings.Repeat("]", n),
		"directives":   `"` + strings.Repeat("%{ if true }", n) + `"`,
		"heredoc":      "<<A\n" + strings.Repeat("${<<A\n", n) + "A\n",
	} {
		_, text := load(t, "job \"x\" {}\nsetting \"a\" {\n value = "+value+"\n}\n", nil)
		if text == "" {
			t.Errorf("%s: %d levels pass without a word", name, n)
		}
	}
	j, text := load(t, "job \"x\" {}\nsetting \"a\" {\n value = "+strings.Repeat("(", 150)+"1"+strings.Repeat(" + 1", 900)+strings.Repeat(")", 150)+"\n}\n", nil)
	if text != "" || j.Settings[0].Text != "901" {
		t.Errorf("what a person might write is refused: %s", text)
	}
}

func TestColourAndWidth(t *testing.T) {
	j, _ := load(t, "job \"x\" {}\n\tsetting \"a\" {\n\tvalue = 1 + \"2 mm\"\n\t}\n", nil)
	_, diags := job.Load(context.Background(), j.Sources[0].Name, options())
	var b strings.Builder
	if err := job.WriteDiagnostics(&b, diags, j.Sources, 60, true); err != nil {
		t.Fatal(err)
	}
	want := "\x1b[31mError\x1b[0m: \x1b[1mCalculation with a quantity\x1b[0m\n" +
		"  job.hcl, line 3, in setting \"a\"\n" +
		"    3 | \tvalue = 1 + \x1b[31m\"2 mm\"\x1b[0m\n" +
		"      | \t            \x1b[31m^^^^^^\x1b[0m\n" +
		"  \"2 mm\" is a quantity, and a calculation needs numbers:\n" +
		"  take number_in(…, \"mm\"), and quantity(…, \"mm\") to make the\n" +
		"  result a quantity again\n"
	if got := strings.ReplaceAll(b.String(), j.Sources[0].Name, "job.hcl"); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}
