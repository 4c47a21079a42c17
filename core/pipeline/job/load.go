package job

import (
	"context"
	"fmt"
	"sort"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"
	"github.com/zclconf/go-cty/cty"

	"hushframe/core/pipeline/nearest"
)

// Load reads and checks a job file, or a folder with job files. The job is never
// nil; with error diagnostics it holds what could be read, and its sources.
// Diagnostics are sorted by file and place.
func Load(ctx context.Context, path string, opt Options) (*Job, hcl.Diagnostics) {
	l := &loader{opt: opt, job: &Job{}, kindRange: map[*Stage]hcl.Range{}}
	l.scope = &scope{settings: map[string]cty.Value{}, stages: map[string]*Stage{}, functions: Functions(), extensions: opt.Extensions, absent: opt.Absent}
	l.job.scope = l.scope
	files := l.read(path)
	if len(files) > 0 && !l.diags.HasErrors() {
		l.blocks(files)
		l.describe(ctx)
		l.bodies()
		l.diags = append(l.diags, l.job.Loops()...)
	}
	return l.job, arrange(l.diags)
}

type loader struct {
	opt       Options
	job       *Job
	scope     *scope
	diags     hcl.Diagnostics
	kindRange map[*Stage]hcl.Range

	settings     []*hclsyntax.Block
	stages       []*hclsyntax.Block // parallel to job.Stages
	requirements []*hclsyntax.Block // parallel to job.Requirements
}

func (l *loader) wrong(rng hcl.Range, summary, format string, args ...any) {
	l.diags = append(l.diags, &hcl.Diagnostic{
		Severity: hcl.DiagError,
		Summary:  summary,
		Detail:   fmt.Sprintf(format, args...),
		Subject:  rng.Ptr(),
	})
}

// blockTypes are the blocks of the job language with their number of labels.
var blockTypes = []struct {
	name   string
	labels []string
}{
	{"job", []string{"name"}},
	{"setting", []string{"name"}},
	{"stage", []string{"kind", "label"}},
	{"requirement", []string{"name"}},
}

func blockNames() []string {
	var names []string
	for _, b := range blockTypes {
		names = append(names, b.name)
	}
	return names
}

// header writes how a block begins.
func header(name string) string {
	for _, b := range blockTypes {
		if b.name == name {
			for _, label := range b.labels {
				name += fmt.Sprintf(" %q", label)
			}
		}
	}
	return name + " { … }"
}

// blocks sorts the blocks of all files and checks their headers.
func (l *loader) blocks(files []*hclsyntax.Body) {
	var jobs []*hclsyntax.Block
	for _, body := range files {
		for _, a := range attributes(body) {
			if near := nearest.Name(a.Name, blockNames()); near != "" {
				l.wrong(a.NameRange, "Block written as an argument", "%q is a block: write %s", near, header(near))
			} else {
				l.wrong(a.NameRange, "Argument outside a block", "a job file holds only the blocks %s", enumerate(blockNames()))
			}
		}
		for _, b := range body.Blocks {
			if !l.labels(b) {
				continue
			}
			switch b.Type {
			case "job":
				jobs = append(jobs, b)
			case "setting":
				l.settings = append(l.settings, b)
			case "stage":
				l.addStage(b)
			case "requirement":
				l.addRequirement(b)
			}
		}
	}
	if len(jobs) == 0 && !l.diags.HasErrors() {
		start := files[0].SrcRange
		start.End = start.Start
		l.wrong(start, "No job block", `a job has one block job "name" { about = "…" }, and here is none`)
	}
	for i, b := range jobs {
		if i == 0 {
			l.jobBlock(b)
			continue
		}
		l.wrong(b.DefRange(), "Second job block", "there is one job block in a job, and the first is at %s", place(jobs[0].DefRange()))
	}
	l.readSettings()
}

