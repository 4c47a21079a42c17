package main

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"
	"unicode/utf8"

	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

func TestHelp(t *testing.T) {
	w := newTower(t)
	w.raw = true
	var all strings.Builder
	for _, verb := range [][]string{{"help"}, {"run", "--help"}, {"check", "--help"}, {"chain", "--help"}, {"stages", "--help"}, {"inspect", "--help"}, {"diff", "--help"}, {"runs", "--help"}, {"start", "--help"}, {"extensions", "--help"}, {"extensions", "pin", "--help"}, {"extensions", "new", "--help"}, {"prune", "--help"}, {"version", "--help"}} {
		code, out, err := w.call(verb...)
		if code != exitHeld || err != "" {
			t.Errorf("%v: exit %d, %s", verb, code, err)
		}
		all.WriteString("=== " + strings.Join(verb, " ") + "\n" + out)
	}
	approve(t, "help", all.String())
}

func TestRunShowsResults(t *testing.T) {
	w := newTower(t)
	code, out, err := w.call("run", w.job, "--threads", "1")
	if code != exitHeld {
		t.Fatalf("exit %d: %s", code, err)
	}
	approve(t, "run-results", out)
	approve(t, "run-progress", err)
	page, _ := os.ReadFile(filepath.Join(w.dir, "out", "page.txt"))
	if string(page) != "bells by hushframe (development)\nlow holds=true\n" {
		t.Errorf("page %q", page)
	}
	_, again, err := w.call("run", w.job, "--threads", "1")
	if strings.ReplaceAll(again, "3 as before", "3 ran") != out {
		t.Errorf("a second run shows other results:\n%s", again)
	}
	lines := slices.Sorted(strings.Lines(err)) // look-ups run at once
	approve(t, "run-again", strings.Join(lines, ""))
}

func TestExitCodes(t *testing.T) {
	w := newTower(t)
	change := func(old, new string) { w.write("bells.hcl", strings.Replace(bellJob, old, new, 1)) }
	check := func(name string, code int, words ...string) {
		t.Helper()
		got, out, err := w.call("run", w.job)
		if got != code {
			t.Errorf("%s: exit %d, want %d: %s", name, got, code, err)
		}
		for _, word := range words {
			if !strings.Contains(out+err, word) {
				t.Errorf("%s: %q is missing in\n%s\n%s", name, word, out, err)
			}
		}
	}
	check("all well", exitHeld, "every requirement holds")
	change(`"700 Hz"`, `"600 Hz"`)
	check("broken", exitBroken, "low          broken  stage.small.figures.tone = 670 Hz, at most 600 Hz  -70 Hz", "1 requirement is broken", "page wrote out/page.txt (and 1 file beside it)")
	change(`"small.txt"`, `"small.txt"`+"\n  mood = \"fail\"")
	check("failed", exitFailed, "Stage small failed", `bells.hcl, line 14, in stage "ring" "small"`, "the bell is cracked", "1 requirement was not judged")
	change(`"small.txt"`, `"small.txt"`+"\n  mood = \"crash\"")
	check("crashed", exitFailed, "run: stage ring: the process ended without answering (exit status 3)", "Last lines of small:\n  | the clapper flies off\n")
	w.write("small.txt", "high")
	change("", "")
	check("bad file", exitFailed, "bells.hcl, line 15, in stage", `  bell  = "small.txt"`, `"high" is no tone; write a number in Hz`)
	change(`"ring" "small"`, `"wring" "small"`)
	check("bad job", exitUsage, `"wring"`, `"ring"`)
	if err := os.Remove(w.job); err != nil {
		t.Fatal(err)
	}
	check("no job", exitUsage)

	w = newTower(t)
	for _, c := range []struct {
		args string
		want string
	}{
		{"run", "one job is wanted"},
		{"walk bells.hcl", "unknown command \"walk\" for \"hushframe\"\nTry \"hushframe help\"."},
		{"run bells.hcl --sett a=b", "unknown flag: --sett"},
		{"run bells.hcl --set raise", "write NAME=VALUE"},
		{"run bells.hcl --set raise=1Hz --set raise=2Hz", "gives raise twice"},
		{"run bells.hcl --set raise=2mm", "length"},
		{"run bells.hcl --set rise=2Hz", "raise"},
		{"run bells.hcl --memory 3kg", "memory"},
		{"run bells.hcl --threads -1", "cannot be negative"},
		{"run bells.hcl --threads many", `--threads is "many", but a whole number is due`},
		{"run bells.hcl --memory -3GiB", "cannot be negative"},
		{"run bells.hcl --memory 1e30GiB", "more than can be counted"},
		{"run bells.hcl other.hcl", `Try "hushframe help run"`},
		{"diff", "one run or two are wanted"},
		{"inspect", "a job and one of its steps are wanted"},
		{"stages a b", "one stage at most is wanted"},
		{"start", "one folder of cut files is wanted"},
		{"extensions pin", "a job is wanted"},
		{"extensions new reader", "a kind (stage, element or reader) and a folder are wanted"},
		{"extensions pin bells.hcl pebble", `there is no extension "pebble"; put its executable in`},
		{"help walk", `unknown command "walk"`},
		{"help version walk", `there is no verb "version walk"`},
		{"completion ksh", `unknown command "ksh"`},
		{"completion", "a shell is wanted"},
		{"prune bells.hcl --size -3GiB", "cannot be negative"},
		{"prune bells.hcl --unused-for -3h", "cannot be negative"},
		{"prune bells.hcl --unused-for 1e30h", "more than can be counted"},
		{"run bells.hcl --log xml", "it can be human or json"},
		{"check none.hcl", "none.hcl"},
		{"inspect bells.hcl small", "bells.hcl has not been run here; run it first"},
		{"stages rung", `there is no stage "rung"; did you mean "ring"?`},
		{"prune none.hcl", "there is no job"},
		{"prune bells.hcl --unused-for 3kg", "time"},
	} {
		args := strings.Fields(strings.NewReplacer("bells.hcl", w.job, "none.hcl", filepath.Join(w.dir, "none.hcl")).Replace(c.args))
		if code, out, err := w.call(args...); code != exitUsage || !strings.Contains(err, c.want) || out != "" {
			t.Errorf("%s: exit %d, %q, %q", c.args, code, out, err)
		}
	}
	if _, err := os.Stat(filepath.Join(w.dir, store.FolderName)); err == nil {
		t.Error("mistakes made a store")
	}
}

