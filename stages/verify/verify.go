// Package verify is the stage that solves problems whose answers are known, with the kernels that jobs use.
package verify

import (
	"context"
	"fmt"
	"math"
	"path"
	"slices"
	"strings"

	"hushframe/core/known"
	"hushframe/core/known/cases"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "verify".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	text := stage.Type{Kind: stage.Text}
	file := stage.Type{Kind: stage.File}
	number := stage.Type{Kind: stage.Number}
	whole := stage.Type{Kind: stage.Whole}
	return stage.Description{
		Name:  "verify",
		About: "solve problems whose answers are known and show how far ours are off",
		Doc: `Builds the problems of tables of known answers (beams, torsion, plates, laminates,
shells, harmonic response), solves them with the elements, the assembly and the
eigen-solver that jobs use, and sets ours beside the reference. Each value comes
with its error and with the share of the row's tolerance that the error takes:
one just passes.`,
		Arguments: []stage.Argument{
			{Name: "tables", About: "tables of known answers: " + strings.Join(files(), ", "), Required: true,
				Type: stage.Type{Kind: stage.List, Element: &file}, Example: `["../../testdata/known/A_beams.json"]`},
			{Name: "rows", About: "beginnings of the ids of the rows to solve; all when left out", Type: stage.Type{Kind: stage.List, Element: &text},
				Example: `["B-SQ-", "C-TWISTED-"]`},
		},
		Outputs: []stage.Output{{Name: "verification", Kind: "verification", About: "every value beside its reference"}},
		Figures: []stage.Figure{
			{Name: "problems", About: "problems solved", Type: whole},
			{Name: "values", About: "values compared", Type: whole},
			{Name: "failed", About: "values beyond the tolerance of their row, and problems that could not be solved", Type: whole},
			{Name: "worst", About: "greatest share of a tolerance that an error takes", Type: number},
		},
	}
}

// files lists the names of the tables that have families.
func files() []string {
	var names []string
	for _, f := range cases.Families() {
		if !slices.Contains(names, f.File) {
			names = append(names, f.File)
		}
	}
	return names
}

// task is one row to solve.
type task struct {
	family cases.Family
	row    known.Row
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	call.Report.Progress("read", -1)
	tasks, err := gather(call)
	if err != nil {
		return nil, err
	}
	v := &kinds.Verification{}
	for i, t := range tasks {
		if err := ctx.Err(); err != nil {
			return nil, fault.From(err)
		}
		call.Report.Progress("solve", float64(i)/float64(len(tasks)))
		v.Problems = append(v.Problems, t.solve())
	}
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["verification"], kinds.EncodeVerification(v)); err != nil {
		return nil, err
	}
	return outcome(v), nil
}

func gather(call *stage.Call) ([]task, error) {
	only := call.Arguments.Texts("rows")
	used := make([]bool, len(only))
	var tasks []task
	for _, name := range call.Arguments.Texts("tables") {
		base := path.Base(strings.ReplaceAll(name, `\`, "/"))
		if !slices.Contains(files(), base) {
			return nil, fault.New(fault.Input, "no problem of a table called %s is known", base).In("verify", name).Of("tables").
				Do("give one of %s", strings.Join(files(), ", "))
		}
		text, err := call.Files.Read(name)
		if err != nil {
			return nil, err
		}
		for _, f := range cases.Families() {
			if f.File != base {
				continue
			}
			rows, err := f.Select(text)
			if err != nil {
				return nil, fault.New(fault.Input, "%v", err).In("verify", name).Of("tables").Do("give the table of known answers as it comes with the program")
			}
			for _, row := range rows {
				keep := len(only) == 0
				for i, p := range only {
					if strings.HasPrefix(row.ID, p) {
						keep, used[i] = true, true
					}
				}
				if keep {
					tasks = append(tasks, task{f, row})
				}
			}
		}
	}
	for i, ok := range used {
		if !ok {
			return nil, fault.New(fault.Input, "no row of the tables begins with %q", only[i]).In("verify", "").Of("rows").
				Do("see the ids in the tables; rows that no stage computes are left out")
		}
	}
	return tasks, nil
}

func (t *task) solve() kinds.VerifiedProblem {
	p := kinds.VerifiedProblem{ID: t.row.ID, Family: t.family.Title, Title: t.row.Title, Mesh: t.family.Mesh, Source: strings.Join(t.row.Source, "; "),
		Known: t.row.HowKnown, Quantity: t.row.Quantity, Unit: t.row.Unit}
	got, err := t.family.Solve(t.row)
	if err != nil {
		p.Failure = err.Error()
		return p
	}
	for i, x := range got {
		if !math.IsNaN(x) {
			p.Values = append(p.Values, kinds.VerifiedValue{Label: t.row.Labels[i], Reference: t.row.Values[i], Computed: x, Share: cases.Share(t.row, i, x)})
		}
	}
	return p
}

func outcome(v *kinds.Verification) *stage.Outcome {
	s := stage.Section{
		Title: "Known problems",
		Text:  "the value of each problem that takes the greatest share of its tolerance; numbers of sources are explained below",
		Columns: []stage.Column{{Name: "problem, value"}, {Name: "reference", Right: true}, {Name: "ours", Right: true},
			{Name: "error, %", Right: true}, {Name: "share, %", Right: true}, {Name: "source", Right: true}},
	}
	sources := stage.Section{Title: "Sources", Columns: []stage.Column{{Name: "", Right: true}, {Name: "source"}}}
	numbers := map[string]string{}
	number := func(source string) string {
		if numbers[source] == "" {
			numbers[source] = fmt.Sprint(len(numbers) + 1)
			sources.Rows = append(sources.Rows, []string{numbers[source], source})
		}
		return numbers[source]
	}
	values, failed, worst := 0, 0, 0.0
	for i := range v.Problems {
		p := &v.Problems[i]
		for _, x := range p.Values {
			values++
			worst = max(worst, x.Share)
			if !(x.Share <= 1) {
				failed++
			}
		}
		top, ok := p.Worst()
		if !ok {
			failed++
			s.Rows = append(s.Rows, []string{p.ID + ", " + p.Failure, "-", "-", "-", "-", number(p.Source)})
			continue
		}
		s.Rows = append(s.Rows, []string{p.ID + ", " + top.Label, fmt.Sprintf("%.5g", top.Reference), fmt.Sprintf("%.5g", top.Computed), difference(top),
			fmt.Sprintf("%.0f", 100*top.Share), number(p.Source)})
	}
	return &stage.Outcome{
		Figures: map[string]any{"problems": float64(len(v.Problems)), "values": float64(values), "failed": float64(failed), "worst": worst},
		Summary: []stage.Section{s, sources},
		Notes:   []string{fmt.Sprintf("%d values of %d problems compared, %d beyond their tolerance", values, len(v.Problems), failed)},
	}
}

// difference is the relative error in per cent.
func difference(x kinds.VerifiedValue) string {
	if x.Reference == 0 {
		return "-"
	}
	return fmt.Sprintf("%+.3f", 100*(x.Computed/x.Reference-1))
}
