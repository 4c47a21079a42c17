package job

import (
	"fmt"
	"strings"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"
	"github.com/zclconf/go-cty/cty/function"

	"hushframe/core/pipeline/nearest"
	"hushframe/core/pipeline/stage"
)

// figuresName is the word between a stage and its figures; no output may have it.
const figuresName = "figures"

// scope is what expressions of one job may refer to.
type scope struct {
	name, about string
	settings    map[string]cty.Value
	order       []string // settings in file order
	stages      map[string]*Stage
	labels      []string // in file order
	functions   map[string]function.Function
	extensions  []stage.Extension
	absent      func(kind, name string) error
}

// use is a reference from an expression to another stage.
type use struct {
	label   string
	figures bool
	rng     hcl.Range
	text    string
}

// constants is the context of expressions that may use no stage.
func (s *scope) constants() *hcl.EvalContext {
	return &hcl.EvalContext{
		Variables: map[string]cty.Value{
			"setting": cty.ObjectVal(s.settings),
			"job":     cty.ObjectVal(map[string]cty.Value{"name": cty.StringVal(s.name), "about": cty.StringVal(s.about)}),
		},
		Functions: s.functions,
	}
}

// context adds the stages, with the figures that are known.
func (s *scope) context(figures Figures) (*hcl.EvalContext, hcl.Diagnostics) {
	var diags hcl.Diagnostics
	stages := map[string]cty.Value{}
	for _, label := range s.labels {
		st := s.stages[label]
		if !st.described {
			stages[label] = cty.DynamicVal
			continue
		}
		members := map[string]cty.Value{}
		for _, o := range st.Description.Outputs {
			members[o.Name] = cty.CapsuleVal(artifactType(o.Kind), &ArtifactRef{label, o.Name})
		}
		known, done := figures[label]
		values := map[string]cty.Value{}
		for _, f := range st.Description.Figures {
			if !done {
				values[f.Name] = cty.UnknownVal(figureType(f.Type))
				continue
			}
			v, err := figureValue(known[f.Name], f.Type)
			if err != nil {
				diags = append(diags, &hcl.Diagnostic{
					Severity: hcl.DiagError,
					Summary:  "Figure of the wrong type",
					Detail:   fmt.Sprintf("stage %s reported its figure %s wrongly: %s; this is a mistake of the stage %q, not of the job", label, f.Name, err, st.Kind),
					Subject:  st.Range.Ptr(),
				})
				v = cty.UnknownVal(figureType(f.Type))
			}
			values[f.Name] = v
		}
		members[figuresName] = cty.ObjectVal(values)
		stages[label] = cty.ObjectVal(members)
	}
	ctx := s.constants()
	ctx.Variables["stage"] = cty.ObjectVal(stages)
	return ctx, diags
}

// references checks every reference of an expression by name, before it is
// evaluated, and lists the stages it uses. With stages false, a reference to a
// stage is a mistake that why explains.
func (s *scope) references(expr hcl.Expression, stages bool, why string) ([]use, hcl.Diagnostics) {
	var uses []use
	var diags hcl.Diagnostics
	for _, t := range expr.Variables() {
		u, d := s.reference(t, stages, why)
		if d != nil {
			diags = append(diags, d)
		}
		if u != nil {
			uses = append(uses, *u)
		}
	}
	return uses, diags
}

