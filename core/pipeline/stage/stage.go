// Package stage is the contract between the pipeline and one step of a job.
//
// A stage is a value that first describes itself (arguments, inputs, outputs,
// figures) and is then called with constant arguments and the folders of its
// input artifacts. It touches the outside only through its Call: files of the
// job through Files, artifacts through their folders, other extensions through
// Services. The same value runs in process in tests and behind go-plugin in
// jobs; it cannot tell the difference.
//
// The package imports only the standard library and fault.
package stage

import (
	"context"
)

// Stage is one kind of step.
type Stage interface {
	// Describe states everything a job may say to this stage. It is constant
	// for one executable and cheap.
	Describe() Description
	// Run does the work of one step. It must be a function of the call alone:
	// equal arguments, inputs and files give equal bytes in every output.
	// Errors are *fault.Error; one that blames an argument names it.
	Run(ctx context.Context, call *Call) (*Outcome, error)
}

// Description is what a stage says about itself.
type Description struct {
	// Name is the word used in job files: stage "NAME" "label".
	Name string `json:"name"`
	// About is one line without a full stop; Doc explains the stage in full.
	About string `json:"about"`
	Doc   string `json:"doc,omitempty"`
	// Arguments in the order in which help shows them.
	Arguments []Argument `json:"arguments"`
	Outputs   []Output   `json:"outputs"`
	Figures   []Figure   `json:"figures,omitempty"`
	// Version is that of the executable, for one from outside.
	Version string `json:"version,omitempty"`
	// Last marks a stage that receives the host's run artifact as the implicit
	// input "run", and so runs after every requirement has been judged.
	Last bool `json:"last,omitempty"`
}

// Argument is a named input of a stage.
type Argument struct {
	Name     string `json:"name"`
	About    string `json:"about"`
	Type     Type   `json:"type"`
	Required bool   `json:"required,omitempty"`
	// Default is used when the argument is left out; nil means none. See Value
	// for the Go types.
	Default any `json:"default,omitempty"`
	// Example is the default or a typical value as text in a job file.
	Example string `json:"example,omitempty"`
	// Min and Max bound numbers and quantities (SI), both inclusive;
	// Above is an exclusive lower bound.
	Min   *float64 `json:"min,omitempty"`
	Max   *float64 `json:"max,omitempty"`
	Above *float64 `json:"above,omitempty"`
	// Choices lists the only texts allowed, if not empty.
	Choices []string `json:"choices,omitempty"`
	// Extension is a kind of extension ("element" or "reader") whose names the
	// text may be besides Choices.
	Extension string `json:"extension,omitempty"`
	// OptionsOf names another argument, a text. Where that one names an
	// extension, or an entry of Variants, the value is an object of its options.
	OptionsOf string `json:"options_of,omitempty"`
	// Variants lists the options of each choice that comes with the stage.
	Variants map[string][]Argument `json:"variants,omitempty"`
}

// TypeKind names the shape of a value.
type TypeKind string

const (
	Text     TypeKind = "text"
	Number   TypeKind = "number"
	Whole    TypeKind = "whole"
	Truth    TypeKind = "truth"
	Amount   TypeKind = "quantity" // number with a unit; Dimension is set
	List     TypeKind = "list"     // Element is set
	Map      TypeKind = "map"      // text keys, Element is set
	Object   TypeKind = "object"   // Fields is set
	File     TypeKind = "file"     // path relative to the job file, read through Call.Files
	Target   TypeKind = "target"   // path relative to the job file, where the host publishes an output
	Artifact TypeKind = "artifact" // Kinds is set
	Any      TypeKind = "any"      // any value; the stage checks it
)

// Type is the type of an argument or figure.
type Type struct {
	Kind      TypeKind   `json:"kind"`
	Dimension string     `json:"dimension,omitempty"` // for quantities: "length", "frequency", ...
	Unit      string     `json:"unit,omitempty"`      // unit used when shown
	Element   *Type      `json:"element,omitempty"`
	Fields    []Argument `json:"fields,omitempty"`
	Kinds     []string   `json:"kinds,omitempty"` // artifact kinds accepted
}

// Output is an artifact that a stage writes.
type Output struct {
	Name  string `json:"name"`
	Kind  string `json:"kind"`
	About string `json:"about"`
	// Publish names the argument of type Target under which the host copies
	// the files of this artifact once the step is done: the one that has the
	// base name of the target, and the others beside it by their paths.
	Publish string `json:"publish,omitempty"`
}

// Figure is a value that a stage reports.
type Figure struct {
	Name  string `json:"name"`
	About string `json:"about"`
	Type  Type   `json:"type"`
}

// Quantity is a number with a dimension. SI is in coherent SI units (rad for
// angles, Hz for frequency, rad/s for rotational speed).
type Quantity struct {
	SI        float64 `json:"si"`
	Dimension string  `json:"dimension"`
}

