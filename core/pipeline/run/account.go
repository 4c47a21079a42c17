package run

import (
	"crypto/sha256"
	"encoding/hex"
	"math"
	"runtime"
	"sort"
	"strconv"
	"strings"

	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
)

// makeAccount states the run so far and puts it into the store.
func (r *runner) makeAccount() (*input, error) {
	hash, err := r.Store.Put(r.describe().Encode())
	if err != nil {
		return nil, err
	}
	return &input{hash, account.KindName, account.KindName}, nil
}

// describe gathers the account of all steps but the last ones.
func (r *runner) describe() *account.Account {
	j := r.Plan.Job
	a := &account.Account{Job: j.Name, About: j.About, Program: r.Program}
	for _, s := range j.Sources {
		sum := sha256.Sum256(s.Bytes)
		a.Sources = append(a.Sources, account.Source{Name: s.File, Text: strings.ToValidUTF8(string(s.Bytes), "?"), SHA256: hex.EncodeToString(sum[:])})
	}
	for _, s := range j.Settings {
		a.Settings = append(a.Settings, account.Setting{Name: s.Name, Value: s.Text, About: s.About, Overridden: s.Overridden})
	}
	executables := map[account.Executable]bool{}
	for _, s := range r.Plan.Steps {
		label, kind := s.Stage.Label, s.Stage.Kind
		step := account.Step{Label: label, Stage: kind, About: s.Stage.About, Executable: r.Source.Checksum(kind)}
		result := r.steps[label].result
		switch {
		case s.Last:
			step.State = "last" // its own end cannot be in its input
		case result.Done():
			step.State, step.Key = "finished", result.Key
		default:
			step.State = string(result.State)
		}
		a.Steps = append(a.Steps, step)
		executables[account.Executable{Name: "stages of " + r.Program, Version: runtime.Version() + " " + runtime.GOOS + "/" + runtime.GOARCH, SHA256: step.Executable}] = true
		if s.Last {
			continue
		}
		for _, o := range s.Stage.Description.Outputs {
			if out, ok := result.Outputs[o.Name]; ok {
				a.Artifacts = append(a.Artifacts, account.Artifact{Step: label, Output: o.Name, Kind: out.Kind, Hash: out.Hash})
			}
		}
		for _, f := range result.Files {
			a.Files = append(a.Files, account.File{Step: label, Path: f.Path, SHA256: f.Hash})
		}
		for _, f := range s.Stage.Description.Figures {
			if x, ok := stated(f.Type.Unit, result.Outcome.Figures[f.Name]); ok {
				x.Step, x.Name = label, f.Name
				a.Figures = append(a.Figures, x)
			}
		}
		for _, w := range result.Outcome.Warnings {
			a.Warnings = append(a.Warnings, account.Warning{Step: label, ID: w.ID, Text: w.Text, Where: w.Where, Remedy: w.Remedy})
		}
		for _, n := range result.Outcome.Notes {
			a.Notes = append(a.Notes, account.Note{Step: label, Text: n})
		}
	}
	for e := range executables {
		a.Executables = append(a.Executables, e)
	}
	for _, x := range r.Source.Extensions() {
		a.Executables = append(a.Executables, account.Executable{Name: x.Kind + " " + x.Name, SHA256: x.Hash})
	}
	sort.Slice(a.Executables, func(i, j int) bool {
		x, y := a.Executables[i], a.Executables[j]
		return x.Name < y.Name || x.Name == y.Name && x.SHA256 < y.SHA256
	})
	for _, q := range j.Requirements {
		v := r.verdicts[q.Name]
		a.Verdicts = append(a.Verdicts, account.Verdict{Name: q.Name, Because: q.Because, Shown: v.Shown,
			Value: v.Value, Bound: v.Bound, Margin: v.Margin, Holds: v.Holds, Judged: v.Judged})
	}
	return a
}

// stated writes the value of a figure in the unit of its declaration; false for lists and what has none.
func stated(unit string, v any) (account.Figure, bool) {
	x := account.Figure{Number: math.NaN()}
	switch v := v.(type) {
	case stage.Quantity:
		x.Text, x.Number, x.Dimension = quantity.Format(v.SI, v.Dimension, unit), v.SI, v.Dimension
	case float64:
		x.Text, x.Number = strconv.FormatFloat(v, 'g', 6, 64), v
	case string:
		x.Text = v
	case bool:
		x.Text = strconv.FormatBool(v)
	default:
		return x, false
	}
	return x, true
}
