package copied

import (
	"bytes"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

// TestCommand runs the demo as a user does: the built executable, stages in
// processes of their own.
func TestCommand(t *testing.T) {
	folder := copyFolder(t)
	program := filepath.Join(folder, "hushframe.exe") // the suffix is for one system and harms no other
	if out, err := exec.Command("go", "build", "-o", program, "hushframe/cmd/hushframe").CombinedOutput(); err != nil {
		t.Fatalf("go build: %v\n%s", err, out)
	}
	hushframe := func(args ...string) (code int, out string) {
		var both bytes.Buffer
		c := exec.Command(program, args...)
		c.Dir, c.Stdout, c.Stderr = folder, &both, &both
		err := c.Run()
		var exit *exec.ExitError
		if errors.As(err, &exit) {
			return exit.ExitCode(), both.String()
		}
		if err != nil {
			t.Fatal(err)
		}
		return 0, both.String()
	}

	code, out := hushframe("run", "baseline.hcl", "--set", "mesh_size="+strings.ReplaceAll(coarse, " ", ""))
	if code != 0 {
		t.Fatalf("the main job ends with %d:\n%s", code, out)
	}
	for _, want := range []string{"Mass by part", "Centre of gravity", "Modes", "order 1", "Predicted and observed peaks", "every requirement holds", "baseline.html"} {
		if !strings.Contains(out, want) {
			t.Errorf("the summary says nothing of %q", want)
		}
	}
	page, err := os.ReadFile(filepath.Join(folder, "report", "baseline.html"))
	if err != nil {
		t.Fatal(err)
	}
	// The page stands alone: nothing in it is fetched.
	if fetched := regexp.MustCompile(`(?i)(src|href)\s*=\s*["']?(https?:|//)|@import|url\(\s*["']?(https?:|//)`).Find(page); fetched != nil {
		t.Errorf("the page fetches %q", fetched)
	}
	tables, err := filepath.Glob(filepath.Join(folder, "report", "*", "*.csv"))
	if err != nil || len(tables) < 10 {
		t.Errorf("%d tables beside the page (%v)", len(tables), err)
	}

	code, out = hushframe("run", "baseline.hcl", "--set", "mesh_size="+strings.ReplaceAll(coarse, " ", ""))
	if code != 0 || !strings.Contains(out, "7 steps: 7 as before") {
		t.Errorf("an unchanged job ends with %d and runs again:\n%s", code, out)
	}

	// A broken requirement: exit code 3, and the report all the same.
	limit, err := os.ReadFile(filepath.Join("..", "limit.hcl"))
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(folder, "limit.hcl"), limit, 0o644); err != nil {
		t.Fatal(err)
	}
	code, out = hushframe("run", "limit.hcl")
	if code != 3 || !strings.Contains(out, "light-enough") || !strings.Contains(out, "broken") {
		t.Errorf("a broken requirement ends with %d:\n%s", code, out)
	}
	if _, err := os.Stat(filepath.Join(folder, "report", "limit.html")); err != nil {
		t.Errorf("no report of the broken requirement: %v", err)
	}
}