func (s *scope) reference(t hcl.Traversal, stages bool, why string) (*use, *hcl.Diagnostic) {
	wrong := func(steps int, summary, format string, args ...any) *hcl.Diagnostic {
		rng := t[:steps].SourceRange()
		return &hcl.Diagnostic{
			Severity: hcl.DiagError,
			Summary:  summary,
			Detail:   fmt.Sprintf(format, args...),
			Subject:  rng.Ptr(),
			Context:  t.SourceRange().Ptr(),
		}
	}
	roots := []string{"setting", "stage", "job"}
	root := t.RootName()
	name, named := step(t, 1)
	switch root {
	case "setting":
		if !named {
			return nil, nil // all settings as an object
		}
		if _, ok := s.settings[name]; !ok {
			return nil, wrong(2, "Unknown setting", "there is no setting %q%s", name, suggest(name, s.order, "this job declares"))
		}
		return nil, nil
	case "job":
		if name != "name" && name != "about" {
			return nil, wrong(min(2, len(t)), "Unknown reference", "of the job only job.name and job.about can be referred to")
		}
		return nil, nil
	case "stage":
		if !stages {
			return nil, wrong(min(2, len(t)), "Stage not allowed here", "%s", why)
		}
		if !named {
			return nil, wrong(1, "Incomplete reference", "a reference to a stage names its label and one of its outputs: stage.LABEL.OUTPUT")
		}
		st, ok := s.stages[name]
		if !ok {
			return nil, wrong(2, "Unknown stage", "there is no stage labelled %q in this job%s", name, suggest(name, s.labels, "its labels are"))
		}
		u := &use{label: name, rng: t.SourceRange(), text: traversalText(t)}
		if !st.described {
			return u, nil
		}
		member, ok := step(t, 2)
		if !ok {
			if len(t) == 2 {
				return u, wrong(2, "Incomplete reference", "stage.%s is a whole stage; name %s", name, choicesOf(st))
			}
			return u, nil
		}
		if member != figuresName {
			for _, o := range st.Description.Outputs {
				if o.Name == member {
					if len(t) > 3 {
						return u, wrong(min(4, len(t)), "Nothing inside an artifact", "stage.%s.%s is an artifact (%s), and its content cannot be referred to; values that a stage reports are under stage.%s.figures", name, member, o.Kind, name)
					}
					return u, nil
				}
			}
			for _, f := range st.Description.Figures {
				if f.Name == member {
					return u, wrong(3, "Unknown output", "%q is a figure of stage %s; write stage.%s.figures.%s", member, name, name, member)
				}
			}
			near := nearest.Name(member, append(outputNames(st), figuresName))
			if near != "" {
				return u, wrong(3, "Unknown output", "stage %s has no output %q; did you mean stage.%s.%s?", name, member, name, near)
			}
			return u, wrong(3, "Unknown output", "stage %s has no output %q; name %s", name, member, choicesOf(st))
		}
		u.figures = true
		figure, ok := step(t, 3)
		if !ok {
			return u, nil
		}
		for _, f := range st.Description.Figures {
			if f.Name == figure {
				return u, nil
			}
		}
		for _, o := range st.Description.Outputs {
			if o.Name == figure {
				return u, wrong(4, "Unknown figure", "%q is an output of stage %s; write stage.%s.%s", figure, name, name, figure)
			}
		}
		return u, wrong(4, "Unknown figure", "stage %s reports no figure %q%s", name, figure, suggest(figure, figureNames(st), "its figures are"))
	}
	if near := nearest.Name(root, roots); near != "" {
		return nil, wrong(1, "Unknown reference", "there is nothing called %q; did you mean %q?", root, near)
	}
	if _, ok := s.settings[root]; ok {
		return nil, wrong(1, "Unknown reference", "there is nothing called %q; did you mean setting.%s?", root, root)
	}
	if _, ok := s.stages[root]; ok {
		return nil, wrong(1, "Unknown reference", "there is nothing called %q; did you mean stage.%s?", root, root)
	}
	return nil, wrong(1, "Unknown reference", "there is nothing called %q; references start with setting, stage or job, and a text stands in quotes: %q", root, traversalText(t))
}

// step gives the name in one step of a traversal, written .name or ["name"].
func step(t hcl.Traversal, i int) (string, bool) {
	if i >= len(t) {
		return "", false
	}
	switch x := t[i].(type) {
	case hcl.TraverseAttr:
		return x.Name, true
	case hcl.TraverseIndex:
		if x.Key.Type() == cty.String && x.Key.IsKnown() && !x.Key.IsNull() {
			return x.Key.AsString(), true
		}
	}
	return "", false
}

func traversalText(t hcl.Traversal) string {
	var b strings.Builder
	for i, s := range t {
		switch x := s.(type) {
		case hcl.TraverseRoot:
			b.WriteString(x.Name)
		case hcl.TraverseAttr:
			b.WriteString("." + x.Name)
		case hcl.TraverseIndex:
			if name, ok := step(t, i); ok && hclsyntax.ValidIdentifier(name) {
				b.WriteString("." + name)
			} else {
				b.WriteString("[" + renderValue(x.Key) + "]")
			}
		case hcl.TraverseSplat:
			b.WriteString("[*]")
		}
	}
	return b.String()
}

func outputNames(st *Stage) []string {
	var names []string
	for _, o := range st.Description.Outputs {
		names = append(names, o.Name)
	}
	return names
}

func figureNames(st *Stage) []string {
	var names []string
	for _, f := range st.Description.Figures {
		names = append(names, f.Name)
	}
	return names
}

func argumentNames(arguments []stage.Argument) []string {
	var names []string
	for _, a := range arguments {
		names = append(names, a.Name)
	}
	return names
}

// choicesOf lists what may follow stage.LABEL.
func choicesOf(st *Stage) string {
	names := outputNames(st)
	if len(st.Description.Figures) > 0 {
		names = append(names, figuresName+".…")
	}
	for i, n := range names {
		names[i] = "stage." + st.Label + "." + n
	}
	if len(names) == 0 {
		return "another stage, as it has no outputs"
	}
	return oneOf(names)
}
