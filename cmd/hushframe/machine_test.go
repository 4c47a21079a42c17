package main

import (
	"encoding/json"
	"math"
	"reflect"
	"strings"
	"testing"

	"hushframe/core/pipeline/stage"
)

// The whole document of a run is approved; a second run, and one with other threads, write the same bytes.
func TestRunJSON(t *testing.T) {
	w := newTower(t)
	code, out, _ := w.call("run", w.job, "--json")
	if code != exitHeld {
		t.Fatalf("exit %d", code)
	}
	approve(t, "run-json", out)
	w.raw = true
	first := w.must(exitHeld, "run", w.job, "--json")
	if again := w.must(exitHeld, "run", w.job, "--json", "--force", "--threads", "1"); again != first {
		t.Errorf("a second run writes something else:\n%s", again)
	}
	broken := w.must(exitBroken, "run", w.job, "--json", "--set", "raise=50 Hz")
	var doc runDocument
	if err := json.Unmarshal([]byte(broken), &doc); err != nil {
		t.Fatal(err)
	}
	q := doc.Requirements[0]
	if doc.Exit != exitBroken || doc.Verdict != "broken" || q.State != "broken" || q.Margin != "-10 Hz" ||
		*q.Measured != (measureData{710.0, -10.0, "frequency"}) || !doc.Settings[0].Given {
		t.Errorf("%+v", doc)
	}
	w.write("bells.hcl", strings.Replace(bellJob, `"small.txt"`, `"small.txt"`+"\n  mood = \"fail\"", 1))
	var failed runDocument
	if err := json.Unmarshal([]byte(w.must(exitFailed, "run", w.job, "--json")), &failed); err != nil {
		t.Fatal(err)
	}
	for _, s := range failed.Steps {
		switch s.Label {
		case "small":
			if s.State != "failed" || s.Fault == nil || !strings.Contains(s.Fault.Text, "cracked") {
				t.Errorf("%+v", s)
			}
		case "page":
			if s.State != "skipped" || s.Because != "small" {
				t.Errorf("%+v", s)
			}
		}
	}
	if failed.Verdict != "failed" || failed.Requirements[0].State != "not judged" {
		t.Errorf("%+v", failed)
	}
}

func TestForJSON(t *testing.T) {
	got := forJSON(map[string]any{"a": math.NaN(), "b": []any{math.Inf(1), stage.Quantity{SI: math.Inf(-1), Dimension: "mass"}, 2.5, "x", nil},
		"c": []float64{1, math.NaN()}, "d": []int64(nil), "e": true})
	want := map[string]any{"a": nil, "b": []any{"infinite", map[string]any{"value": "-infinite", "dimension": "mass"}, 2.5, "x", nil},
		"c": []any{1.0, nil}, "d": []int64{}, "e": true}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("%v", got)
	}
}
