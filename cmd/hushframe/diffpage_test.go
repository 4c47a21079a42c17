package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// The page of two runs says what the terminal says, and its tables lie beside it.
func TestDiffPage(t *testing.T) {
	w := newPlank(t)
	w.must(exitHeld, "run", w.job, "--name", "thin")
	w.must(exitBroken, "run", w.job, "--set", "thickness=3mm")
	file := filepath.Join(w.dir, "out", "change.html")
	out := w.must(exitBroken, "diff", w.job+"@thin", w.job, "--page", file)
	if !strings.Contains(out, "change.html (and 9 ") || !strings.Contains(out, "files beside it)") {
		t.Errorf("not told:\n%s", out)
	}
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	page := string(data)
	for _, want := range []string{"A requirement that held before does not now", "Modes that both have", "&#43;50.0", "Requirements before and after", "Settings that differ", "thickness", "3mm", "plank.hcl@thin"} {
		if !strings.Contains(page, want) {
			t.Errorf("the page lacks %q", want)
		}
	}
	modes, err := os.ReadFile(filepath.Join(w.dir, "out", "change-tables", "modes-followed.csv"))
	if err != nil || strings.Count(string(modes), "\n") < 3 {
		t.Errorf("%s, %v", modes, err)
	}
	if back := w.must(exitHeld, "diff", w.job, "@thin", "--json", "--page", file); !strings.HasPrefix(back, "{") || strings.Contains(back, "wrote") {
		t.Errorf("JSON and a page:\n%.200s", back)
	}
	if data, _ = os.ReadFile(file); !strings.Contains(string(data), "No requirement that held before fails now") {
		t.Error("the page of the other way round is not the other way round")
	}
	for name, want := range map[string]string{filepath.Join(w.dir, "change.txt"): "does not end in .html", filepath.Join(w.job, "x.html"): "give a path that can be written"} {
		if code, _, err := w.call("diff", w.job, "@thin", "--page", name); code != exitUsage || !strings.Contains(err, want) {
			t.Errorf("%s: exit %d, %s", name, code, err)
		}
	}
}
