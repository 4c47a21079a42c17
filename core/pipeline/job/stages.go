package job

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"time"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/stage"
)

// Arguments that every stage block may have and no stage may describe.
const (
	argAbout  = "about"
	argAfter  = "after"
	argTime   = "time_limit"
	argMemory = "memory_limit"
)

// Reserved lists the arguments that belong to the host in every stage block.
func Reserved() []string { return []string{argAbout, argAfter, argMemory, argTime} }

func reserved(name string) bool {
	return name == argAbout || name == argAfter || name == argTime || name == argMemory
}

// argument is one given argument of a stage block.
type argument struct {
	spec stage.Argument
	expr hclsyntax.Expression
	bad  bool // has a wrong reference and is not evaluated
}

// stageBody reads everything in a stage block but its reserved arguments'
// values, which hostArguments reads.
func (l *loader) stageBody(st *Stage, body *hclsyntax.Body) {
	st.arguments = map[string]*argument{}
	for _, b := range body.Blocks {
		switch {
		case reserved(b.Type) || st.described && hasArgument(st.Description.Arguments, b.Type):
			l.wrong(b.TypeRange, "Argument written as a block", "%q is an argument: write %s = …", b.Type, b.Type)
		case st.described:
			l.wrong(b.TypeRange, "Unknown block", "a stage has no blocks; stage %q takes the arguments %s", st.Kind,
				enumerate(append(argumentNames(st.Description.Arguments), Reserved()...)))
		default:
			l.wrong(b.TypeRange, "Unknown block", "a stage has no blocks")
		}
	}
	figures := map[string]bool{}
	for _, attr := range attributes(body) {
		if reserved(attr.Name) {
			continue
		}
		a := &argument{expr: attr.Expr}
		for _, spec := range st.Description.Arguments {
			if spec.Name == attr.Name {
				a.spec = spec
			}
		}
		if st.described && a.spec.Name == "" {
			names := append(argumentNames(st.Description.Arguments), Reserved()...)
			l.wrong(attr.NameRange, "Unknown argument", "stage %q has no argument %q%s", st.Kind, attr.Name, suggest(attr.Name, names, "its arguments are"))
		}
		uses, diags := l.scope.references(attr.Expr, true, "")
		l.diags = append(l.diags, diags...)
		a.bad = diags.HasErrors()
		if a.bad {
			ctx, _ := l.scope.context(nil)
			l.sound(attr.Expr, ctx)
		}
		st.uses = append(st.uses, uses...)
		for _, u := range uses {
			if u.figures {
				figures[u.label] = true
			}
		}
		if a.spec.Name != "" {
			st.arguments[attr.Name] = a
		}
	}
	l.hostArguments(st, body)
	if st.described {
		for _, spec := range st.Description.Arguments {
			if _, given := body.Attributes[spec.Name]; spec.Required && !given && !blockOf(body, spec.Name) {
				text := fmt.Sprintf("stage %q needs the argument %s, %s", st.Kind, spec.Name, withAbout(spec))
				if spec.Type.Kind == stage.Artifact {
					d := decoder{scope: l.scope, self: st.Label}
					text += "; " + d.fitting(spec.Type.Kinds)
				} else if spec.Example != "" {
					text += "; for example " + spec.Example
				}
				l.wrong(st.Range, "Missing argument", "%s", text)
			}
		}
	}
	needs := map[string]bool{}
	for _, u := range st.uses {
		if _, ok := l.scope.stages[u.label]; ok {
			needs[u.label] = true
		}
	}
	st.Needs, st.Figures = sortedSet(needs), sortedSet(figures)
}

// sound evaluates those parts of a list or object whose references are right, so
// that one wrong reference does not hide other mistakes beside it.
func (l *loader) sound(expr hclsyntax.Expression, ctx *hcl.EvalContext) {
	if _, diags := l.scope.references(expr, true, ""); !diags.HasErrors() {
		_, diags = evaluate(expr, ctx)
		l.diags = append(l.diags, diags...)
		return
	}
	switch x := expr.(type) {
	case *hclsyntax.ObjectConsExpr:
		for _, item := range x.Items {
			l.sound(item.ValueExpr, ctx)
		}
	case *hclsyntax.TupleConsExpr:
		for _, e := range x.Exprs {
			l.sound(e, ctx)
		}
	}
}

