// Package account is what the host states of a run: the artifact of kind "run"
// that reports receive as their implicit input. It holds no time, no place and
// no host name, and does not tell a step that ran from one that was reused, so
// equal runs give equal accounts.
package account

import "hushframe/core/pipeline/artifact"

// KindName is the artifact kind, and the name of the implicit input.
const KindName = "run"

// Account is the content of the artifact.
type Account struct {
	Job, About  string
	Program     string // name and version
	Sources     []Source
	Settings    []Setting
	Steps       []Step
	Executables []Executable
	Artifacts   []Artifact
	Files       []File
	Figures     []Figure
	Verdicts    []Verdict
	Warnings    []Warning
	Notes       []Note
}

// Source is one text of the job, by its file name alone.
type Source struct{ Name, Text, SHA256 string }

// Setting is a setting of the job with the value it had, as job text.
type Setting struct {
	Name, Value, About string
	Overridden         bool // the value came from the command line
}

// Step is one stage block. State is finished, failed, skipped or stopped.
// Executable is the SHA-256 of what ran it; Key addresses it in the store.
type Step struct{ Label, Stage, About, State, Key, Executable string }

// Executable is a program involved.
type Executable struct{ Name, Version, SHA256 string }

// Artifact is an output of a step.
type Artifact struct{ Step, Output, Kind, Hash string }

// File is a file that a step read, as the job names it; without SHA256 it was
// looked for and not there.
type File struct{ Step, Path, SHA256 string }

// Figure is a number, quantity, text or truth that a step reported; lists are left out. Number is SI, NaN for what is no
// number; Dimension is empty for what is no quantity.
type Figure struct {
	Step, Name, Text string
	Number           float64
	Dimension        string
}

// Verdict is a requirement. One that is not Judged lacked figures.
type Verdict struct {
	Name, Because, Shown, Value, Bound, Margin string
	Holds, Judged                              bool
}

// Warning is a finding of a step.
type Warning struct{ Step, ID, Text, Where, Remedy string }

// Note is a fact that a step stated.
type Note struct{ Step, Text string }

func text(name, about string) artifact.Column {
	return artifact.Column{Name: name, Type: artifact.Text, About: about}
}

func truth(name, about string) artifact.Column {
	return artifact.Column{Name: name, Type: artifact.Truth, About: about}
}

// Kind describes the artifact.
var Kind = artifact.Kind{
	Name: KindName, Version: 1, About: "what a run was made of and what became of it, written by the host",
	Scalars: []artifact.Column{
		text("job", "name of the job"), text("about", "what the job is about"), text("program", "name and version of the host"),
	},
	Tables: []artifact.TableSpec{
		{Name: "sources", About: "texts of the job", Columns: []artifact.Column{
			text("name", "file name"), text("text", "the whole text"), text("sha256", "of the text"),
		}},
		{Name: "settings", About: "settings with the values they had", Columns: []artifact.Column{
			text("name", "setting"), text("value", "as job text"), text("about", "what it is"), truth("overridden", "given on the command line"),
		}},
		{Name: "steps", About: "stages of the job in the order of the plan", Columns: []artifact.Column{
			text("label", "label in the job"), text("stage", "kind of stage"), text("about", "what the job says of it"),
			text("state", "finished, failed, skipped or stopped"), text("key", "address in the store"), text("executable", "SHA-256 of what ran it"),
		}},
		{Name: "executables", About: "programs involved", Columns: []artifact.Column{
			text("name", "program or extension"), text("version", "as it states"), text("sha256", "of the file"),
		}},
		{Name: "artifacts", About: "outputs of the steps", Columns: []artifact.Column{
			text("step", "label"), text("output", "name of the output"), text("kind", "artifact kind"), text("hash", "content hash"),
		}},
		{Name: "files", About: "files that steps read or looked for", Columns: []artifact.Column{
			text("step", "label"), text("path", "as the job names it"), text("sha256", "of the content; empty if there was no file"),
		}},
		{Name: "figures", About: "numbers, quantities, texts and truths that the steps reported", Columns: []artifact.Column{
			text("step", "label"), text("name", "figure"), text("text", "with unit"),
			{Name: "number", Type: artifact.Float, Unit: "SI", About: "NaN for what is no number"}, text("dimension", "of a quantity"),
		}},
		{Name: "verdicts", About: "requirements in file order", Columns: []artifact.Column{
			text("name", "requirement"), text("because", "its reason"), truth("holds", "it holds"), truth("judged", "its figures were there"),
			text("shown", "condition with values"), text("value", "with unit"), text("bound", "with unit"), text("margin", "positive when it holds"),
		}},
		{Name: "warnings", About: "findings of the steps", Columns: []artifact.Column{
			text("step", "label"), text("id", "stable name of the finding"), text("text", "what was found"), text("where", "on what"), text("remedy", "what to do"),
		}},
		{Name: "notes", About: "facts stated by the steps", Columns: []artifact.Column{text("step", "label"), text("text", "the fact")}},
	},
}

