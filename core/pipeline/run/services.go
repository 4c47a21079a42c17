package run

import (
	"cmp"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"slices"
	"sync"

	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// services is what a step may reach: the kept results of the store, and other
// extensions through the source. It notes each extension used.
type services struct {
	runner   *runner
	checksum string // of the executable of the stage
	threads  int    // the share of the step
	memory   int64

	mu   sync.Mutex
	uses map[store.ToolUse]bool
}

var _ stage.Services = (*services)(nil)

// Keep finds or makes an intermediate result. It depends on every element type and reader that the step has called
// so far, besides the executable of the stage.
func (s *services) Keep(ctx context.Context, key string, make func(folder string) error) (string, bool, error) {
	st, sums := s.runner.Store, s.sums()
	if folder, ok := st.FindKept(sums, key); ok && !s.runner.Force {
		return folder, true, nil
	}
	folder, err := st.NewKept()
	if err != nil {
		return "", false, err
	}
	if err := make(folder); err != nil {
		return "", false, err
	}
	if err := ctx.Err(); err != nil {
		return "", false, err
	}
	folder, err = st.CommitKept(sums, key, folder)
	return folder, false, err
}

// Element calls an element type.
func (s *services) Element(ctx context.Context, name string, request stage.ExtensionRequest) error {
	return s.call(ctx, "element", name, request)
}

// Reader calls a recording reader.
func (s *services) Reader(ctx context.Context, name string, request stage.ExtensionRequest) error {
	return s.call(ctx, "reader", name, request)
}

func (s *services) call(ctx context.Context, kind, name string, request stage.ExtensionRequest) error {
	s.use(kind, name)
	request.Threads, request.Memory = s.threads, s.memory
	return s.runner.Source.Call(ctx, kind, name, request)
}

// Extensions lists what can be reached; the step then depends on the list.
func (s *services) Extensions(context.Context) ([]stage.Extension, error) {
	s.use(toolList, "")
	return s.runner.Source.Extensions(), nil
}

// toolList is the kind of a use that stands for the list of all extensions.
const toolList = "list"

func (s *services) use(kind, name string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.uses == nil {
		s.uses = map[store.ToolUse]bool{}
	}
	s.uses[store.ToolUse{Kind: kind, Name: name, Hash: toolHash(s.runner.Source, kind, name)}] = true
}

// sums is the checksum of the stage with those of the extensions it has called.
func (s *services) sums() string {
	all := s.checksum
	for _, u := range s.used() {
		if u.Kind != toolList {
			all += " " + u.Hash
		}
	}
	return all
}

// used lists the uses, sorted.
func (s *services) used() []store.ToolUse {
	s.mu.Lock()
	defer s.mu.Unlock()
	var out []store.ToolUse
	for u := range s.uses {
		out = append(out, u)
	}
	slices.SortFunc(out, func(a, b store.ToolUse) int {
		return cmp.Or(cmp.Compare(a.Kind, b.Kind), cmp.Compare(a.Name, b.Name), cmp.Compare(a.Hash, b.Hash))
	})
	return out
}

// toolHash is the checksum of an extension, "" if there is none of that name.
func toolHash(source Source, kind, name string) string {
	all := source.Extensions()
	if kind == toolList {
		data, _ := json.Marshal(all)
		sum := sha256.Sum256(data)
		return hex.EncodeToString(sum[:])
	}
	for _, x := range all {
		if x.Kind == kind && x.Name == name {
			return x.Hash
		}
	}
	return ""
}

// reporter passes on what a step says while it runs.
type reporter struct {
	runner *runner
	label  string
}

func (x reporter) Progress(phase string, fraction float64) {
	x.runner.tell(func(o Observer) { o.Progress(x.label, phase, fraction) })
}

func (x reporter) Log(level stage.Level, text string, fields ...any) {
	x.runner.tell(func(o Observer) { o.Log(x.label, level, text, fields) })
}