func blockOf(body *hclsyntax.Body, name string) bool {
	for _, b := range body.Blocks {
		if b.Type == name {
			return true
		}
	}
	return false
}

// hostArguments reads about, after, time_limit and memory_limit.
func (l *loader) hostArguments(st *Stage, body *hclsyntax.Body) {
	const why = "this is settled before any stage runs, so it can use settings but no stage"
	if a, ok := body.Attributes[argAbout]; ok {
		st.About, _ = l.constant(a, why, stage.Argument{Name: argAbout, Type: stage.Type{Kind: stage.Text}}).(string)
	}
	if a, ok := body.Attributes[argTime]; ok {
		spec := stage.Argument{Name: argTime, Type: stage.Type{Kind: stage.Amount, Dimension: "time"}, Above: new(float64), Max: ptr(1e8), Example: "30 min"}
		if q, ok := l.constant(a, why, spec).(stage.Quantity); ok {
			st.TimeLimit = time.Duration(q.SI * float64(time.Second))
		}
	}
	if a, ok := body.Attributes[argMemory]; ok {
		spec := stage.Argument{Name: argMemory, Type: stage.Type{Kind: stage.Amount, Dimension: "memory"}, Above: new(float64), Max: ptr(1 << 60), Example: "2 GiB"}
		if q, ok := l.constant(a, why, spec).(stage.Quantity); ok {
			st.MemoryLimit = int64(math.Ceil(q.SI))
		}
	}
	if a, ok := body.Attributes[argAfter]; ok {
		l.after(st, a)
	}
}

func ptr(x float64) *float64 { return &x }

// after reads a list of references to stages.
func (l *loader) after(st *Stage, a *hclsyntax.Attribute) {
	items, diags := hcl.ExprList(a.Expr)
	if diags.HasErrors() {
		items = []hcl.Expression{a.Expr}
		if _, diags := hcl.AbsTraversalForExpr(a.Expr); !diags.HasErrors() {
			l.wrong(a.Expr.Range(), "Wrong type", "after takes a list of stages: put it in brackets")
			return
		}
	}
	labels := map[string]bool{}
	for _, item := range items {
		t, diags := hcl.AbsTraversalForExpr(item)
		label, ok := "", false
		if !diags.HasErrors() && t.RootName() == "stage" {
			label, ok = step(t, 1)
		}
		if !ok || len(t) > 2 {
			example := "stage.LABEL"
			if ok {
				example = "stage." + label
			} else if len(l.scope.labels) > 0 {
				example = "stage." + l.scope.labels[0]
			}
			l.wrong(item.Range(), "Wrong type", "after takes stages, written %s", example)
			continue
		}
		if _, ok := l.scope.stages[label]; !ok {
			l.wrong(item.Range(), "Unknown stage", "there is no stage labelled %q in this job%s", label, suggest(label, l.scope.labels, "its labels are"))
			continue
		}
		labels[label] = true
		st.uses = append(st.uses, use{label: label, rng: item.Range(), text: "after"})
	}
	st.After = sortedSet(labels)
}

// constant evaluates and decodes an attribute that may use no stage.
func (l *loader) constant(a *hclsyntax.Attribute, why string, spec stage.Argument) any {
	if _, diags := l.scope.references(a.Expr, false, why); diags.HasErrors() {
		l.diags = append(l.diags, diags...)
		return nil
	}
	v, diags := evaluate(a.Expr, l.scope.constants())
	l.diags = append(l.diags, diags...)
	if diags.HasErrors() {
		return nil
	}
	d := decoder{scope: l.scope}
	x := d.decode(v, atExpr(spec.Name, a.Expr), spec, spec.Type)
	l.diags = append(l.diags, d.diags...)
	if d.diags.HasErrors() {
		return nil
	}
	return x
}

