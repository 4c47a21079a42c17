package run

import (
	"context"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// InProcess offers stages as values of this process, for tests and tools. Sum
// stands for the checksum of their executable.
type InProcess struct {
	Stages []stage.Stage
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

// Call fails: there are no extensions.
func (p InProcess) Call(_ context.Context, kind, name string, _ stage.ExtensionRequest) error {
	return fault.New(fault.Missing, "no extension offers the %s %q", kind, name)
}

// Extensions lists none.
func (p InProcess) Extensions() []stage.Extension { return nil }