// Call is everything one run of a stage may use.
type Call struct {
	// Arguments holds every argument but artifacts, checked, defaults filled.
	Arguments Arguments
	// Inputs holds, for each argument of kind artifact, one folder, or several
	// for a list of artifacts, in the order of the job.
	Inputs map[string][]Input
	// Outputs gives an empty folder for each declared output.
	Outputs map[string]string
	// Scratch is an empty folder of this step, removed by the host.
	Scratch string
	// Files reads files named by the job.
	Files *Files
	// Threads and Memory (bytes, 0 for no limit) are the share of this step.
	Threads int
	Memory  int64
	// Report takes progress and log lines. Never nil.
	Report Reporter
	// Services reaches element types, readers and kept results. Never nil.
	Services Services
}

// Input is one artifact handed to a stage.
type Input struct {
	Folder string `json:"folder"`
	Kind   string `json:"kind"`
	Hash   string `json:"hash"` // content hash
	// From is the address in the job, such as "stage.modes.modes".
	From string `json:"from"`
}

// Outcome is what a finished step reports besides its artifacts. It is kept
// with them, so that a later run that reuses the step shows the same.
type Outcome struct {
	Figures  map[string]any `json:"figures,omitempty"`
	Warnings []Warning      `json:"warnings,omitempty"`
	// Notes are facts worth a line: what was guessed, merged or left out.
	Notes []string `json:"notes,omitempty"`
	// Summary is shown to the user at the end of a run.
	Summary []Section `json:"summary,omitempty"`
}

// Warning is a finding that does not stop the work. ID is stable, in the form
// "solve.mode-near-limit", so that users can look it up.
type Warning struct {
	ID     string `json:"id"`
	Text   string `json:"text"`
	Where  string `json:"where,omitempty"`
	Remedy string `json:"remedy,omitempty"`
}

// Section is a titled table for the terminal. Cells are ready to print; a
// column with Right set is aligned right.
type Section struct {
	Title   string     `json:"title"`
	Text    string     `json:"text,omitempty"`
	Columns []Column   `json:"columns,omitempty"`
	Rows    [][]string `json:"rows,omitempty"`
}

// Column heads a column of a Section.
type Column struct {
	Name  string `json:"name"`
	Right bool   `json:"right,omitempty"`
}

// Level of a log line.
type Level string

const (
	Debug Level = "debug"
	Info  Level = "info"
	Warn  Level = "warn"
)

// Reporter streams progress and log lines to the host while a step runs.
type Reporter interface {
	// Progress states the phase in a word or two and its fraction 0 to 1;
	// negative means unknown.
	Progress(phase string, fraction float64)
	// Log sends one line with fields (name, value, name, value, ...).
	Log(level Level, text string, fields ...any)
}

// Services is how a stage reaches what lives in other processes. The host
// relays; a stage never starts a process.
type Services interface {
	// Keep looks for an intermediate result under a key that states all it
	// depends on (the host adds the checksums of the executables). When none
	// is found, make fills an empty folder, which is then kept. It returns the
	// folder and whether it was found. A folder with a half result is never
	// returned.
	Keep(ctx context.Context, key string, make func(folder string) error) (folder string, found bool, err error)
	// Element runs one method of an element type from outside: in and out are
	// folders of Arrow files in the scratch folder. The name is that used in
	// the job. Package core/extension makes the calls.
	Element(ctx context.Context, name string, request ExtensionRequest) error
	// Reader runs a recording reader from outside in the same way.
	Reader(ctx context.Context, name string, request ExtensionRequest) error
	// Extensions lists what can be reached, sorted by kind and name.
	Extensions(ctx context.Context) ([]Extension, error)
}

// ExtensionRequest is one relayed call.
type ExtensionRequest struct {
	// Method is a method of the extension kind, such as "matrices" or "read".
	Method string `json:"method"`
	// Arguments are the options of the job, checked, defaults filled.
	Arguments Arguments `json:"arguments,omitempty"`
	// Request holds what the method needs besides.
	Request map[string]any `json:"request,omitempty"`
	// In is the folder or file that the method reads, Out an empty folder for
	// what it writes; absolute paths.
	In  string `json:"in,omitempty"`
	Out string `json:"out,omitempty"`
	// Threads and Memory (bytes, 0 for no limit) are the share of the step on
	// whose behalf the call is made. The host fills them in.
	Threads int   `json:"threads,omitempty"`
	Memory  int64 `json:"memory,omitempty"`
}

// Tool is an element type or recording reader as it is called: by method.
type Tool interface {
	// Describe names kind ("element" or "reader"), name and arguments.
	Describe() Extension
	// Call runs one method; what it needs and gives lies in Arrow files.
	Call(ctx context.Context, request ExtensionRequest) error
}

// Extension is an element type or reader that can be reached.
type Extension struct {
	Kind      string     `json:"kind"` // "element" or "reader"
	Name      string     `json:"name"`
	About     string     `json:"about"`
	Arguments []Argument `json:"arguments,omitempty"`
	// Version is that of the executable.
	Version string `json:"version,omitempty"`
	Hash    string `json:"hash,omitempty"` // SHA-256 of its executable, empty when in process
}
