package main

import (
	"fmt"
	"io"
	"time"

	"github.com/rs/zerolog"

	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/stage"
)

// watcher shows a run while it goes on.
type watcher interface {
	run.Observer
	// close ends the display.
	close()
}

// watch picks the display: bars on a terminal, log lines for machines, plain
// lines otherwise.
func (a *app) watch(p *plan.Plan) watcher {
	width := 0
	for _, s := range p.Steps {
		width = max(width, len(s.Stage.Label))
	}
	switch {
	case a.logFormat == "json":
		return &jsonWatch{log: a.log}
	case a.live:
		return newBarWatch(a, p, width)
	}
	return &lineWatch{out: a.err, log: a.log, width: width, phases: map[string]string{}}
}

// ending says how a step ended, in words.
func ending(s run.Step) string {
	switch s.State {
	case run.Ran:
		return "done in " + duration(s.Elapsed)
	case run.Reused:
		return "as before"
	case run.Failed:
		return "failed"
	case run.Skipped:
		return fmt.Sprintf("skipped, since %s did not finish", s.Because)
	}
	return "stopped"
}

// standing says how a requirement stands, in words.
func standing(v run.Verdict) string {
	switch {
	case !v.Judged:
		return "not judged"
	case v.Holds:
		return "holds"
	}
	return "broken"
}

// duration writes a time to two or three digits.
func duration(d time.Duration) string {
	switch {
	case d < time.Second:
		return fmt.Sprintf("%d ms", d.Milliseconds())
	case d < 10*time.Second:
		return fmt.Sprintf("%.1f s", d.Seconds())
	case d < 2*time.Minute:
		return fmt.Sprintf("%.0f s", d.Seconds())
	case d < 2*time.Hour:
		return fmt.Sprintf("%.1f min", d.Minutes())
	}
	return fmt.Sprintf("%.1f h", d.Hours())
}

// logStep passes a line of a step to the log.
func logStep(log zerolog.Logger, label string, level stage.Level, text string, fields []any) {
	e := log.Info()
	switch level {
	case stage.Debug:
		e = log.Debug()
	case stage.Warn:
		e = log.Warn()
	}
	e = e.Str("step", label)
	for i := 0; i+1 < len(fields); i += 2 {
		e = e.Str(fmt.Sprint(fields[i]), fmt.Sprint(fields[i+1]))
	}
	e.Msg(text)
}

// lineWatch writes a line when a step enters a phase or ends.
type lineWatch struct {
	out    io.Writer
	log    zerolog.Logger
	width  int
	phases map[string]string
}

func (w *lineWatch) line(label, text string) { fmt.Fprintf(w.out, "%-*s  %s\n", w.width, label, text) }

func (w *lineWatch) Begin(label, kind string, threads int) {
	w.line(label, fmt.Sprintf("%s, %s", kind, count(threads, "thread", "threads")))
}

func (w *lineWatch) Progress(label, phase string, fraction float64) {
	if w.phases[label] != phase {
		w.phases[label] = phase
		w.line(label, phase)
	}
}

func (w *lineWatch) Log(label string, level stage.Level, text string, fields []any) {
	logStep(w.log, label, level, text, fields)
}

func (w *lineWatch) End(s run.Step) { w.line(s.Label, ending(s)) }

func (w *lineWatch) Judged(v run.Verdict) {
	fmt.Fprintf(w.out, "requirement %s %s: %s\n", v.Name, standing(v), v.Shown)
}

func (w *lineWatch) close() {}

// jsonWatch writes each event as a line of JSON.
type jsonWatch struct{ log zerolog.Logger }

func (w *jsonWatch) Begin(label, kind string, threads int) {
	w.log.Info().Str("event", "begin").Str("step", label).Str("stage", kind).Int("threads", threads).Send()
}

func (w *jsonWatch) Progress(label, phase string, fraction float64) {
	e := w.log.Info().Str("event", "progress").Str("step", label).Str("phase", phase)
	if fraction >= 0 {
		e = e.Float64("fraction", fraction)
	}
	e.Send()
}

func (w *jsonWatch) Log(label string, level stage.Level, text string, fields []any) {
	logStep(w.log, label, level, text, fields)
}

func (w *jsonWatch) End(s run.Step) {
	e := w.log.Info()
	if s.State == run.Failed {
		e = w.log.Error()
	}
	e = e.Str("event", "end").Str("step", s.Label).Str("stage", s.Kind).Str("state", string(s.State)).Float64("seconds", s.Elapsed.Seconds())
	if s.Because != "" {
		e = e.Str("because", s.Because)
	}
	if s.Fault != nil {
		e = e.Interface("fault", s.Fault)
	}
	e.Send()
}

func (w *jsonWatch) Judged(v run.Verdict) {
	w.log.Info().Str("event", "judged").Str("requirement", v.Name).Str("standing", standing(v)).Str("shown", v.Shown).Str("margin", v.Margin).Send()
}

func (w *jsonWatch) close() {}

func count(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