func TestSettings(t *testing.T) {
	w := newTower(t)
	if code, out, err := w.call("run", w.job, "--set", "raise=50Hz"); code != exitBroken || !strings.Contains(out, "tone = 710 Hz") {
		t.Errorf("exit %d: %s%s", code, out, err)
	}
}

func TestCheck(t *testing.T) {
	w := newTower(t)
	code, out, err := w.call("check", w.job)
	if code != exitHeld || err != "" {
		t.Fatalf("exit %d: %s", code, err)
	}
	approve(t, "check", out)
	if _, err := os.Stat(filepath.Join(w.dir, store.FolderName)); err == nil {
		t.Error("checking made a store")
	}
}

func TestChain(t *testing.T) {
	w := newTower(t)
	_, before, _ := w.call("chain", w.job)
	w.call("run", w.job)
	_, after, _ := w.call("chain", w.job)
	w.write("small.txt", "650")
	_, changed, _ := w.call("chain", w.job)
	// Columns are as wide as the times in them.
	approve(t, "chain", regexp.MustCompile(`  +`).ReplaceAllString(before+after+changed, "  "))
}

func TestInspect(t *testing.T) {
	w := newTower(t)
	w.call("run", w.job)
	code, out, err := w.call("inspect", w.job, "page")
	if code != exitHeld {
		t.Fatalf("exit %d: %s", code, err)
	}
	_, rows, _ := w.call("inspect", w.job, "page.page", "--table", "tables")
	last, lerr := store.View(w.dir, nil).LastRun("bells.hcl")
	if lerr != nil {
		t.Fatal(lerr)
	}
	_, folder, _ := w.call("inspect", store.View(w.dir, nil).Folder(last.Steps[2].Outputs["page"].Hash))
	if folder != out {
		t.Errorf("by its folder it shows\n%s", folder)
	}
	approve(t, "inspect", out+rows)
	for args, want := range map[string]string{
		"inspect JOB pages":              `has no step "pages"; did you mean "page"?`,
		"inspect JOB page.pag":           `has no output "pag"; did you mean "page"?`,
		"inspect JOB page --table table": `has no table "table"; did you mean "tables"?`,
		"inspect JOB":                    "is no artifact folder",
	} {
		if code, _, err := w.call(strings.Fields(strings.Replace(args, "JOB", w.job, 1))...); code != exitUsage || !strings.Contains(err, want) {
			t.Errorf("%s: exit %d, %s", args, code, err)
		}
	}
}

