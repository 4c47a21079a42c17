package main

import (
	"io"

	"hushframe/core/pipeline/run/account"
	"hushframe/stages/kinds"
)

// diffDocument is what diff --json writes. Its form is versioned: fields are added, none changes its meaning without another
// number in Format.
type diffDocument struct {
	Format int          `json:"format"`
	Before runName      `json:"before"`
	After  runName      `json:"after"`
	Exit   int          `json:"exit"` // as the exit codes say
	Frames []frameEntry `json:"frames"`
	// Requirements of either run; state is holds, broken, not judged or absent.
	Requirements []requirementChange `json:"requirements"`
	Settings     []pairEntry         `json:"settings"`
	Figures      []pairEntry         `json:"figures"`
	Files        []pairEntry         `json:"files"`
	Programs     []pairEntry         `json:"programs"`
	Notes        []string            `json:"notes"`
}

type runName struct {
	Run string `json:"run"` // as it was asked for
	ID  string `json:"id"`
	Job string `json:"job"`
}

// frameEntry is a branch of the jobs, named by its last step on either side.
type frameEntry struct {
	Before     string       `json:"before"`
	After      string       `json:"after"`
	Difference artifactData `json:"difference"`
}

type requirementChange struct {
	Name    string          `json:"name"`
	Changed bool            `json:"changed"`
	Before  requirementSide `json:"before"`
	After   requirementSide `json:"after"`
}

type requirementSide struct {
	State  string `json:"state"`
	Value  string `json:"value,omitempty"`
	Bound  string `json:"bound,omitempty"`
	Margin string `json:"margin,omitempty"`
}

// pairEntry is something that differs; null on the side that lacks it.
type pairEntry struct {
	Name   string  `json:"name"`
	Before *string `json:"before"`
	After  *string `json:"after"`
}

func (d *differences) writeJSON(out io.Writer) error {
	doc := diffDocument{Format: 1, Frames: []frameEntry{}, Requirements: []requirementChange{}, Notes: append([]string{}, d.notes...),
		Settings: pairEntries(d.account.Settings), Figures: pairEntries(d.account.Figures), Files: pairEntries(d.account.Files), Programs: pairEntries(d.account.Programs)}
	for k, name := range []*runName{&doc.Before, &doc.After} {
		*name = runName{d.runs[k].words, d.runs[k].record.ID, d.runs[k].account.Job}
	}
	if d.worse() {
		doc.Exit = exitBroken
	}
	for _, f := range d.frames {
		// The spectra are thousands of rows that the artifacts of the runs have too.
		doc.Frames = append(doc.Frames, frameEntry{f.labels[0], f.labels[1], dataOf(kinds.EncodeDifference(f.Difference), "spectrum")})
	}
	for _, v := range d.account.Verdicts {
		side := func(k int) requirementSide { return requirementSide{v.State[k], v.Value[k], v.Bound[k], v.Margin[k]} }
		doc.Requirements = append(doc.Requirements, requirementChange{v.Name, v.Changed(), side(0), side(1)})
	}
	return writeJSON(out, doc)
}

func pairEntries(pairs []account.Pair) []pairEntry {
	out := []pairEntry{}
	text := func(s string) *string {
		if s == "" {
			return nil
		}
		return &s
	}
	for _, p := range pairs {
		out = append(out, pairEntry{p.Name, text(p.Before), text(p.After)})
	}
	return out
}
