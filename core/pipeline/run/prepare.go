package run

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"io"
	"os"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// evaluate gives arguments, inputs and key of a step, or what is wrong.
func evaluate(source Source, s *plan.Step, available map[string]input, figures job.Figures) (*prepared, hcl.Diagnostics) {
	arguments, refs, diags := s.Stage.Evaluate(figures)
	if diags.HasErrors() {
		return nil, diags
	}
	p := &prepared{arguments: arguments, inputs: map[string][]input{}}
	hashes := map[string][]string{}
	add := func(argument string, in input) {
		p.inputs[argument] = append(p.inputs[argument], in)
		hashes[argument] = append(hashes[argument], in.hash)
	}
	for argument, list := range refs {
		for _, ref := range list {
			in, ok := available[ref.String()]
			if !ok {
				panic("run: " + ref.String() + " is not among the inputs of " + s.Stage.Label)
			}
			add(argument, in)
		}
	}
	if in, ok := available[account.KindName]; ok {
		add(account.KindName, in)
	}
	var err error
	p.key, err = store.Step{Stage: s.Stage.Kind, Executable: source.Checksum(s.Stage.Kind), Arguments: arguments, Inputs: hashes}.Key()
	if err != nil {
		panic("run: " + err.Error()) // arguments come from the job and have the types of values
	}
	return p, nil
}

// newWorld tells what the files of a job and the extensions are like now.
func newWorld(ctx context.Context, folder string, source Source) store.World {
	files := stage.NewFiles(folder)
	return store.World{
		File: func(path string) string { return fileHash(ctx, files.Path(path)) },
		Tool: func(kind, name string) string { return toolHash(source, kind, name) },
	}
}

// fileHash is the SHA-256 of a file, empty when there is none; one that cannot
// be read, or not before ctx ends, is like no other.
func fileHash(ctx context.Context, path string) string {
	f, err := os.Open(path)
	if os.IsNotExist(err) {
		return ""
	}
	if err != nil {
		return "unreadable"
	}
	defer f.Close()
	h := sha256.New()
	if _, err := io.Copy(h, contextReader{ctx, f}); err != nil {
		return "unreadable"
	}
	return hex.EncodeToString(h.Sum(nil))
}

type contextReader struct {
	ctx context.Context
	in  io.Reader
}

func (r contextReader) Read(p []byte) (int, error) {
	if err := r.ctx.Err(); err != nil {
		return 0, err
	}
	return r.in.Read(p)
}
