package main

import (
	"sort"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
)

// runDocument is what run --json writes. Its form is versioned: fields are added, none changes its meaning without another
// number in Format. It has no times, and does not tell a step that ran from one whose result the store had.
type runDocument struct {
	Format  int    `json:"format"`
	Program string `json:"program"`
	Job     string `json:"job"`
	About   string `json:"about,omitempty"`
	// ID names the run, see the verb diff; null when it was stopped.
	ID *string `json:"id"`
	// Exit is the exit code, Verdict what it means: held, broken, failed or stopped.
	Exit         int                `json:"exit"`
	Verdict      string             `json:"verdict"`
	Settings     []settingEntry     `json:"settings"`
	Steps        []stepEntry        `json:"steps"` // in the order of the plan
	Requirements []requirementEntry `json:"requirements"`
}

type settingEntry struct {
	Name  string `json:"name"`
	Value string `json:"value"` // as job text
	About string `json:"about,omitempty"`
	Given bool   `json:"given"` // on the command line
}

type stepEntry struct {
	Label string `json:"label"`
	Stage string `json:"stage"`
	About string `json:"about,omitempty"`
	// State is finished, failed, skipped or stopped; Because the step that kept it from running.
	State     string          `json:"state"`
	Because   string          `json:"because,omitempty"`
	Key       string          `json:"key,omitempty"`
	Figures   []figureEntry   `json:"figures"`
	Tables    []stage.Section `json:"tables"` // as the summary shows them
	Warnings  []stage.Warning `json:"warnings"`
	Notes     []string        `json:"notes"`
	Artifacts []artifactEntry `json:"artifacts"`
	Files     []fileEntry     `json:"files"`
	Published []string        `json:"published"` // from the folder of the job
	Fault     *fault.Error    `json:"fault,omitempty"`
}

// figureEntry is a figure: a number, text, truth, list or object; of a quantity the SI value. Null is no value.
type figureEntry struct {
	Name      string `json:"name"`
	Value     any    `json:"value"`
	Dimension string `json:"dimension,omitempty"`
	Text      string `json:"text,omitempty"` // of a quantity, in the unit of its kind
	About     string `json:"about,omitempty"`
}

type artifactEntry struct {
	Output string `json:"output"`
	Kind   string `json:"kind"`
	Hash   string `json:"hash"`
	Folder string `json:"folder"` // from the folder of the job
}

// fileEntry is a file that the step read, or looked for and did not find: null.
type fileEntry struct {
	Path   string  `json:"path"`
	SHA256 *string `json:"sha256"`
}

type requirementEntry struct {
	Name      string       `json:"name"`
	Because   string       `json:"because,omitempty"`
	State     string       `json:"state"` // holds, broken or not judged
	Condition string       `json:"condition"`
	Value     string       `json:"value,omitempty"`
	Bound     string       `json:"bound,omitempty"`
	Margin    string       `json:"margin,omitempty"` // positive when it holds
	Measured  *measureData `json:"measured,omitempty"`
}

// measureData is value and margin in SI units.
type measureData struct {
	Value     any    `json:"value"`
	Margin    any    `json:"margin"`
	Dimension string `json:"dimension,omitempty"`
}

// describeRun gathers the result of a run.
func describeRun(p *plan.Plan, r *run.Result, code int) runDocument {
	j := p.Job
	doc := runDocument{Format: 1, Program: program(), Job: j.Name, About: j.About, Exit: code, Settings: []settingEntry{}, Steps: []stepEntry{}, Requirements: []requirementEntry{},
		Verdict: map[int]string{exitHeld: "held", exitBroken: "broken", exitFailed: "failed", exitStopped: "stopped"}[code]}
	if r.ID != "" {
		doc.ID = &r.ID
	}
	for _, s := range j.Settings {
		doc.Settings = append(doc.Settings, settingEntry{s.Name, s.Text, s.About, s.Overridden})
	}
	for i, s := range r.Steps {
		doc.Steps = append(doc.Steps, describeStep(p.Steps[i], s))
	}
	for _, v := range r.Verdicts {
		x := requirementEntry{Name: v.Name, Because: v.Because, State: stateWord(v), Condition: v.Shown, Value: v.Value, Bound: v.Bound, Margin: v.Margin}
		if m := v.Measured; m != nil {
			x.Measured = &measureData{forJSON(m.Value), forJSON(m.Margin), m.Dimension}
		}
		doc.Requirements = append(doc.Requirements, x)
	}
	return doc
}

func stateWord(v run.Verdict) string {
	switch {
	case v.Holds:
		return "holds"
	case v.Judged:
		return "broken"
	}
	return "not judged"
}

func describeStep(p *plan.Step, s run.Step) stepEntry {
	x := stepEntry{Label: s.Label, Stage: s.Kind, About: p.Stage.About, State: string(s.State), Because: s.Because, Key: s.Key, Fault: s.Fault,
		Figures: []figureEntry{}, Tables: append([]stage.Section{}, s.Outcome.Summary...), Warnings: append([]stage.Warning{}, s.Outcome.Warnings...),
		Notes: append([]string{}, s.Outcome.Notes...), Artifacts: []artifactEntry{}, Files: []fileEntry{}, Published: append([]string{}, s.Published...)}
	if s.Done() {
		x.State = "finished"
		for _, f := range p.Stage.Description.Figures {
			x.Figures = append(x.Figures, describeFigure(f, s.Outcome.Figures[f.Name]))
		}
	}
	for _, name := range sortedKeys(s.Outputs) {
		o := s.Outputs[name]
		x.Artifacts = append(x.Artifacts, artifactEntry{name, o.Kind, o.Hash, store.FolderName + "/artifacts/" + o.Hash})
	}
	for _, f := range s.Files {
		e := fileEntry{Path: f.Path}
		if f.Hash != "" {
			e.SHA256 = &f.Hash
		}
		x.Files = append(x.Files, e)
	}
	sort.SliceStable(x.Files, func(i, j int) bool { return x.Files[i].Path < x.Files[j].Path })
	return x
}

func describeFigure(f stage.Figure, v any) figureEntry {
	x := figureEntry{Name: f.Name, About: f.About, Value: forJSON(v)}
	if q, ok := v.(stage.Quantity); ok {
		x.Value, x.Dimension, x.Text = forJSON(q.SI), q.Dimension, quantity.Format(q.SI, q.Dimension, f.Type.Unit)
	}
	return x
}