func col[T, C any](rows []T, f func(T) C) []C {
	out := make([]C, len(rows))
	for i, r := range rows {
		out[i] = f(r)
	}
	return out
}

// Encode makes the artifact.
func (x *Account) Encode() *artifact.Artifact {
	a := artifact.New(Kind)
	a.Scalars = map[string]any{"job": x.Job, "about": x.About, "program": x.Program}
	a.Table("sources").
		Set("name", col(x.Sources, func(r Source) string { return r.Name })).
		Set("text", col(x.Sources, func(r Source) string { return r.Text })).
		Set("sha256", col(x.Sources, func(r Source) string { return r.SHA256 }))
	a.Table("settings").
		Set("name", col(x.Settings, func(r Setting) string { return r.Name })).
		Set("value", col(x.Settings, func(r Setting) string { return r.Value })).
		Set("about", col(x.Settings, func(r Setting) string { return r.About })).
		Set("overridden", col(x.Settings, func(r Setting) bool { return r.Overridden }))
	a.Table("steps").
		Set("label", col(x.Steps, func(r Step) string { return r.Label })).
		Set("stage", col(x.Steps, func(r Step) string { return r.Stage })).
		Set("about", col(x.Steps, func(r Step) string { return r.About })).
		Set("state", col(x.Steps, func(r Step) string { return r.State })).
		Set("key", col(x.Steps, func(r Step) string { return r.Key })).
		Set("executable", col(x.Steps, func(r Step) string { return r.Executable }))
	a.Table("executables").
		Set("name", col(x.Executables, func(r Executable) string { return r.Name })).
		Set("version", col(x.Executables, func(r Executable) string { return r.Version })).
		Set("sha256", col(x.Executables, func(r Executable) string { return r.SHA256 }))
	a.Table("artifacts").
		Set("step", col(x.Artifacts, func(r Artifact) string { return r.Step })).
		Set("output", col(x.Artifacts, func(r Artifact) string { return r.Output })).
		Set("kind", col(x.Artifacts, func(r Artifact) string { return r.Kind })).
		Set("hash", col(x.Artifacts, func(r Artifact) string { return r.Hash }))
	a.Table("files").
		Set("step", col(x.Files, func(r File) string { return r.Step })).
		Set("path", col(x.Files, func(r File) string { return r.Path })).
		Set("sha256", col(x.Files, func(r File) string { return r.SHA256 }))
	a.Table("figures").
		Set("step", col(x.Figures, func(r Figure) string { return r.Step })).
		Set("name", col(x.Figures, func(r Figure) string { return r.Name })).
		Set("text", col(x.Figures, func(r Figure) string { return r.Text })).
		Set("number", col(x.Figures, func(r Figure) float64 { return r.Number })).
		Set("dimension", col(x.Figures, func(r Figure) string { return r.Dimension }))
	a.Table("verdicts").
		Set("name", col(x.Verdicts, func(r Verdict) string { return r.Name })).
		Set("because", col(x.Verdicts, func(r Verdict) string { return r.Because })).
		Set("holds", col(x.Verdicts, func(r Verdict) bool { return r.Holds })).
		Set("judged", col(x.Verdicts, func(r Verdict) bool { return r.Judged })).
		Set("shown", col(x.Verdicts, func(r Verdict) string { return r.Shown })).
		Set("value", col(x.Verdicts, func(r Verdict) string { return r.Value })).
		Set("bound", col(x.Verdicts, func(r Verdict) string { return r.Bound })).
		Set("margin", col(x.Verdicts, func(r Verdict) string { return r.Margin }))
	a.Table("warnings").
		Set("step", col(x.Warnings, func(r Warning) string { return r.Step })).
		Set("id", col(x.Warnings, func(r Warning) string { return r.ID })).
		Set("text", col(x.Warnings, func(r Warning) string { return r.Text })).
		Set("where", col(x.Warnings, func(r Warning) string { return r.Where })).
		Set("remedy", col(x.Warnings, func(r Warning) string { return r.Remedy }))
	a.Table("notes").
		Set("step", col(x.Notes, func(r Note) string { return r.Step })).
		Set("text", col(x.Notes, func(r Note) string { return r.Text }))
	return a
}