func TestStages(t *testing.T) {
	w := newTower(t)
	_, list, _ := w.call("stages")
	_, one, _ := w.call("stages", "ring")
	approve(t, "stages", list+one)
	_, text, _ := w.call("stages", "ring", "--json")
	var d []map[string]any
	if err := json.Unmarshal([]byte(text), &d); err != nil || len(d) != 1 || d[0]["name"] != "ring" {
		t.Errorf("%v: %s", err, text)
	}
}

func TestPruneVerb(t *testing.T) {
	w := newTower(t)
	w.call("run", w.job)
	code, out, err := w.call("prune", w.job, "--size", "0 B", "--pretend")
	if code != exitHeld || !strings.HasPrefix(out, "would remove 3 results, 4 artifacts and 0 intermediate results: ") {
		t.Errorf("exit %d: %s%s", code, out, err)
	}
	if _, out, _ = w.call("prune", w.job, "--size", "0 B"); !strings.HasPrefix(out, "removed 3 results, 4 artifacts") || !strings.HasSuffix(out, "; 0 B left\n") {
		t.Errorf("%s", out)
	}
	if _, out, _ = w.call("run", w.job); !strings.Contains(out, "3 ran") {
		t.Errorf("after pruning: %s", out)
	}
}

func TestVersion(t *testing.T) {
	w := newTower(t)
	if code, out, _ := w.call("version"); code != exitHeld || !strings.HasPrefix(out, "hushframe (development)\nprotocol of extensions 1\n") || !strings.Contains(out, "SHA-256 HASH\n") {
		t.Errorf("exit %d: %s", code, out)
	}
}

func TestCompletion(t *testing.T) {
	w := newTower(t)
	for _, shell := range []string{"bash", "zsh", "fish", "powershell"} {
		if code, out, _ := w.call("completion", shell); code != exitHeld || len(out) < 1000 {
			t.Errorf("%s: exit %d, %d bytes", shell, code, len(out))
		}
	}
	if _, out, _ := w.call("__complete", "stages", ""); !strings.HasPrefix(out, "plank\nring\nwrite\n") {
		t.Errorf("stages: %s", out)
	}
}

// Every line of the log for machines is JSON.
func TestJSONLog(t *testing.T) {
	w := newTower(t)
	code, _, err := w.call("run", w.job, "--log", "json", "--threads", "1")
	if code != exitHeld {
		t.Fatalf("exit %d: %s", code, err)
	}
	seen := map[string]int{}
	for line := range strings.Lines(err) {
		var event map[string]any
		if err := json.Unmarshal([]byte(line), &event); err != nil {
			t.Fatalf("%v: %s", err, line)
		}
		name, _ := event["event"].(string)
		if name == "" {
			name, _ = event["message"].(string)
		}
		seen[name]++
	}
	for name, n := range map[string]int{"begin": 3, "end": 3, "progress": 2, "judged": 1, "rang": 2, "rather softly": 0} {
		if seen[name] != n {
			t.Errorf("%d of %q, want %d", seen[name], name, n)
		}
	}
	if _, _, err = w.call("run", w.job, "--force", "--verbose"); !strings.Contains(err, "great: rather softly") {
		t.Errorf("verbose: %s", err)
	}
}

