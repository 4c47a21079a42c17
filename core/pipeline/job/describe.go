package job

import (
	"context"
	"errors"
	"fmt"

	"github.com/hashicorp/hcl/v2/hclsyntax"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

// describe asks for the description of every kind of stage once.
func (l *loader) describe(ctx context.Context) {
	type answer struct {
		d   stage.Description
		err error
	}
	asked := map[string]answer{}
	for _, st := range l.job.Stages {
		a, ok := asked[st.Kind]
		if !ok {
			if l.opt.Describe == nil {
				panic("job: Options.Describe is nil")
			}
			a.d, a.err = l.opt.Describe(ctx, st.Kind)
			if a.err == nil {
				a.err = checkDescription(a.d, l.opt.Kinds)
			}
			asked[st.Kind] = a
		}
		if a.err == nil {
			st.Description, st.described = a.d, true
			continue
		}
		rng := l.kindRange[st]
		var f *fault.Error
		if errors.As(a.err, &f) && f.Kind == fault.Missing {
			var names []string
			if l.opt.StageNames != nil {
				names = l.opt.StageNames()
			}
			text := fmt.Sprintf("there is no stage %q%s", st.Kind, suggest(st.Kind, names, "installed are"))
			l.wrong(rng, "Unknown stage", "%s", text)
			continue
		}
		if !ok { // say it once
			l.wrong(rng, "Stage cannot be used", "stage %q cannot be used: %s", st.Kind, detail(fault.From(a.err)))
		}
	}
}

func wrongDescription(format string, args ...any) error {
	return fault.New(fault.Protocol, "its description of itself is wrong: "+format, args...).
		Do("this is a mistake of the extension, not of the job")
}

// checkDescription finds mistakes in the description of a stage, so that one
// from outside cannot confuse a job.
func checkDescription(d stage.Description, kinds func(string) bool) error {
	bad := wrongDescription
	known := func(kind string) bool { return kinds == nil || kinds(kind) }
	var check func(where string, t stage.Type, top bool) error
	check = func(where string, t stage.Type, top bool) error {
		switch t.Kind {
		case stage.Text, stage.Number, stage.Whole, stage.Truth, stage.File, stage.Target, stage.Any:
		case stage.Amount:
			if err := quantity.Known(t.Dimension); err != nil {
				return bad("%s: %s", where, detail(fault.From(err)))
			}
			if u, err := quantity.ParseUnit(t.Unit); t.Unit != "" && (err != nil || !u.Is(t.Dimension)) {
				return bad("%s: %q is no unit of %s", where, t.Unit, t.Dimension)
			}
		case stage.List, stage.Map:
			if t.Element != nil {
				inner := top && t.Kind == stage.List
				return check(where, *t.Element, inner)
			}
		case stage.Object:
			for _, f := range t.Fields {
				if err := check(where+"."+f.Name, f.Type, false); err != nil {
					return err
				}
			}
		case stage.Artifact:
			if !top {
				return bad("%s: artifacts are arguments or lists of them, nothing deeper", where)
			}
			for _, k := range t.Kinds {
				if !known(k) {
					return bad("%s: there is no artifact kind %q", where, k)
				}
			}
		default:
			return bad("%s: there is no type %q", where, t.Kind)
		}
		return nil
	}
	seen := map[string]bool{}
	for _, a := range d.Arguments {
		if seen[a.Name] || reserved(a.Name) || !hclsyntax.ValidIdentifier(a.Name) {
			return bad("the argument name %q is reserved, no identifier or used twice", a.Name)
		}
		if a.OptionsOf != "" && !seen[a.OptionsOf] {
			return bad("the argument %s holds the options of %q, which does not come before it", a.Name, a.OptionsOf)
		}
		seen[a.Name] = true
		if err := check("argument "+a.Name, a.Type, true); err != nil {
			return err
		}
		if a.Default != nil && !takesArtifacts(a.Type) {
			if _, err := figureValue(plain(a.Default), a.Type); err != nil {
				return bad("argument %s: the default does not fit, %v", a.Name, err)
			}
		}
	}
	outputs := map[string]bool{figuresName: true}
	for _, o := range d.Outputs {
		if outputs[o.Name] || !hclsyntax.ValidIdentifier(o.Name) {
			return bad("the output name %q is reserved, no identifier or used twice", o.Name)
		}
		outputs[o.Name] = true
		if !known(o.Kind) {
			return bad("output %s: there is no artifact kind %q", o.Name, o.Kind)
		}
	}
	figures := map[string]bool{}
	for _, f := range d.Figures {
		if figures[f.Name] || !hclsyntax.ValidIdentifier(f.Name) {
			return bad("the figure name %q is no identifier or used twice", f.Name)
		}
		figures[f.Name] = true
		if takesArtifacts(f.Type) {
			return bad("figure %s: a figure cannot be an artifact", f.Name)
		}
		if err := check("figure "+f.Name, f.Type, false); err != nil {
			return err
		}
	}
	return nil
}