// Evaluate gives the constant arguments of a stage, with defaults filled in,
// and the artifacts for each argument that takes them, in the order of the
// file. Arguments that hang on figures not given are left out; once the figures
// of every label in s.Figures are given, none are. Diagnostics are those of
// this stage alone.
func (s *Stage) Evaluate(figures Figures) (stage.Arguments, map[string][]ArtifactRef, hcl.Diagnostics) {
	arguments := stage.Arguments{}
	inputs := map[string][]ArtifactRef{}
	if !s.described {
		return arguments, inputs, nil
	}
	needed := Figures{}
	for _, label := range s.Figures {
		if f, ok := figures[label]; ok {
			needed[label] = f
		}
	}
	ctx, diags := s.scope.context(needed)
	for _, spec := range s.Description.Arguments {
		a, given := s.arguments[spec.Name]
		if given && a.bad {
			continue
		}
		takesArtifacts := takesArtifacts(spec.Type)
		if spec.OptionsOf != "" {
			var of bool
			if spec, of = s.optionsOf(spec, arguments); of && !given { // its defaults, or what it needs
				d := decoder{scope: s.scope, self: s.Label}
				arguments[spec.Name] = d.decode(cty.EmptyObjectVal, at{spec.Name, nil, s.Range}, spec, spec.Type)
				diags = append(diags, d.diags...)
				continue
			}
		}
		if !given {
			if spec.Default != nil && !takesArtifacts {
				arguments[spec.Name] = plain(spec.Default)
			}
			continue
		}
		v, more := evaluate(a.expr, ctx)
		diags = append(diags, more...)
		if more.HasErrors() {
			continue
		}
		if v.IsNull() && !spec.Required {
			if spec.Default != nil && !takesArtifacts {
				arguments[spec.Name] = plain(spec.Default)
			}
			continue
		}
		d := decoder{scope: s.scope, self: s.Label}
		x := d.decode(v, atExpr(spec.Name, a.expr), spec, spec.Type)
		diags = append(diags, d.diags...)
		if d.pending || d.diags.HasErrors() {
			if len(needed) == len(s.Figures) && d.pending && !d.diags.HasErrors() && s.sound() {
				diags = append(diags, &hcl.Diagnostic{
					Severity: hcl.DiagError, Summary: "No value",
					Detail:  spec.Name + " has no value although every figure it uses is known",
					Subject: a.expr.Range().Ptr(),
				})
			}
			continue
		}
		if takesArtifacts {
			inputs[spec.Name] = d.refs
			continue
		}
		arguments[spec.Name] = x
	}
	return arguments, inputs, diags
}

// sound reports whether every setting has a value and every stage it refers to
// could be described; what is missing otherwise has been reported already.
func (s *Stage) sound() bool {
	for _, v := range s.scope.settings {
		if !v.IsWhollyKnown() {
			return false
		}
	}
	for _, u := range s.uses {
		if st, ok := s.scope.stages[u.label]; !ok || !st.described {
			return false
		}
	}
	return true
}

func takesArtifacts(t stage.Type) bool {
	return t.Kind == stage.Artifact || t.Kind == stage.List && t.Element != nil && t.Element.Kind == stage.Artifact
}

// ArgumentRange is the place of an argument's value in the job, or the header of
// the stage when the job leaves it out. The name may go on into the value, as in
// "channels.pitch" or "window[1]"; the place is as deep as the job spells it out.
func (s *Stage) ArgumentRange(name string) hcl.Range {
	steps := strings.FieldsFunc(name, func(r rune) bool { return r == '.' || r == '[' || r == ']' })
	if len(steps) == 0 || s.arguments[steps[0]] == nil {
		return s.Range
	}
	p := atExpr(steps[0], s.arguments[steps[0]].expr)
	for _, step := range steps[1:] {
		if p.expr == nil {
			break
		}
		if i, err := strconv.Atoi(step); err == nil {
			if items, diags := hcl.ExprList(p.expr); !diags.HasErrors() {
				p = p.element(i, len(items))
				continue
			}
		}
		p, _ = p.member(step)
	}
	return p.rng
}

// Use tells where a stage refers to another: the text and its place.
type Use struct {
	Label string
	Text  string
	Range hcl.Range
}

// Uses lists the references of the stage to others, in file order.
func (s *Stage) Uses() []Use {
	var out []Use
	for _, u := range s.uses {
		if _, ok := s.scope.stages[u.label]; ok {
			out = append(out, Use{u.label, u.text, u.rng})
		}
	}
	return out
}