func TestBarLine(t *testing.T) {
	for _, c := range []struct {
		phase    string
		fraction float64
		elapsed  time.Duration
		columns  int
		want     string
	}{
		{"factor", 0.5, 3200 * time.Millisecond, 80, "modes  solve  factor              ━━━━━━━━━━━━━╌╌╌╌╌╌╌╌╌╌╌╌╌   50 %  3.2 s"},
		{"factor", -1, 75 * time.Second, 80, "modes  solve  factor                                                 75 s"},
		{"a phase with a very long name", 1, 20 * time.Millisecond, 60, "modes  solve  a phase with a ve…  ━━━━━━  100 %  20 ms"},
		{"factor", 2, 3 * time.Hour, 30, "modes  solve  factor         …"},
	} {
		if got := barLine("modes  solve", c.phase, c.fraction, c.elapsed, c.columns); got != c.want {
			t.Errorf("got  %q\nwant %q", got, c.want)
		}
	}
}

// A table that is too wide wraps its columns of words, not its numbers.
func TestWideTable(t *testing.T) {
	var out bytes.Buffer
	words := strings.TrimSpace(strings.Repeat("some words ", 12))
	const width = 96
	t.Setenv("COLUMNS", strconv.Itoa(width))
	writeSection(&out, stage.Section{Title: "Wide", Text: words, Columns: []stage.Column{{Name: "a"}, {Name: "number", Right: true}, {Name: "b"}},
		Rows: [][]string{{words, "123456", words}, {"short", "7", "é"}}})
	for line := range strings.Lines(out.String()) {
		if n := utf8.RuneCountInString(strings.TrimRight(line, "\n")); n > width {
			t.Errorf("%d columns: %s", n, line)
		}
	}
	if n := strings.Count(out.String(), "words"); n != 36 || !strings.Contains(out.String(), "  123456  ") {
		t.Errorf("%d words in\n%s", n, &out)
	}
}

// Where room is short headers of numbers wrap first, then words between each other; a long name is cut only when nothing
// else is left.
func TestLongNamesStayWhole(t *testing.T) {
	const name, number = "B-NAVIER-45_-45_45_-45-ah10", "-1.23456e+08"
	for width, cut := range map[int]bool{70: false, 60: false, 56: false, 50: true, 40: true} {
		var out bytes.Buffer
		t.Setenv("COLUMNS", strconv.Itoa(width))
		writeSection(&out, stage.Section{Title: "Long", Columns: []stage.Column{{Name: "problem, value"}, {Name: "share of tolerance, %", Right: true}, {Name: "ours", Right: true}},
			Rows: [][]string{{name + ", mode seven", "61", number}, {"A-EB, mode 1", "2", "1"}}})
		if strings.Contains(out.String(), name) == cut || !strings.Contains(out.String(), number) {
			t.Errorf("%d columns:\n%s", width, &out)
		}
		for line := range strings.Lines(out.String()) {
			if n := utf8.RuneCountInString(strings.TrimRight(line, "\n")); n > max(width, 48) {
				t.Errorf("%d columns of %d: %s", n, width, line)
			}
		}
	}
}

// Names from files cannot steer the terminal, nor turn what is written.
func TestHarmless(t *testing.T) {
	var out bytes.Buffer
	writeSection(&out, stage.Section{Title: "a\x1b]0;b\a", Text: "c\u202ed", Columns: []stage.Column{{Name: "e\u009b2J"}}, Rows: [][]string{{"f\x1b[31m\r"}, {"m/s², °, гироскоп"}}})
	if strings.ContainsAny(out.String(), "\x1b\a\r\u009b\u202e") || !strings.Contains(out.String(), "m/s², °, гироскоп") || strings.Count(out.String(), "\ufffd") != 6 {
		t.Errorf("%q", out.String())
	}
}

