package plan_test

import (
	"context"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/job/jobtest"
	"hushframe/core/pipeline/plan"
)

// The expected plans are approved output: read the difference before keeping it.
var update = flag.Bool("update", false, "write the expected plans anew")

const good = "../../../testdata/jobs/good"

func load(t *testing.T, path string) *job.Job {
	t.Helper()
	j, diags := job.Load(context.Background(), path, job.Options{Describe: jobtest.Describe, StageNames: jobtest.Names})
	if diags.HasErrors() {
		t.Fatal(diags)
	}
	return j
}

func TestPlans(t *testing.T) {
	for _, name := range []string{"baseline.hcl", "expressions.hcl", "folder"} {
		t.Run(name, func(t *testing.T) {
			p, diags := plan.Make(load(t, filepath.Join(good, name)))
			if diags.HasErrors() {
				t.Fatal(diags)
			}
			file := filepath.Join(good, strings.TrimSuffix(name, ".hcl")+".plan")
			if *update {
				if err := os.WriteFile(file, []byte(p.String()), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			if got := p.String(); got != strings.ReplaceAll(string(want), "\r\n", "\n") {
				t.Errorf("differs from %s (run with -update and read the difference):\n%s", file, got)
			}
			done := map[string]bool{}
			for _, s := range p.Steps {
				for _, n := range s.Needs {
					if !done[n] {
						t.Errorf("%s comes before %s", s.Stage.Label, n)
					}
				}
				done[s.Stage.Label] = true
			}
			if len(done) != len(p.Job.Stages) {
				t.Errorf("%d steps for %d stages", len(done), len(p.Job.Stages))
			}
		})
	}
}

func TestDependents(t *testing.T) {
	p, _ := plan.Make(load(t, filepath.Join(good, "baseline.hcl")))
	for label, want := range map[string]string{
		"shells": "modes flight check page",
		"hover":  "check page",
		"page":   "",
	} {
		if got := strings.Join(p.Dependents(label), " "); got != want {
			t.Errorf("what needs %s is %q, not %q", label, got, want)
		}
	}
	if p.Step("modes") == nil || p.Step("modes").Last || !p.Step("page").Last || p.Step("none") != nil {
		t.Error("steps are not found by label")
	}
}

// Among the stages that could be next, the first in the file is.
func TestOrder(t *testing.T) {
	path := filepath.Join(t.TempDir(), "job.hcl")
	text := `job "x" {}
stage "report" "last" {
  include = []
  to      = "a.html"
}
stage "mesh" "second" { geometry = stage.first.geometry }
stage "import" "first" { airframe = "job.hcl" }
stage "import" "third" { airframe = "job.hcl" }
`
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	p, _ := plan.Make(load(t, path))
	var got []string
	for _, s := range p.Steps {
		got = append(got, s.Stage.Label)
	}
	if strings.Join(got, " ") != "first second third last" {
		t.Errorf("order %v", got)
	}
}

func TestCircle(t *testing.T) {
	path := filepath.Join(t.TempDir(), "job.hcl")
	text := `job "x" {}
stage "mesh" "a" { geometry = stage.b.mesh }
stage "mesh" "b" { geometry = stage.a.mesh }
`
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	j, _ := job.Load(context.Background(), path, job.Options{Describe: jobtest.Describe})
	p, diags := plan.Make(j)
	if p != nil || len(diags) != 1 || !strings.Contains(diags[0].Detail, "stage.a needs stage.b") {
		t.Errorf("plan %v, diagnostics %v", p, diags)
	}
}
