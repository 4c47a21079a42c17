package main

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/core/pipeline/store"
	"hushframe/stages/contrast"
	"hushframe/stages/kinds"
)

const runHelp = `A RUN is written
  JOB          the last run of a job: its file, or its folder
  JOB@NAME     the run that "hushframe run JOB --name NAME" kept
  JOB@-1       the run before the last; -2 the one before that
  JOB@ID       a run by its id, or the first six digits of it or more
where JOB may be any file or folder beside the store. The second may leave JOB
out when it is that of the first: "@NAME". Runs may lie in two stores.`

func (a *app) diffCommand() *cobra.Command {
	var asJSON bool
	var page string
	c := &cobra.Command{
		Use:   "diff RUN [RUN]",
		Short: "Say what changed from one run to another: modes, response, mass, requirements",
		Long: `Sets two runs side by side, the first as the state before. Modes are followed by
the modal assurance criterion of their shapes, whatever their meshes; the response
is compared in dB in bands, at peaks and at rotor lines; then masses, requirements,
settings, files and figures. With one RUN, it is set beside the last run of its job,
or the last run beside the one before it.

` + runHelp + `

Exit codes:
  0    no requirement that held before fails now
  1    the results could not be read
  2    the command line is wrong or there is no such run
  3    a requirement that held before is broken or cannot be judged now
  130  stopped by Ctrl-C`,
		Example: `  hushframe diff revision-a.hcl revision-b.hcl
  hushframe run job.hcl --name before
  hushframe run job.hcl --set arm_thickness=6mm
  hushframe diff job.hcl@before job.hcl --page change.html`,
		Args:              wants(1, 2, "one run or two are wanted: the state before, and the one after"),
		ValidArgsFunction: completeJob,
	}
	c.Flags().BoolVar(&asJSON, "json", false, "write the result as one JSON object")
	c.Flags().StringVar(&page, "page", "", `write it as a page too, such as "change.html", with its tables beside it`)
	c.RunE = func(_ *cobra.Command, args []string) error {
		if page != "" {
			if err := checkPage(page); err != nil {
				return err
			}
		}
		runs, err := a.bothRuns(args)
		if err != nil {
			return err
		}
		d, err := between(runs)
		if err != nil {
			return err
		}
		if asJSON {
			err = d.writeJSON(a.out)
		} else {
			a.showDifference(d)
		}
		if err == nil && page != "" {
			var beside int
			if beside, err = d.writePage(page); err == nil && !asJSON {
				fmt.Fprintf(a.out, "\nwrote %s (and %s beside it)\n", page, count(beside, "file", "files"))
			}
		}
		if err != nil {
			return err
		}
		if d.worse() {
			return exitError(exitBroken)
		}
		return nil
	}
	return c
}

// storedRun is a run with its store.
type storedRun struct {
	words   string // as the user named it
	store   *store.Store
	record  *store.RunRecord
	account *account.Account
}

// bothRuns finds the runs meant by one or two arguments.
func (a *app) bothRuns(args []string) (runs [2]*storedRun, err error) {
	path, which, err := splitRun(args[0], "")
	if err != nil {
		return runs, err
	}
	before, after := args[0], ""
	if len(args) == 2 {
		after = args[1]
	} else if after = path; which == "" {
		before = path + "@-1"
	}
	for k, words := range []string{before, after} {
		if runs[k], err = openRun(words, path); err != nil {
			return runs, err
		}
	}
	return runs, nil
}

// splitRun takes a RUN apart: the path of the job and which of its runs. An empty path stands for that of another.
func splitRun(words, other string) (path, which string, err error) {
	if _, err := jobFolder(words); err == nil {
		return words, "", nil
	}
	i := strings.LastIndex(words, "@")
	if i < 0 {
		_, err := jobFolder(words)
		return "", "", err
	}
	path, which = words[:i], words[i+1:]
	switch {
	case path == "" && other != "":
		path = other
	case path == "":
		path = "."
	}
	if which == "" {
		return "", "", fault.New(fault.Input, "%s names no run", words).Do("write a name, an id or -1 after the @")
	}
	_, err = jobFolder(path)
	return path, which, err
}

