package main

import (
	"fmt"
	"io"
	"math"
	"runtime"
	"strings"
	"unicode/utf8"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/run"
	"hushframe/core/pipeline/store"
	"hushframe/stages/kinds"
)

// strip is a curve in one line of characters.
type strip struct {
	name string
	x, y []float64 // y is a density
	note string    // at the right
}

// Widths in characters; with a note of the same width as the names and marks all of it fits into 80 columns.
const (
	stripName = 13
	stripWide = 46
)

// stripDepth is how far below the highest value of all strips of a chart the lowest step lies, in dB.
const stripDepth = 40

// The steps of a strip, the lowest first: nothing, then eight of 5 dB.
var (
	stripBlocks = []rune(" ▁▂▃▄▅▆▇█")
	stripPlain  = []rune(" .:-=+*#@")
)

// cells gives the step of each column: that of the highest value there, so that no peak is lost.
func (s strip) cells(from, to, highest float64) []int {
	top := make([]float64, stripWide)
	for i, x := range s.x {
		if c := column(x, from, to); c >= 0 && s.y[i] > top[c] {
			top[c] = s.y[i]
		}
	}
	// Where the curve has fewer points than there are columns, a column takes the value of the one before.
	for c := 1; c < len(top); c++ {
		if top[c] == 0 && len(s.x) < 2*stripWide {
			top[c] = top[c-1]
		}
	}
	out := make([]int, stripWide)
	steps := len(stripBlocks) - 1
	for c, y := range top {
		if y > 0 && highest > 0 {
			out[c] = max(0, min(steps, steps+int(math.Ceil(10*math.Log10(y/highest)*float64(steps)/stripDepth-1e-9))))
		}
	}
	return out
}

// column of a place, -1 outside.
func column(x, from, to float64) int {
	if !(x >= from) || x > to {
		return -1
	}
	return min(stripWide-1, int((x-from)/(to-from)*stripWide))
}

// writeStrips writes a chart of strips over one range of frequency, the modes as marks below. Strips of one group share
// their highest value.
func (a *app) writeStrips(title, text string, from, to float64, groups [][]strip, modes []float64) {
	ramp := stripPlain
	if a.blocks {
		ramp = stripBlocks
	}
	var b strings.Builder
	fmt.Fprintf(&b, "\n%s\n%s\n", title, text)
	line := func(name, body, note string) {
		b.WriteString(strings.TrimRight(name+strings.Repeat(" ", max(1, stripName-utf8.RuneCountInString(name)))+body+"  "+note, " ") + "\n")
	}
	for _, group := range groups {
		highest := 0.0
		for _, s := range group {
			for i, x := range s.x {
				if column(x, from, to) >= 0 && !math.IsInf(s.y[i], 0) {
					highest = math.Max(highest, s.y[i])
				}
			}
		}
		for _, s := range group {
			var body strings.Builder
			for _, c := range s.cells(from, to, highest) {
				body.WriteRune(ramp[c])
			}
			line(s.name, body.String(), s.note)
		}
	}
	if len(modes) > 0 {
		line("modes", modeMarks(modes, from, to), "")
	}
	left, right := fmt.Sprintf("%.4g", from), fmt.Sprintf("%.4g Hz", to)
	middle := fmt.Sprintf("%.4g", (from+to)/2)
	gap := stripWide/2 - len(left) - len(middle)/2
	rest := stripWide - len(left) - gap - len(middle) - len(right)
	line("", left+strings.Repeat(" ", max(1, gap))+middle+strings.Repeat(" ", max(1, rest))+right, "")
	io.WriteString(a.out, b.String())
}

// modeMarks has a mark in each column with a mode, a number where there are several.
func modeMarks(modes []float64, from, to float64) string {
	n := make([]int, stripWide)
	for _, f := range modes {
		if c := column(f, from, to); c >= 0 {
			n[c]++
		}
	}
	var b strings.Builder
	for _, k := range n {
		switch {
		case k == 0:
			b.WriteByte(' ')
		case k == 1:
			b.WriteByte('^')
		case k < 10:
			fmt.Fprint(&b, k)
		default:
			b.WriteByte('*')
		}
	}
	return b.String()
}

// responseStrips draws the responses that a step made.
func (a *app) responseStrips(st *store.Store, s run.Step) {
	for _, name := range sortedKeys(s.Outputs) {
		if s.Outputs[name].Kind != kinds.ResponseKind.Name {
			continue
		}
		x, err := artifact.Open(st.Folder(s.Outputs[name].Hash), registry())
		if err != nil {
			continue // the results stand without a picture of them
		}
		r, err := kinds.DecodeResponse(x)
		if err != nil {
			continue
		}
		var groups [][]strip
		for axis, axisName := range kinds.AxisNames {
			groups = append(groups, []strip{{axisName, r.Frequency, r.Density[axis], highestWords(r.Frequency, r.Density[axis])}})
		}
		var modes []float64
		for _, m := range r.Modes {
			modes = append(modes, m.Frequency)
		}
		a.writeStrips("Response of "+s.Label, fmt.Sprintf("density of the gyro rate, each axis down to %d dB below its highest value, which is at\nthe right in (deg/s)²/Hz; ^ is a mode", stripDepth), r.From, r.To, groups, modes)
	}
}

// highestWords says how high a curve goes and where.
func highestWords(x, y []float64) string {
	best := -1
	for i, v := range y {
		if !math.IsNaN(v) && (best < 0 || v > y[best]) {
			best = i
		}
	}
	if best < 0 || !(y[best] > 0) {
		return ""
	}
	const degree = math.Pi / 180
	value, format := y[best]/degree/degree, "%.2g"
	if value >= 10 && value < 1e5 {
		format = "%.0f"
	}
	return fmt.Sprintf(format+" at %.0f Hz", value, x[best])
}

// showsBlocks tells whether a stream is a terminal that shows block characters.
func showsBlocks(terminal bool, environment func(string) string) bool {
	if !terminal || environment("TERM") == "dumb" {
		return false
	}
	if runtime.GOOS == "windows" {
		return environment("WT_SESSION") != "" // older consoles lack the characters
	}
	for _, name := range []string{"LC_ALL", "LC_CTYPE", "LANG"} {
		if v := environment(name); v != "" {
			return strings.Contains(strings.ReplaceAll(strings.ToLower(v), "-", ""), "utf8")
		}
	}
	return false
}
