package job

import (
	"context"
	"time"

	"github.com/hashicorp/hcl/v2"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// Options are what Load needs from outside.
type Options struct {
	// Set holds the text of settings given on the command line, by name.
	Set map[string]string
	// Describe gives the description of a stage by the name used in job files.
	// A fault of kind Missing means that there is no such stage. It is asked
	// once for each name, in the order of the file.
	Describe func(ctx context.Context, name string) (stage.Description, error)
	// StageNames lists the installed stages, for suggestions. May be nil.
	StageNames func() []string
	// Kinds reports whether an artifact kind is known; nil means all are.
	Kinds func(kind string) bool
	// Extensions lists the element types and readers that the job may name.
	Extensions []stage.Extension
	// Absent says why an element type or reader is not among Extensions, such
	// as one that lies there but is not trusted; nil when nothing is known. May
	// be nil.
	Absent func(kind, name string) error
}

// Job is a checked job. One with error diagnostics must not be run; it then
// holds what could be read.
type Job struct {
	Name  string
	About string
	// Folder holds the job file; the paths in it are relative to this folder.
	Folder string
	// Sources are the texts of the job, sorted by name.
	Sources []Source
	// Passed lists files of a job folder that hold no block of the job
	// language (airframes, say) and so are no part of the job.
	Passed       []string
	Settings     []Setting      // in file order
	Stages       []*Stage       // in file order
	Requirements []*Requirement // in file order

	scope *scope
}

// Source is one text of the job.
type Source struct {
	Name  string // as diagnostics name it
	File  string // the file name alone
	Bytes []byte
}

// Setting is a named input with the value it has in this run.
type Setting struct {
	Name  string
	About string
	// Text is the value as text of the job language; a text value stands
	// without quotes.
	Text string
	// Overridden tells that the value came from Options.Set.
	Overridden bool
}

// Stage is one stage block.
type Stage struct {
	Kind  string // name of the stage, such as "mesh"
	Label string
	About string
	// After lists the labels that the block names under after, sorted.
	After []string
	// TimeLimit and MemoryLimit (bytes) are 0 when not given.
	TimeLimit   time.Duration
	MemoryLimit int64
	Description stage.Description
	// Range is the header of the block.
	Range hcl.Range
	// Needs lists the labels it depends on in any way, sorted.
	Needs []string
	// Figures lists the labels whose figures must be known before it can be
	// evaluated in full, sorted.
	Figures []string

	scope     *scope
	arguments map[string]*argument
	uses      []use
	described bool // Description is valid
}

// ArtifactRef names an output of a stage of the job.
type ArtifactRef struct {
	Label  string
	Output string
}

// String gives the address in the job: "stage.modes.modes".
func (r ArtifactRef) String() string { return "stage." + r.Label + "." + r.Output }

// Figures holds the figures of finished stages: by label, then by name, with
// the Go types of package stage.
type Figures = map[string]map[string]any

// Requirement is one requirement block.
type Requirement struct {
	Name    string
	Because string
	// Needs lists the labels whose figures it judges, sorted.
	Needs []string
	Range hcl.Range

	scope     *scope
	condition condition
}

// Verdict is the outcome of a requirement.
type Verdict struct {
	Name    string `json:"name"`
	Because string `json:"because,omitempty"`
	Holds   bool   `json:"holds"`
	// Shown is the condition in words with its values.
	Shown string `json:"shown"`
	// Value, Bound and Margin are texts with units. The margin is positive
	// when the requirement holds, in the unit of the figure; it is empty for
	// conditions and texts.
	Value  string `json:"value,omitempty"`
	Bound  string `json:"bound,omitempty"`
	Margin string `json:"margin,omitempty"`
	// Measured is value and margin as numbers; nil where there is no margin.
	Measured *Measured `json:"measured,omitempty"`
}

// Measured is a value with its margin in SI units.
type Measured struct {
	Value     float64 `json:"value"`
	Margin    float64 `json:"margin"`
	Dimension string  `json:"dimension,omitempty"` // of a quantity
}

// Diagnose turns the fault of a stage into diagnostics with the place in the
// job: the argument that the fault blames, or the header of the stage.
func (j *Job) Diagnose(s *Stage, err *fault.Error) hcl.Diagnostics {
	if err == nil {
		return nil
	}
	d := &hcl.Diagnostic{
		Severity: hcl.DiagError,
		Summary:  "Stage " + s.Label + " failed",
		Subject:  s.Range.Ptr(),
	}
	e := *err
	d.Detail = detail(&e)
	for f := err; f != nil; f = f.Cause {
		if f.Argument != "" {
			d.Subject = s.ArgumentRange(f.Argument).Ptr()
			break
		}
	}
	return hcl.Diagnostics{d}
}