func openRun(words, other string) (*storedRun, error) {
	path, which, err := splitRun(words, other)
	if err != nil {
		return nil, err
	}
	folder, err := jobFolder(path)
	if err != nil {
		return nil, err
	}
	r := &storedRun{words: words, store: store.View(folder, registry())}
	if r.record, err = r.store.FindRun(jobName(path), which); err != nil {
		return nil, err
	}
	if r.record.ID == "" {
		return nil, fault.New(fault.Missing, "the last run of %s was stopped", path).Do("run it again")
	}
	x, err := r.open(r.record.ID)
	if err != nil {
		return nil, err
	}
	r.account = account.Decode(x)
	return r, nil
}

// differences is all that diff says.
type differences struct {
	runs    [2]*storedRun
	account *account.Change
	frames  []frameDifference
	notes   []string
}

// frameDifference is one branch of the job that both runs have.
type frameDifference struct {
	labels [2]string
	*kinds.Difference
}

func (d *differences) worse() bool {
	for _, v := range d.account.Verdicts {
		if v.Worse() {
			return true
		}
	}
	return false
}

// between sets two runs side by side.
func between(runs [2]*storedRun) (*differences, error) {
	d := &differences{runs: runs, account: account.Between(runs[0].account, runs[1].account)}
	branches := [2][]branch{runs[0].branches(), runs[1].branches()}
	for _, pair := range partners(branches) {
		var sides [2]contrast.Side
		for k, b := range pair {
			for _, hash := range b.artifacts {
				x, err := runs[k].open(hash)
				if err != nil {
					return nil, err
				}
				if err := sides[k].Add(x); err != nil {
					return nil, fault.From(err).In("read "+b.label+" of", runs[k].words)
				}
			}
		}
		x, err := contrast.Between(sides[0], sides[1], contrast.Options{})
		if err != nil {
			d.notes = append(d.notes, fmt.Sprintf("%s: %v", pair[1].label, err))
			continue
		}
		d.frames = append(d.frames, frameDifference{[2]string{pair[0].label, pair[1].label}, x})
	}
	if len(d.frames) == 0 {
		d.notes = append(d.notes, "the runs have no step in common whose modes, response or masses could be compared")
	}
	return d, nil
}

// showDifference writes a difference for people.
func (a *app) showDifference(d *differences) {
	writeSection(a.out, d.heads())
	for _, f := range d.frames {
		more := ""
		if len(d.frames) > 1 {
			more = ", " + f.labels[1]
		}
		for _, s := range contrast.Tables(f.Difference) {
			s.Title += more
			writeSection(a.out, s)
		}
		a.differenceStrips(f.Difference, more)
	}
	for _, s := range d.rest() {
		writeSection(a.out, s)
	}
	for _, note := range d.notes {
		fmt.Fprintf(a.out, "\n%s\n", harmless(note))
	}
	fmt.Fprintf(a.out, "\n%s\n", d.closing())
}

// heads says which runs are compared.
func (d *differences) heads() stage.Section {
	heads := stage.Section{Title: "Runs", Columns: []stage.Column{{Name: ""}, {Name: "run"}, {Name: "id"}, {Name: "job"}}}
	for k, side := range []string{"before", "after"} {
		r := d.runs[k]
		heads.Rows = append(heads.Rows, []string{side, r.words, shortRun(r.record.ID), r.account.Job})
	}
	if d.runs[0].record.ID == d.runs[1].record.ID {
		heads.Text = "They are the same: made of the same, with the same result."
	}
	return heads
}

