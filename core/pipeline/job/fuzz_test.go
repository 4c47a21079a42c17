package job_test

import (
	"context"
	"io"
	"os"
	"path/filepath"
	"testing"

	"hushframe/core/pipeline/job"
)

// FuzzLoad holds that no text makes Load, Evaluate, Judge or WriteDiagnostics
// panic, that a job without diagnostics can be evaluated, and that loading
// twice says the same.
func FuzzLoad(f *testing.F) {
	for _, pattern := range []string{"good/*.hcl", "good/*/*.hcl", "bad/*.hcl", "bad/*/*.hcl"} {
		files, err := filepath.Glob(filepath.Join(jobs, pattern))
		if err != nil || len(files) == 0 {
			f.Fatal(pattern, err)
		}
		for _, name := range files {
			text, err := os.ReadFile(name)
			if err != nil {
				f.Fatal(err)
			}
			f.Add(text, "thickness", "6mm")
		}
	}
	folder := f.TempDir()
	path := filepath.Join(folder, "job.hcl")
	f.Fuzz(func(t *testing.T, text []byte, name, value string) {
		if err := os.WriteFile(path, text, 0o644); err != nil {
			t.Fatal(err)
		}
		opt := options()
		opt.Set = map[string]string{name: value}
		j, diags := job.Load(context.Background(), path, opt)
		again, repeated := job.Load(context.Background(), path, opt)
		if diags.Error() != repeated.Error() || len(j.Stages) != len(again.Stages) {
			t.Fatalf("two loads differ:\n%v\n%v", diags, repeated)
		}
		for _, width := range []int{0, 30} {
			if err := job.WriteDiagnostics(io.Discard, diags, j.Sources, width, true); err != nil {
				t.Fatal(err)
			}
		}
		for _, s := range j.Stages {
			_, _, more := s.Evaluate(nil)
			if more.HasErrors() && !diags.HasErrors() {
				t.Fatalf("a checked stage fails: %v", more)
			}
			for _, a := range s.Description.Arguments {
				_ = s.ArgumentRange(a.Name + ".x[0]")
			}
		}
		for _, r := range j.Requirements {
			if _, more := r.Judge(nil); more.HasErrors() && !diags.HasErrors() {
				t.Fatalf("a checked requirement fails: %v", more)
			}
		}
	})
}

func BenchmarkLoad(b *testing.B) {
	for b.Loop() {
		if _, diags := job.Load(context.Background(), filepath.Join(jobs, "good", "baseline.hcl"), options()); diags.HasErrors() {
			b.Fatal(diags)
		}
	}
}
