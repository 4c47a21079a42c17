package verify

import (
	"context"
	"encoding/json"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

type quiet struct{}

func (quiet) Progress(string, float64)        {}
func (quiet) Log(stage.Level, string, ...any) {}

func perform(t *testing.T, folder string, tables, rows []any) (*stage.Outcome, error) {
	t.Helper()
	return (Stage{}).Run(context.Background(), &stage.Call{
		Arguments: stage.Arguments{"tables": tables, "rows": rows}, Outputs: map[string]string{"verification": t.TempDir()},
		Files: stage.NewFiles(folder), Threads: 2, Report: quiet{},
	})
}

// A spoiled reference value is counted as failed, and so is a row that cannot be built.
func TestErrorsAreCounted(t *testing.T) {
	text, err := os.ReadFile("../../testdata/known/A_beams.json")
	if err != nil {
		t.Fatal(err)
	}
	var table map[string]any
	if err := json.Unmarshal(text, &table); err != nil {
		t.Fatal(err)
	}
	for _, r := range table["rows"].([]any) {
		row := r.(map[string]any)
		switch row["id"] {
		case "A-MOUNTS-FC":
			values := row["values"].([]any)
			values[2] = 1.01 * values[2].(float64)
		case "A-MOUNTS-CAMERA":
			row["setup"].(map[string]any)["mass_kg"] = -1
		}
	}
	spoiled, err := json.Marshal(table)
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "A_beams.json"), spoiled, 0o644); err != nil {
		t.Fatal(err)
	}
	o, err := perform(t, folder, []any{"A_beams.json"}, []any{"A-MOUNTS-"})
	if err != nil {
		t.Fatal(err)
	}
	if o.Figures["failed"] != 2.0 || o.Figures["problems"] != 2.0 || o.Figures["values"] != 6.0 || !(o.Figures["worst"].(float64) > 1) {
		t.Errorf("figures %v", o.Figures)
	}
	if row := o.Summary[0].Rows[1]; !strings.Contains(row[0], "A-MOUNTS-CAMERA, ") || !strings.Contains(row[0], "mass") {
		t.Errorf("the row that cannot be built says %q", row)
	}
}

func TestRefusals(t *testing.T) {
	for want, c := range map[string]struct{ tables, rows []any }{
		"no problem of a table called F_signals.json": {[]any{"../../testdata/known/F_signals.json"}, nil},
		`no row of the tables begins with "Z-"`:       {[]any{"../../testdata/known/A_beams.json"}, []any{"A-MOUNTS-", "Z-"}},
		"A_beams.json":                                {[]any{"nowhere/A_beams.json"}, nil},
	} {
		_, err := perform(t, ".", c.tables, c.rows)
		var f *fault.Error
		if !errors.As(err, &f) || !strings.Contains(f.Error(), want) {
			t.Errorf("got %v, want a fault about %s", err, want)
		}
	}
}
