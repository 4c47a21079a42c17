package filter

import (
	"fmt"
	"math"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

const degree = math.Pi / 180

// lateLag is the lag at the bandwidth above which the chain is warned of; common practice: it eats most of the phase margin of a loop.
const lateLag = 45 * degree

// outcome sums up in figures, warnings and tables.
func outcome(x *kinds.Filtered, n *noise) *stage.Outcome {
	rate := func(v float64) stage.Quantity { return stage.Quantity{SI: v, Dimension: "angular rate"} }
	second := func(v float64) stage.Quantity { return stage.Quantity{SI: v, Dimension: "time"} }
	largest := 0.0
	for _, a := range x.Axes {
		largest = max(largest, a.ObservedLeft)
	}
	o := &stage.Outcome{
		Figures: map[string]any{
			"filters": float64(len(x.Filters)), "lag": stage.Quantity{SI: x.Lag, Dimension: "angle"}, "delay": second(x.Delay), "group_delay": second(x.GroupDelay),
			"gain": x.Gain, "largest_left": rate(largest), "met": x.Met,
		},
		Notes:   x.Notes,
		Summary: []stage.Section{chainTable(x), axisTable(x)},
	}
	for _, name := range kinds.AxisNames {
		left, cut, predicted := math.NaN(), math.NaN(), math.NaN()
		for _, a := range x.Axes {
			if a.Axis == name {
				left, cut, predicted = a.ObservedLeft, decibels(a.ObservedRMS, a.ObservedLeft), decibels(a.PredictedRMS, a.PredictedLeft)
			}
		}
		o.Figures["left_"+name], o.Figures["cut_"+name], o.Figures["cut_predicted_"+name] = rate(left), cut, predicted
	}
	if len(x.Tried) > 0 {
		o.Summary = append(o.Summary, triedTable(x))
	}
	if !x.Met {
		o.Warnings = append(o.Warnings, stage.Warning{ID: "filter.target-missed", Text: fmt.Sprintf("%.3g deg/s are left on one axis, where %.3g deg/s are asked for", largest/degree, x.Target/degree),
			Remedy: "allow more notches, a lower band limit or a larger residual; or quieten the frame"})
	}
	if x.Lag > lateLag {
		o.Warnings = append(o.Warnings, stage.Warning{ID: "filter.late", Text: fmt.Sprintf("the chain is %.0f deg late at %.4g Hz, which leaves a control little margin", x.Lag/degree, x.Bandwidth),
			Remedy: "filter less, or ask less bandwidth of the control"})
	}
	followed := false
	for _, f := range x.Filters {
		followed = followed || f.Type == kinds.FilterRotorNotch
	}
	split := false
	for _, a := range n.axes {
		split = split || len(a.noise.Lines) > 0
	}
	if followed && !split {
		o.Notes = append(o.Notes, "what moves with the rotors is not told from the rest, so that a notch that follows them is worth more than is said; give identified")
	}
	return o
}

func decibels(before, after float64) float64 { return 20 * math.Log10(before/after) }

func chainTable(x *kinds.Filtered) stage.Section {
	t := stage.Section{
		Title: "Filter chain",
		Text: fmt.Sprintf("run at %.5g Hz; late at the control's bandwidth of %.4g Hz; buys: how much more noise an axis would have without this filter",
			x.Rate, x.Bandwidth),
		Columns: []stage.Column{{Name: "filter"}, {Name: "late, deg", Right: true}, {Name: "delay, ms", Right: true}, {Name: "group delay, ms", Right: true}, {Name: "gain", Right: true}},
	}
	if x.Chosen {
		t.Title = fmt.Sprintf("Filter chain chosen for %.3g deg/s", x.Target/degree)
	}
	for _, a := range x.Axes {
		t.Columns = append(t.Columns, stage.Column{Name: "buys " + a.Axis + ", dB", Right: true})
	}
	row := func(what string, lag, delay, group, gain float64) []string {
		return []string{what, fmt.Sprintf("%.1f", lag/degree), fmt.Sprintf("%.2f", 1e3*delay), fmt.Sprintf("%.2f", 1e3*group), fmt.Sprintf("%.2f", gain)}
	}
	for _, f := range x.Filters {
		what := f.Name
		if f.Type == kinds.FilterRotorNotch {
			what += fmt.Sprintf(", near %.0f Hz on %d rotors", f.Frequency, f.Count)
		}
		r := row(what, f.Lag, f.Delay, f.GroupDelay, f.Gain)
		for _, v := range f.Buys {
			r = append(r, fmt.Sprintf("%.1f", v))
		}
		t.Rows = append(t.Rows, r)
	}
	all := row("all", x.Lag, x.Delay, x.GroupDelay, x.Gain)
	for _, a := range x.Axes {
		all = append(all, fmt.Sprintf("%.1f", decibels(a.ObservedRMS, a.ObservedLeft)))
	}
	t.Rows = append(t.Rows, all)
	return t
}

func axisTable(x *kinds.Filtered) stage.Section {
	t := stage.Section{
		Title: "Gyro noise before and behind the chain",
		Text:  fmt.Sprintf("root mean square from %.4g to %.4g Hz; predicted: without rotor lines, within the sweep, at the level that is assumed there", x.From, x.To),
		Columns: []stage.Column{{Name: "axis"}, {Name: "recorded, deg/s", Right: true}, {Name: "left", Right: true}, {Name: "cut, dB", Right: true},
			{Name: "predicted, deg/s", Right: true}, {Name: "left", Right: true}, {Name: "cut, dB", Right: true}},
	}
	number := func(format string, v float64) string {
		if math.IsNaN(v) {
			return "–"
		}
		return fmt.Sprintf(format, v)
	}
	for _, a := range x.Axes {
		t.Rows = append(t.Rows, []string{a.Axis, fmt.Sprintf("%.3g", a.ObservedRMS/degree), fmt.Sprintf("%.3g", a.ObservedLeft/degree),
			fmt.Sprintf("%.1f", decibels(a.ObservedRMS, a.ObservedLeft)), number("%.3g", a.PredictedRMS/degree), number("%.3g", a.PredictedLeft/degree),
			number("%.1f", decibels(a.PredictedRMS, a.PredictedLeft))})
	}
	return t
}

// mostTried is the number of chains listed.
const mostTried = 12

func triedTable(x *kinds.Filtered) stage.Section {
	t := stage.Section{
		Title:   "Chains weighed",
		Text:    fmt.Sprintf("those that leave no axis more than %.3g deg/s, by rising lag; the cut-off of a low-pass is the highest that does", x.Target/degree),
		Columns: []stage.Column{{Name: "chain"}, {Name: "filters", Right: true}, {Name: "late, deg", Right: true}, {Name: "left, deg/s", Right: true}},
	}
	for _, c := range x.Tried {
		if c.Met && len(t.Rows) < mostTried {
			t.Rows = append(t.Rows, []string{c.Chain, fmt.Sprint(c.Filters), fmt.Sprintf("%.1f", c.Lag/degree), fmt.Sprintf("%.3g", c.Left/degree)})
		}
	}
	if len(t.Rows) == 0 {
		t.Text = fmt.Sprintf("none of the %d chains weighed leaves so little as %.3g deg/s", len(x.Tried), x.Target/degree)
	}
	return t
}
