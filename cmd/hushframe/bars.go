package main

import (
	"fmt"
	"io"
	"strings"
	"sync"
	"time"
	"unicode/utf8"

	"github.com/vbauerster/mpb/v8"
	"github.com/vbauerster/mpb/v8/decor"

	"hushframe/core/pipeline/plan"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/stage"
)

// barWatch draws a bar for each running step, one line for the whole run below
// them, and lines above for what has ended.
type barWatch struct {
	progress *mpb.Progress
	app      *app
	width    int // of the label
	kinds    int // width of the kind of stage
	color    bool
	whole    *mpb.Bar

	mu    sync.Mutex
	bars  map[string]*stepBar
	begun int
	ended int
}

// stepBar is what the bar of one step shows.
type stepBar struct {
	bar      *mpb.Bar
	mu       sync.Mutex
	phase    string
	fraction float64
}

func newBarWatch(a *app, p *plan.Plan, width int) *barWatch {
	w := &barWatch{
		progress: mpb.New(mpb.WithOutput(a.err), mpb.WithRefreshRate(100*time.Millisecond)),
		app:      a, width: width, color: a.color, bars: map[string]*stepBar{},
	}
	for _, s := range p.Steps {
		w.kinds = max(w.kinds, len(s.Stage.Kind))
	}
	a.logOut.to(w.progress) // log lines go above the bars
	began := time.Now()
	w.whole = w.add(1<<30, func(columns int) string {
		w.mu.Lock()
		defer w.mu.Unlock()
		return fmt.Sprintf("%d of %s, %s", w.ended, count(len(p.Steps), "step", "steps"), duration(time.Since(began)))
	})
	return w
}

// add shows a line that is drawn anew at each refresh.
func (w *barWatch) add(priority int, draw func(columns int) string) *mpb.Bar {
	fill := mpb.BarFillerFunc(func(out io.Writer, s decor.Statistics) error {
		_, err := io.WriteString(out, cutTo(draw(s.AvailableWidth), s.AvailableWidth))
		return err
	})
	bar, err := w.progress.Add(1, fill, mpb.BarFillerTrim(), mpb.BarPriority(priority))
	if err != nil {
		return nil // the display has been closed
	}
	return bar
}

func (w *barWatch) Begin(label, kind string, threads int) {
	b := &stepBar{phase: "starts", fraction: -1}
	began := time.Now()
	head := fmt.Sprintf("%-*s  %-*s", w.width, label, w.kinds, kind)
	w.mu.Lock()
	w.begun++
	order := w.begun
	w.bars[label] = b
	w.mu.Unlock()
	b.bar = w.add(order, func(columns int) string {
		b.mu.Lock()
		defer b.mu.Unlock()
		return barLine(head, b.phase, b.fraction, time.Since(began), columns)
	})
}

// barLine is the line of one step in a number of columns: label and kind of
// stage, phase, bar, per cent, time. What does not fit is left out: first the
// bar, then the end of the line.
func barLine(head, phase string, fraction float64, elapsed time.Duration, columns int) string {
	const phaseWidth, rest = 18, 22
	line := head + "  " + pad(phase, phaseWidth)
	room := min(columns-utf8.RuneCountInString(line)-rest, 30)
	bar, share := "", ""
	if fraction >= 0 {
		fraction = min(fraction, 1)
		full := int(fraction * float64(max(room, 0)))
		bar = strings.Repeat("━", full) + strings.Repeat("╌", max(room, 0)-full)
		share = fmt.Sprintf("%.0f %%", 100*fraction)
	}
	if room >= 5 {
		line += "  " + pad(bar, room)
	}
	return cutTo(fmt.Sprintf("%s  %5s  %s", line, share, duration(elapsed)), columns)
}

func (w *barWatch) Progress(label, phase string, fraction float64) {
	w.mu.Lock()
	b := w.bars[label]
	w.mu.Unlock()
	if b != nil {
		b.mu.Lock()
		b.phase, b.fraction = phase, fraction
		b.mu.Unlock()
	}
}

func (w *barWatch) Log(label string, level stage.Level, text string, fields []any) {
	logStep(w.app.log, label, level, text, fields)
}

func (w *barWatch) End(s run.Step) {
	w.mu.Lock()
	b := w.bars[s.Label]
	delete(w.bars, s.Label)
	w.ended++
	w.mu.Unlock()
	if b != nil && b.bar != nil {
		b.bar.Abort(true)
	}
	fmt.Fprintf(w.progress, "%-*s  %s\n", w.width, s.Label, paint(w.color, stateColor(s.State), ending(s)))
}

func (w *barWatch) Judged(v run.Verdict) {
	color := ""
	if !v.Holds {
		color = red
	}
	fmt.Fprintf(w.progress, "requirement %s %s: %s\n", v.Name, paint(w.color, color, standing(v)), v.Shown)
}

func (w *barWatch) close() {
	if w.whole != nil {
		w.whole.Abort(true)
	}
	w.app.logOut.to(w.app.err)
	w.progress.Wait()
}

const (
	red    = "\x1b[31m"
	yellow = "\x1b[33m"
	bold   = "\x1b[1m"
	dim    = "\x1b[2m"
	plain  = "\x1b[0m"
)

func stateColor(s run.State) string {
	switch s {
	case run.Failed:
		return red
	case run.Skipped, run.Stopped:
		return yellow
	}
	return dim
}

func paint(on bool, color, text string) string {
	if !on || color == "" {
		return text
	}
	return color + text + plain
}

// pad makes a text exactly so many characters long.
func pad(s string, n int) string {
	s = cutTo(s, n)
	return s + strings.Repeat(" ", n-utf8.RuneCountInString(s))
}

func cutTo(s string, n int) string {
	if utf8.RuneCountInString(s) <= n {
		return s
	}
	r := []rune(s)
	return string(r[:max(n-1, 0)]) + "…"
}
