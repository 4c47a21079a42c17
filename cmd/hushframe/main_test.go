package main

import (
	"bytes"
	"context"
	"errors"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/plugins/serve"
	"hushframe/stages/kinds"
)

var update = flag.Bool("update", false, "write the approved texts anew; read the difference before you commit it")

// The test binary is also the program with the stages below, and runs them
// when a host starts it.
func TestMain(m *testing.M) {
	if serve.Started() {
		serve.Stages(testStages...)
	}
	if os.Getenv("HUSHFRAME_TEST_PROGRAM") != "" {
		os.Exit(newApp(testStages, os.Stdout, os.Stderr).main(context.Background(), os.Args[1:]))
	}
	os.Exit(m.Run())
}

type testStage struct {
	description stage.Description
	run         func(ctx context.Context, c *stage.Call) (*stage.Outcome, error)
}

func (s testStage) Describe() stage.Description { return s.description }
func (s testStage) Run(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
	return s.run(ctx, c)
}

var frequency = stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}

var testStages = []stage.Stage{
	plank,
	testStage{stage.Description{
		Name: "ring", About: "rings a bell", Doc: "Rings a bell of a file and says how high it sounds.",
		Arguments: []stage.Argument{
			{Name: "bell", About: "file of the bell", Type: stage.Type{Kind: stage.File}, Required: true},
			{Name: "raise", About: "raises the tone", Type: frequency, Default: stage.Quantity{SI: 0, Dimension: "frequency"}, Min: new(float64)},
			{Name: "mood", About: "what befalls the stage", Type: stage.Type{Kind: stage.Text}, Default: "", Choices: []string{"", "fail", "crash", "stubborn"}},
		},
		Outputs: []stage.Output{{Name: "sound", Kind: "document", About: "the sound"}},
		Figures: []stage.Figure{{Name: "tone", About: "how high it sounds", Type: frequency}},
	}, ring},
	testStage{stage.Description{
		Name: "write", About: "writes down what was heard", Last: true,
		Arguments: []stage.Argument{
			{Name: "include", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Artifact, Kinds: []string{"document"}}}, Required: true},
			{Name: "to", Type: stage.Type{Kind: stage.Target}, Required: true},
		},
		Outputs: []stage.Output{{Name: "page", Kind: "document", Publish: "to"}},
	}, writeDown},
}

func ring(ctx context.Context, c *stage.Call) (*stage.Outcome, error) {
	data, err := c.Files.Read(c.Arguments.Text("bell"))
	if err != nil {
		return nil, fault.From(err).Of("bell")
	}
	var tone float64
	if _, err := fmt.Sscan(string(data), &tone); err != nil {
		return nil, fault.New(fault.Input, "%q is no tone", data).In("read bell", c.Arguments.Text("bell")).Of("bell").Do("write a number in Hz")
	}
	c.Report.Progress("ringing", 0.5)
	c.Report.Log(stage.Info, "rang", "tone", tone)
	c.Report.Log(stage.Debug, "rather softly")
	switch c.Arguments.Text("mood") {
	case "fail":
		return nil, errors.New("the bell is cracked")
	case "crash":
		fmt.Fprintln(os.Stderr, "the clapper flies off")
		os.Exit(3)
	case "stubborn":
		// The file tells the test which process to look for.
		if err := os.WriteFile(c.Files.Path("pid"), fmt.Append(nil, os.Getpid()), 0o644); err != nil {
			return nil, err
		}
		select {}
	}
	tone += c.Arguments.SI("raise")
	d := kinds.Document{Title: "sound", Page: "sound.txt", Files: map[string][]byte{"sound.txt": fmt.Appendf(nil, "%g Hz", tone)}}
	_, err = artifact.Write(c.Outputs["sound"], kinds.EncodeDocument(&d))
	return &stage.Outcome{
		Figures:  map[string]any{"tone": stage.Quantity{SI: tone, Dimension: "frequency"}},
		Warnings: []stage.Warning{{ID: "ring.short", Text: "it rang for a moment only", Where: "bell", Remedy: "ring longer"}},
		Summary: []stage.Section{{Title: "Sound", Text: "as heard from afar", Columns: []stage.Column{{Name: "bell"}, {Name: "tone, Hz", Right: true}},
			Rows: [][]string{{c.Arguments.Text("bell"), fmt.Sprintf("%.1f", tone)}}}},
	}, err
}

