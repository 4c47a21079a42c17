package run

import (
	"context"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// InProcess offers stages and tools as values of this process, for tests and tools. Sum
// stands for the checksum of their executable.
type InProcess struct {
	Stages []stage.Stage
	Tools  []stage.Tool
	Sum    string
}

var _ Source = InProcess{}

// Stage finds a stage.
func (p InProcess) Stage(name string) (stage.Stage, bool) {
	for _, s := range p.Stages {
		if s.Describe().Name == name {
			return s, true
		}
	}
	return nil, false
}

// Checksum gives Sum.
func (p InProcess) Checksum(string) string { return p.Sum }

// Call calls a tool.
func (p InProcess) Call(ctx context.Context, kind, name string, request stage.ExtensionRequest) error {
	for _, t := range p.Tools {
		if d := t.Describe(); d.Kind == kind && d.Name == name {
			return t.Call(ctx, request)
		}
	}
	return fault.New(fault.Missing, "no extension offers the %s %q", kind, name)
}

// Extensions lists the tools.
func (p InProcess) Extensions() []stage.Extension {
	var out []stage.Extension
	for _, t := range p.Tools {
		d := t.Describe()
		d.Hash = p.Sum
		out = append(out, d)
	}
	return out
}