// Help shows what a job gets when it leaves an argument out, as a job would write it; an example is only that.
func TestDefaultText(t *testing.T) {
	length := stage.Type{Kind: stage.Amount, Dimension: "length", Unit: "mm"}
	for want, x := range map[string]stage.Argument{
		`"5 mm"`:                              {Type: length, Default: stage.Quantity{SI: 5e-3, Dimension: "length"}, Example: "3 mm"},
		"0":                                   {Type: stage.Type{Kind: stage.Whole}, Default: 0.0, Example: "3"},
		"false":                               {Type: stage.Type{Kind: stage.Truth}, Default: false, Example: "true"},
		`"hann"`:                              {Type: stage.Type{Kind: stage.Text}, Default: "hann", Example: `"flat"`},
		`["1 mm", "2.5 mm"]`:                  {Type: stage.Type{Kind: stage.List, Element: &length}, Default: []any{stage.Quantity{SI: 1e-3, Dimension: "length"}, stage.Quantity{SI: 2.5e-3, Dimension: "length"}}},
		`{ a = 1, b = [] }`:                   {Type: stage.Type{Kind: stage.Any}, Default: map[string]any{"b": []any{}, "a": 1.0}},
		`such as "3 mm"`:                      {Type: length, Example: `"3 mm"`},
		"":                                    {Type: length},
		"required":                            {Type: length, Required: true},
		"required, such as stage.modes.modes": {Type: stage.Type{Kind: stage.Artifact}, Required: true, Example: "stage.modes.modes"},
	} {
		if got := defaultText(x); got != want {
			t.Errorf("got %s, want %s", got, want)
		}
	}
}

// Also what goes wrong is JSON in the log for machines.
func TestJSONLogOfFailures(t *testing.T) {
	w := newTower(t)
	broken := filepath.Join(w.dir, "broken.hcl")
	w.write("broken.hcl", strings.Replace(bellJob, `"great.txt"`, "12", 1))
	w.write("crash.hcl", strings.Replace(bellJob, `"small.txt"`, `"small.txt"`+"\n  mood = \"crash\"", 1))
	for _, c := range []struct {
		args string
		code int
		has  []string
	}{
		{"run " + broken, exitUsage, []string{`"event":"diagnostic"`, `broken.hcl"`, `"line":11`}},
		{"chain " + broken, exitUsage, []string{`"event":"diagnostic"`}},
		{"run " + filepath.Join(w.dir, "crash.hcl"), exitFailed, []string{`"event":"diagnostic"`, `"line":14`, `"the clapper flies off"`}},
		{"run " + filepath.Join(w.dir, "none.hcl"), exitUsage, nil},
		{"run " + broken + " --set raise", exitUsage, []string{`"fault":{`, "write NAME=VALUE"}},
		{"run " + broken + " --sett raise", exitUsage, []string{"unknown flag: --sett"}},
		{"run", exitUsage, []string{"one job is wanted"}},
	} {
		code, _, err := w.call(append(strings.Fields(c.args), "--log", "json")...)
		if code != c.code || err == "" {
			t.Errorf("%s: exit %d, %q", c.args, code, err)
		}
		for line := range strings.Lines(err) {
			if !json.Valid([]byte(line)) {
				t.Errorf("%s: no JSON: %s", c.args, line)
			}
		}
		for _, word := range c.has {
			if !strings.Contains(err, word) {
				t.Errorf("%s: %s is missing in\n%s", c.args, word, err)
			}
		}
	}
}

// A table takes the width of the terminal, else what COLUMNS says, else a fixed one.
func TestTableWidth(t *testing.T) {
	for value, want := range map[string]int{"": plainWidth, "90": 90, "wide": plainWidth, "-3": plainWidth} {
		t.Setenv("COLUMNS", value)
		if got := tableWidth(&bytes.Buffer{}); got != want {
			t.Errorf("COLUMNS %q gives %d, want %d", value, got, want)
		}
	}
}

// Reports are named so that a click or a copy of the path finds them from the folder of the user.
func TestPublishedPath(t *testing.T) {
	w := newTower(t)
	t.Chdir(filepath.Dir(w.dir))
	job := filepath.Join(filepath.Base(w.dir), "bells.hcl")
	_, out, err := w.call("run", job)
	want := "page wrote " + filepath.Join(filepath.Base(w.dir), "out", "page.txt") + " (and"
	if !strings.Contains(out, want) {
		t.Errorf("%q is missing in %s%s", want, out, err)
	}
}

// The words of a requirement that was not judged say so once.
func TestNotJudgedOnce(t *testing.T) {
	w := newTower(t)
	w.write("bells.hcl", strings.Replace(bellJob, `"small.txt"`, `"small.txt"`+"\n  mood = \"fail\"", 1))
	_, out, err := w.call("run", w.job)
	if !strings.Contains(out, "not judged  stage small did not finish") || !strings.Contains(err, "requirement low not judged: stage small did not finish") {
		t.Errorf("%s%s", out, err)
	}
}