func writeDown(_ context.Context, c *stage.Call) (*stage.Outcome, error) {
	r, err := artifact.Open(c.Inputs["run"][0].Folder, artifact.NewRegistry(account.Kind))
	if err != nil {
		return nil, err
	}
	x := account.Decode(r)
	page := filepath.Base(c.Arguments.Text("to"))
	text := fmt.Sprintf("%s by %s\n", x.Job, x.Program)
	for _, v := range x.Verdicts {
		text += fmt.Sprintf("%s holds=%v\n", v.Name, v.Holds)
	}
	d := kinds.Document{Title: "page", Page: page, Files: map[string][]byte{page: []byte(text), "tables/heard.csv": []byte("tone\n")},
		Tables: []kinds.DocumentTable{{File: "tables/heard.csv", Title: "heard", Rows: 0}}}
	_, err = artifact.Write(c.Outputs["page"], kinds.EncodeDocument(&d))
	return nil, err
}

const bellJob = `job "bells" {
  about = "Two bells and a page"
}

setting "raise" {
  value = "10 Hz"
  about = "raises the small bell"
}

stage "ring" "great" {
  bell = "great.txt"
}

stage "ring" "small" {
  bell  = "small.txt"
  raise = setting.raise
}

stage "write" "page" {
  include = [stage.great.sound, stage.small.sound]
  to      = "out/page.txt"
}

requirement "low" {
  figure  = stage.small.figures.tone
  at_most = "700 Hz"
  because = "high bells carry no mile"
}
`

// tower is a job folder.
type tower struct {
	t         *testing.T
	dir       string
	job       string
	raw       bool // leave times and hashes as they are
	unwatched bool // as where memory cannot be watched
}

func newTower(t *testing.T) *tower {
	w := &tower{t: t, dir: t.TempDir()}
	w.job = filepath.Join(w.dir, "bells.hcl")
	w.write("great.txt", "220")
	w.write("small.txt", "660")
	w.write("bells.hcl", bellJob)
	return w
}

func (w *tower) write(name, content string) {
	w.t.Helper()
	if err := os.WriteFile(filepath.Join(w.dir, name), []byte(content), 0o644); err != nil {
		w.t.Fatal(err)
	}
}

// call runs a command in process.
func (w *tower) call(args ...string) (code int, out, err string) {
	w.t.Helper()
	var o, e bytes.Buffer
	a := &app{builtin: testStages, out: &o, err: &e, watchesMemory: !w.unwatched}
	code = a.main(context.Background(), args)
	return code, w.clean(o.String()), w.clean(e.String())
}

var (
	times  = regexp.MustCompile(`\b[0-9]+(\.[0-9]+)? (ms|s|min|h)\b`)
	hashes = regexp.MustCompile(`\b[0-9a-f]{64}\b`)
	rules  = regexp.MustCompile(`(?m)^─+$`)
)

// clean takes out what differs between runs and machines.
func (w *tower) clean(s string) string {
	s = strings.ReplaceAll(s, w.dir+string(filepath.Separator), "")
	s = strings.ReplaceAll(s, w.dir, "FOLDER")
	if w.raw {
		return s
	}
	s = times.ReplaceAllString(s, "TIME")
	s = rules.ReplaceAllString(s, "────")
	return hashes.ReplaceAllString(s, "HASH")
}

// approve compares a text with the approved one.
func approve(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join("testdata", name+".txt")
	if *update {
		if err := os.MkdirAll("testdata", 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if strings.ReplaceAll(string(want), "\r\n", "\n") != got {
		t.Errorf("%s differs from the approved text; got:\n%s", path, got)
	}
}