// labels checks type and labels of a block.
func (l *loader) labels(b *hclsyntax.Block) bool {
	for _, t := range blockTypes {
		if t.name != b.Type {
			continue
		}
		if len(b.Labels) != len(t.labels) {
			l.wrong(b.DefRange(), "Wrong labels", "a %s block has %s: write %s", t.name, count(len(t.labels), "label"), header(t.name))
			return false
		}
		for i, text := range b.Labels {
			if text == "" {
				l.wrong(b.LabelRanges[i], "Empty label", "this is the %s of the %s; write %s", t.labels[i], t.name, header(t.name))
				return false
			}
		}
		return true
	}
	l.wrong(b.TypeRange, "Unknown block", "there is no block %q%s", b.Type, suggest(b.Type, blockNames(), "a job file holds the blocks"))
	return false
}

func count(n int, what string) string {
	if n == 1 {
		return "one " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

func (l *loader) jobBlock(b *hclsyntax.Block) {
	l.job.Name = b.Labels[0]
	l.scope.name = l.job.Name
	l.only(b, []string{argAbout})
	if a, ok := b.Body.Attributes[argAbout]; ok {
		l.job.About = l.literal(a)
		l.scope.about = l.job.About
	}
}

// only reports arguments that a block does not have, and blocks within it.
func (l *loader) only(b *hclsyntax.Block, names []string) {
	for _, a := range attributes(b.Body) {
		found := false
		for _, n := range names {
			found = found || n == a.Name
		}
		if !found {
			l.wrong(a.NameRange, "Unknown argument", "a %s block has no argument %q%s", b.Type, a.Name, suggest(a.Name, names, "its arguments are"))
		}
	}
	for _, inner := range b.Body.Blocks {
		found := false
		for _, n := range names {
			found = found || n == inner.Type
		}
		if found {
			l.wrong(inner.TypeRange, "Argument written as a block", "%q is an argument: write %s = …", inner.Type, inner.Type)
		} else {
			l.wrong(inner.TypeRange, "Unknown block", "a %s block has no blocks within it; its arguments are %s", b.Type, enumerate(names))
		}
	}
}

// literal reads a text that may use functions but no references.
func (l *loader) literal(a *hclsyntax.Attribute) string {
	for _, t := range a.Expr.Variables() {
		l.wrong(t.SourceRange(), "Reference not allowed here", "%s is read before everything else and cannot refer to anything", a.Name)
		return ""
	}
	v, diags := evaluate(a.Expr, &hcl.EvalContext{Functions: l.scope.functions})
	l.diags = append(l.diags, diags...)
	if diags.HasErrors() {
		return ""
	}
	if v.IsNull() || v.Type() != cty.String {
		l.wrong(a.Expr.Range(), "Wrong type", "%s takes a text, not %s", a.Name, describeValue(v))
		return ""
	}
	return v.AsString()
}

// bodies reads what is inside the blocks, now that every name is known.
func (l *loader) bodies() {
	for i, b := range l.stages {
		l.stageBody(l.job.Stages[i], b.Body)
	}
	l.targets()
	for i, b := range l.requirements {
		l.requirementBody(l.job.Requirements[i], b)
	}
}

func (l *loader) addStage(b *hclsyntax.Block) {
	st := &Stage{Kind: b.Labels[0], Label: b.Labels[1], Range: b.DefRange(), scope: l.scope}
	l.kindRange[st] = b.LabelRanges[0]
	if !hclsyntax.ValidIdentifier(st.Label) {
		l.wrong(b.LabelRanges[1], "Label is no name", "a stage is referred to as stage.LABEL, so its label has to start with a letter and hold only letters, digits, _ and -")
		return
	}
	if first, taken := l.scope.stages[st.Label]; taken {
		l.wrong(b.LabelRanges[1], "Two stages of one label", "stage %q is already at %s; give this one another label", st.Label, place(first.Range))
		return
	}
	l.scope.stages[st.Label] = st
	l.scope.labels = append(l.scope.labels, st.Label)
	l.job.Stages = append(l.job.Stages, st)
	l.stages = append(l.stages, b)
}

func place(r hcl.Range) string { return fmt.Sprintf("%s line %d", r.Filename, r.Start.Line) }

// attributes lists the attributes of a body in file order.
func attributes(body *hclsyntax.Body) []*hclsyntax.Attribute {
	var list []*hclsyntax.Attribute
	for _, a := range body.Attributes {
		list = append(list, a)
	}
	sort.Slice(list, func(i, j int) bool { return list[i].SrcRange.Start.Byte < list[j].SrcRange.Start.Byte })
	return list
}