// rest tells of requirements whose state or value differs, and of what else does; tables without rows are left out.
func (d *differences) rest() []stage.Section {
	out := []stage.Section{requirementChanges(d.account.Verdicts)}
	for _, x := range []struct {
		title, name string
		pairs       []account.Pair
		short       bool
	}{
		{"Settings that differ", "setting", d.account.Settings, false},
		{"Figures that differ", "figure", d.account.Figures, false},
		{"Texts and files that differ", "file", d.account.Files, true},
		{"Programs that differ", "program", d.account.Programs, true},
	} {
		section := stage.Section{Title: x.title, Columns: []stage.Column{{Name: x.name}, {Name: "before"}, {Name: "after"}}}
		for _, p := range x.pairs {
			row := []string{p.Name, p.Before, p.After}
			for i, s := range row[1:] {
				switch {
				case s == "":
					row[i+1] = "none"
				case x.short:
					row[i+1] = shortRun(s)
				}
			}
			section.Rows = append(section.Rows, row)
		}
		out = append(out, section)
	}
	return slices.DeleteFunc(out, func(s stage.Section) bool { return len(s.Rows) == 0 })
}

// differenceStrips draws both responses, the axes one below the other.
func (a *app) differenceStrips(d *kinds.Difference, more string) {
	if len(d.Frequency) == 0 {
		return
	}
	var groups [][]strip
	for axis, name := range kinds.AxisNames {
		var group []strip
		for k, side := range []string{" before", " now"} {
			group = append(group, strip{name + side, d.Frequency, d.Density[k][axis], highestWords(d.Frequency, d.Density[k][axis])})
		}
		groups = append(groups, group)
	}
	a.writeStrips("Response before and after"+more, fmt.Sprintf("density of the gyro rate, each axis down to %d dB below the highest value of both;\nhighest values at the right in (deg/s)²/Hz", stripDepth), d.From, d.To, groups, nil)
}

// requirementChanges lists the requirements whose state or value differs.
func requirementChanges(verdicts []account.VerdictPair) stage.Section {
	section := stage.Section{Title: "Requirements before and after", Columns: []stage.Column{{Name: "requirement"}, {Name: "before"}, {Name: "after"},
		{Name: "value", Right: true}, {Name: "now", Right: true}, {Name: "margin", Right: true}, {Name: "now", Right: true}}}
	for _, v := range verdicts {
		if !v.Changed() && v.Value[0] == v.Value[1] && v.Bound[0] == v.Bound[1] {
			continue
		}
		section.Rows = append(section.Rows, []string{v.Name, v.State[0], v.State[1], v.Value[0], v.Value[1], v.Margin[0], v.Margin[1]})
	}
	return section
}

// closing sums up in a line or two.
func (d *differences) closing() string {
	var parts []string
	for _, f := range d.frames {
		words := ""
		if len(d.frames) > 1 {
			words = f.labels[1] + ": "
		}
		lost, fresh := 0, 0
		for _, m := range f.Alone {
			if m.Side == kinds.Before {
				lost++
			} else {
				fresh++
			}
		}
		var said []string
		if len(f.Modes)+lost+fresh > 0 {
			said = append(said, fmt.Sprintf("%s followed, %d lost, %d new", count(len(f.Modes), "mode", "modes"), lost, fresh))
		}
		for _, axis := range kinds.AxisNames {
			if b, ok := f.Whole(axis); ok && !math.IsNaN(b.Change) {
				said = append(said, fmt.Sprintf("%s %+.1f dB", axis, b.Change+0))
			}
		}
		if change := f.MassAfter - f.MassBefore; !math.IsNaN(change) {
			said = append(said, fmt.Sprintf("mass %+.2f g", 1000*change+0))
		}
		parts = append(parts, words+strings.Join(said, ", "))
	}
	worse, better := 0, 0
	for _, v := range d.account.Verdicts {
		switch {
		case v.Worse():
			worse++
		case v.State[1] == account.Holds && (v.State[0] == account.Broken || v.State[0] == account.Unjudged):
			better++
		}
	}
	switch {
	case worse > 0:
		parts = append(parts, fmt.Sprintf("%s held before and %s not now", count(worse, "requirement", "requirements"), map[bool]string{true: "does", false: "do"}[worse == 1]))
	default:
		parts = append(parts, "no requirement that held before fails now")
	}
	if better > 0 {
		parts = append(parts, fmt.Sprintf("%s now", count(better, "requirement holds", "requirements hold")))
	}
	return strings.Join(parts, "; ")
}

// shortRun is enough of an id or checksum to tell it from others.
func shortRun(id string) string { return id[:min(12, len(id))] }
