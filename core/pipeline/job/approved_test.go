package job_test

import (
	"context"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/job"
)

// The expected texts are approved output: read the difference before keeping it.
var update = flag.Bool("update", false, "write the expected texts anew")

const jobs = "../../../testdata/jobs"

// cases lists the job files and folders below a folder of testdata/jobs, but for
// airframes.
func cases(t *testing.T, folder string) []string {
	t.Helper()
	entries, err := os.ReadDir(filepath.Join(jobs, folder))
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		files, _ := filepath.Glob(filepath.Join(jobs, folder, e.Name(), "*"))
		if e.Name() != "flights" && e.IsDir() && len(files) > 0 || strings.HasSuffix(e.Name(), ".hcl") && e.Name() != "airframe.hcl" {
			names = append(names, e.Name())
		}
	}
	if len(names) == 0 {
		t.Fatal("no cases")
	}
	return names
}

// settings reads the lines "# set name=value" of a job file.
func settings(path string) map[string]string {
	set := map[string]string{}
	text, _ := os.ReadFile(path)
	for _, line := range strings.Split(string(text), "\n") {
		if rest, ok := strings.CutPrefix(line, "# set "); ok {
			name, value, _ := strings.Cut(rest, "=")
			set[name] = value
		}
	}
	return set
}

func approve(t *testing.T, file, got string) {
	t.Helper()
	if *update {
		if err := os.WriteFile(file, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if got != strings.ReplaceAll(string(want), "\r\n", "\n") {
		t.Errorf("differs from %s (run with -update and read the difference):\n%s", file, got)
	}
}

func TestBadJobs(t *testing.T) {
	for _, name := range cases(t, "bad") {
		t.Run(name, func(t *testing.T) {
			t.Chdir(filepath.Join(jobs, "bad"))
			opt := options()
			opt.Set = settings(name)
			j, diags := job.Load(context.Background(), name, opt)
			if !diags.HasErrors() {
				t.Fatal("nothing is found wrong")
			}
			var b strings.Builder
			if err := job.WriteDiagnostics(&b, diags, j.Sources, 100, false); err != nil {
				t.Fatal(err)
			}
			approve(t, strings.TrimSuffix(name, ".hcl")+".txt", b.String())
		})
	}
}

func TestGoodJobs(t *testing.T) {
	for _, name := range cases(t, "good") {
		t.Run(name, func(t *testing.T) {
			j, diags := job.Load(context.Background(), filepath.Join(jobs, "good", name), options())
			var b strings.Builder
			if err := job.WriteDiagnostics(&b, diags, j.Sources, 100, false); err != nil {
				t.Fatal(err)
			}
			if b.Len() > 0 {
				t.Fatal(b.String())
			}
		})
	}
}