func rows[T any](t *artifact.Table, f func(i int) T) []T {
	var out []T
	for i := range t.Rows() {
		out = append(out, f(i))
	}
	return out
}

// Decode reads an artifact of Kind.
func Decode(a *artifact.Artifact) *Account {
	x := &Account{Job: a.Text("job"), About: a.Text("about"), Program: a.Text("program")}
	cell := func(t *artifact.Table) func(i int, name string) string {
		return func(i int, name string) string { return t.Texts(name)[i] }
	}
	t := a.Table("sources")
	c := cell(t)
	x.Sources = rows(t, func(i int) Source { return Source{c(i, "name"), c(i, "text"), c(i, "sha256")} })
	settings := a.Table("settings")
	s := cell(settings)
	x.Settings = rows(settings, func(i int) Setting {
		return Setting{s(i, "name"), s(i, "value"), s(i, "about"), settings.Truths("overridden")[i]}
	})
	t = a.Table("steps")
	c = cell(t)
	x.Steps = rows(t, func(i int) Step {
		return Step{c(i, "label"), c(i, "stage"), c(i, "about"), c(i, "state"), c(i, "key"), c(i, "executable")}
	})
	t = a.Table("executables")
	c = cell(t)
	x.Executables = rows(t, func(i int) Executable { return Executable{c(i, "name"), c(i, "version"), c(i, "sha256")} })
	t = a.Table("artifacts")
	c = cell(t)
	x.Artifacts = rows(t, func(i int) Artifact { return Artifact{c(i, "step"), c(i, "output"), c(i, "kind"), c(i, "hash")} })
	t = a.Table("files")
	c = cell(t)
	x.Files = rows(t, func(i int) File { return File{c(i, "step"), c(i, "path"), c(i, "sha256")} })
	figures := a.Table("figures")
	f := cell(figures)
	x.Figures = rows(figures, func(i int) Figure {
		return Figure{f(i, "step"), f(i, "name"), f(i, "text"), figures.Floats("number")[i], f(i, "dimension")}
	})
	verdicts := a.Table("verdicts")
	v := cell(verdicts)
	x.Verdicts = rows(verdicts, func(i int) Verdict {
		return Verdict{v(i, "name"), v(i, "because"), v(i, "shown"), v(i, "value"), v(i, "bound"), v(i, "margin"),
			verdicts.Truths("holds")[i], verdicts.Truths("judged")[i]}
	})
	t = a.Table("warnings")
	c = cell(t)
	x.Warnings = rows(t, func(i int) Warning {
		return Warning{c(i, "step"), c(i, "id"), c(i, "text"), c(i, "where"), c(i, "remedy")}
	})
	t = a.Table("notes")
	c = cell(t)
	x.Notes = rows(t, func(i int) Note { return Note{c(i, "step"), c(i, "text")} })
	return x
}
