package transfer

import (
	"fmt"
	"math"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/record/gather"
)

// Thresholds of warnings; common practice.
const (
	fewStrikes   = 3
	lowCoherence = 0.8
)

// outcome tells what was found and left out.
func outcome(x *kinds.Transfer, notes []string, warnings []stage.Warning, set settings) *stage.Outcome {
	leftOut := 0
	for _, s := range x.Strikes {
		if !s.Used {
			leftOut++
		}
	}
	least := math.NaN()
	listed := []any{}
	for _, p := range x.Peaks {
		if !(p.Coherence >= least) {
			least = p.Coherence
		}
		listed = append(listed, map[string]any{"axis": x.Responses[p.Response].Axis, "frequency": hertz(p.Frequency), "damping": p.Damping, "coherence": p.Coherence})
	}
	o := &stage.Outcome{
		Figures: map[string]any{"averages": float64(x.Averages), "left_out": float64(leftOut), "excited_to": hertz(x.ExcitedTo), "coherence": least, "peaks": listed},
		Notes:   notes, Warnings: warnings,
	}
	add := func(id, remedy, format string, args ...any) {
		o.Warnings = append(o.Warnings, stage.Warning{ID: "transfer." + id, Where: set.File, Remedy: remedy, Text: fmt.Sprintf(format, args...)})
	}
	if x.Method == strikes && x.Averages < fewStrikes {
		add("few-strikes", "strike more often", "only %d strikes are averaged, and the coherence of few says little", x.Averages)
	}
	if least < lowCoherence {
		add("coherence", "strike the same spot in the same direction; look for what rattles", "the coherence at a peak is only %.2f: something else than the force moves it, or it is not linear", least)
	}
	o.Summary = []stage.Section{responseTable(x, set.File)}
	if len(x.Strikes) > 0 {
		o.Summary = append(o.Summary, strikeTable(x))
	}
	o.Summary = append(o.Summary, peakTable(x))
	return o
}

func hertz(f float64) stage.Quantity { return stage.Quantity{SI: f, Dimension: "frequency"} }

func responseTable(x *kinds.Transfer, file string) stage.Section {
	how := fmt.Sprintf("%d segments of %.3g s, Hann", x.Averages, float64(x.Segment)/x.Rate)
	if x.Method == strikes {
		how = fmt.Sprintf("%d strikes, %.3g s after each, decaying by exp(-t/%.3g s)", x.Averages, float64(x.Segment)/x.Rate, x.Decay)
		if x.Decay == 0 {
			how = fmt.Sprintf("%d strikes, %.3g s after each", x.Averages, float64(x.Segment)/x.Rate)
		}
	}
	t := stage.Section{
		Title:   "Transfer functions of " + file,
		Text:    fmt.Sprintf("%s; bins of %.3g Hz, force in column %s up to %.4g Hz", how, x.Step, x.ForceColumn, x.ExcitedTo),
		Columns: []stage.Column{{Name: "response"}, {Name: "column"}, {Name: "unit"}, {Name: "median coherence", Right: true}, {Name: "peaks", Right: true}},
	}
	for i, r := range x.Responses {
		count := 0
		for _, p := range x.Peaks {
			if p.Response == i {
				count++
			}
		}
		t.Rows = append(t.Rows, []string{r.Axis, r.Column, shownUnit(r), fmt.Sprintf("%.3f", medianTo(r.Coherence, int(x.ExcitedTo/x.Step))), fmt.Sprint(count)})
	}
	return t
}

// medianTo is the median of the bins from 1 to last.
func medianTo(v []float64, last int) float64 {
	return median(v[1:max(2, min(len(v), last+1))])
}

func strikeTable(x *kinds.Transfer) stage.Section {
	t := stage.Section{
		Title:   "Strikes",
		Columns: []stage.Column{{Name: "s", Right: true}, {Name: "N", Right: true}, {Name: "ms", Right: true}, {Name: "used"}, {Name: "why not"}},
	}
	for _, s := range x.Strikes {
		used := "no"
		if s.Used {
			used = "yes"
		}
		t.Rows = append(t.Rows, []string{fmt.Sprintf("%.4f", s.Time), fmt.Sprintf("%.3g", s.Force), fmt.Sprintf("%.2g", 1000*s.Length), used, s.Why})
	}
	return t
}

func peakTable(x *kinds.Transfer) stage.Section {
	t := stage.Section{
		Title:   "Peaks of the transfer functions",
		Columns: []stage.Column{{Name: "response"}, {Name: "Hz", Right: true}, {Name: "damping, %", Right: true}, {Name: "|H1|", Right: true}, {Name: "unit"}, {Name: "coherence", Right: true}},
	}
	for _, p := range x.Peaks {
		r := x.Responses[p.Response]
		damping, magnitude := "–", p.Magnitude
		if !math.IsNaN(p.Damping) {
			damping = fmt.Sprintf("%.2f", 100*p.Damping)
		}
		if r.Quantity == gather.AngularRate {
			magnitude *= 180 / math.Pi
		}
		t.Rows = append(t.Rows, []string{r.Axis, fmt.Sprintf("%.2f", p.Frequency), damping, fmt.Sprintf("%.4g", magnitude), shownUnit(r), fmt.Sprintf("%.3f", p.Coherence)})
	}
	return t
}

func shownUnit(r kinds.TransferResponse) string {
	if r.Quantity == gather.AngularRate {
		return "deg/s/N"
	}
	return "m/s²/N"
}
