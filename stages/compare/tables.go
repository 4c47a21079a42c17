package compare

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// modeFigures adds the figures of paired modes and of verdicts.
func modeFigures(o *stage.Outcome, c *kinds.Comparison) {
	var errors []float64
	for _, p := range c.ModePairs {
		errors = append(errors, math.Abs(p.Error))
	}
	largest := math.NaN()
	if len(errors) > 0 {
		largest = slices.Max(errors)
	}
	alone, unknown := 0.0, 0.0
	for _, m := range c.ModesAlone {
		if m.Side == kinds.Observed {
			alone++
		}
	}
	for _, v := range c.Verdicts {
		if v.Verdict == kinds.VerdictUnknown {
			unknown++
		}
	}
	o.Figures["modes_paired"], o.Figures["modes_largest_error"], o.Figures["modes_median_error"] = float64(len(errors)), largest, median(errors)
	o.Figures["modes_unpaired"], o.Figures["unknown"] = alone, unknown
}

// modeTables show pairs of modes and modes alone; none where no modes were given.
func modeTables(c *kinds.Comparison) []stage.Section {
	if len(c.ModePairs)+len(c.ModesAlone) == 0 {
		return nil
	}
	pairs := stage.Section{
		Title: "Predicted modes and modes found in flight",
		Columns: []stage.Column{{Name: "mode", Right: true}, {Name: "predicted, Hz", Right: true}, {Name: "in flight, Hz", Right: true}, {Name: "±", Right: true},
			{Name: "error, %", Right: true}, {Name: "direction", Right: true}, {Name: "damping, %", Right: true}, {Name: "in flight, %", Right: true},
			{Name: "confidence", Right: true}},
		Text: fmt.Sprintf("%d pairs; direction is the squared cosine between the two", len(c.ModePairs)),
	}
	for _, p := range c.ModePairs {
		pairs.Rows = append(pairs.Rows, []string{fmt.Sprint(p.Mode), fmt.Sprintf("%.1f", p.Predicted), fmt.Sprintf("%.1f", p.Observed), fmt.Sprintf("%.2g", p.ObservedError),
			fmt.Sprintf("%+.1f", 100*p.Error), fmt.Sprintf("%.2f", p.Agreement), percent(p.PredictedDamping), damping(p.ObservedDamping, p.ObservedDampingError),
			fmt.Sprintf("%.2f", p.Confidence)})
	}
	alone := stage.Section{
		Title:   "Modes without a partner",
		Columns: []stage.Column{{Name: "side"}, {Name: "mode", Right: true}, {Name: "Hz", Right: true}, {Name: "roll, pitch, yaw"}, {Name: "why"}},
	}
	for _, m := range c.ModesAlone {
		number := "–"
		if m.Side == kinds.Predicted {
			number = fmt.Sprint(m.Mode)
		}
		var direction []string
		for _, v := range m.Direction {
			direction = append(direction, fmt.Sprintf("%.2f", v))
		}
		alone.Rows = append(alone.Rows, []string{m.Side, number, fmt.Sprintf("%.1f", m.Frequency), strings.Join(direction, " "), m.Reason})
	}
	if len(alone.Rows) == 0 {
		return []stage.Section{pairs}
	}
	return []stage.Section{pairs, alone}
}

func verdictTable(c *kinds.Comparison) stage.Section {
	t := stage.Section{
		Title:   "What the observed peaks are",
		Columns: []stage.Column{{Name: "axis"}, {Name: "Hz", Right: true}, {Name: "taken for"}, {Name: "why"}},
	}
	for _, v := range c.Verdicts {
		t.Rows = append(t.Rows, []string{v.Axis, fmt.Sprintf("%.1f", v.Frequency), v.Verdict, v.Reason})
	}
	return t
}
