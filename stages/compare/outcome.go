package compare

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

const degree = math.Pi / 180

// doubtful is the confidence below which a pair is warned of: an alternative is as likely.
const doubtful = 0.5

// outcome sums up a comparison in figures, warnings and tables.
func outcome(c *kinds.Comparison, observed *kinds.Spectra) *stage.Outcome {
	var signed, plain []float64
	least := math.NaN()
	pairs := []any{}
	for _, p := range c.Pairs {
		signed, plain = append(signed, p.Error), append(plain, math.Abs(p.Error))
		if !(p.Confidence >= least) {
			least = p.Confidence
		}
		modes := []any{}
		for _, m := range p.Modes {
			modes = append(modes, float64(m))
		}
		pairs = append(pairs, map[string]any{"axis": p.Axis, "predicted": hertz(p.Predicted), "observed": hertz(p.Observed),
			"error": p.Error, "confidence": p.Confidence, "modes": modes})
	}
	largest := math.NaN()
	if len(plain) > 0 {
		largest = slices.Max(plain)
	}
	o := &stage.Outcome{
		Figures: map[string]any{
			"paired": float64(len(c.Pairs)), "largest_error": largest, "median_error": median(plain), "bias": median(signed),
			"least_confidence":   least,
			"unpaired_predicted": count(c.Unpaired, kinds.Predicted), "unpaired_observed": count(c.Unpaired, kinds.Observed),
			"masked_predicted": count(c.Masked, kinds.Predicted), "masked_observed": count(c.Masked, kinds.Observed),
			"pairs": pairs,
		},
		Notes:    c.Notes,
		Warnings: warnings(c, observed),
		Summary:  append(modeTables(c), pairTable(c), levelTable(c), verdictTable(c)),
	}
	modeFigures(o, c)
	for _, axis := range kinds.AxisNames {
		scale, residual, assurance := math.NaN(), math.NaN(), math.NaN()
		for _, a := range c.Axes {
			if a.Axis == axis {
				scale, residual, assurance = a.Scale, a.Residual, a.Assurance
			}
		}
		o.Figures["scale_"+axis], o.Figures["residual_"+axis], o.Figures["assurance_"+axis] = scale, residual, assurance
	}
	if len(c.Unpaired) > 0 {
		o.Summary = append(o.Summary, aloneTable("Peaks without a partner", c.Unpaired))
	}
	if len(c.Masked) > 0 {
		o.Summary = append(o.Summary, aloneTable("Peaks where a rotor order may be", c.Masked))
	}
	return o
}

func count(peaks []kinds.ComparisonPeak, side string) float64 {
	n := 0
	for _, p := range peaks {
		if p.Side == side {
			n++
		}
	}
	return float64(n)
}

// median is the mean of the two middle values for an even number; NaN for none.
func median(values []float64) float64 {
	if len(values) == 0 {
		return math.NaN()
	}
	s := slices.Clone(values)
	slices.Sort(s)
	return (s[(len(s)-1)/2] + s[len(s)/2]) / 2
}

func warnings(c *kinds.Comparison, observed *kinds.Spectra) []stage.Warning {
	var out []stage.Warning
	if len(c.Pairs) == 0 {
		out = append(out, stage.Warning{ID: "compare.nothing-paired", Text: "no predicted peak has an observed partner",
			Remedy: "see the reasons listed; a wider reach helps if the model is far off"})
	}
	if len(observed.Rotors) == 0 {
		out = append(out, stage.Warning{ID: "compare.no-orders", Text: "no rotor speed was recorded, so a pair may be a rotor order",
			Remedy: "log the rotor speeds"})
	}
	for _, p := range c.Pairs {
		if p.Confidence < doubtful {
			out = append(out, stage.Warning{
				ID: "compare.doubtful-pair", Where: p.Axis,
				Text: fmt.Sprintf("the pair of %.1f Hz predicted and %.1f Hz observed has a confidence of only %.2f", p.Predicted, p.Observed, p.Confidence),
			})
		}
	}
	return out
}

func pairTable(c *kinds.Comparison) stage.Section {
	t := stage.Section{
		Title: "Predicted and observed peaks",
		Text:  fmt.Sprintf("%d pairs from %.4g to %.4g Hz", len(c.Pairs), c.From, c.To),
		Columns: []stage.Column{{Name: "axis"}, {Name: "predicted, Hz", Right: true}, {Name: "observed, Hz", Right: true}, {Name: "±", Right: true},
			{Name: "error, %", Right: true}, {Name: "confidence", Right: true}, {Name: "damping, %", Right: true}, {Name: "observed, %", Right: true}, {Name: "modes"}},
	}
	for _, p := range c.Pairs {
		t.Rows = append(t.Rows, []string{p.Axis, fmt.Sprintf("%.1f", p.Predicted), fmt.Sprintf("%.1f", p.Observed), fmt.Sprintf("%.2f", p.ObservedError),
			fmt.Sprintf("%+.1f", 100*p.Error), fmt.Sprintf("%.2f", p.Confidence), percent(p.PredictedDamping),
			damping(p.ObservedDamping, p.ObservedDampingError), modes(p.Modes)})
	}
	return t
}

func percent(x float64) string {
	if math.IsNaN(x) {
		return "–"
	}
	return fmt.Sprintf("%.2f", 100*x)
}

func damping(x, by float64) string {
	if math.IsNaN(x) {
		return "–"
	}
	return fmt.Sprintf("%.2f ± %.2f", 100*x, 100*by)
}

func modes(numbers []int) string {
	var out []string
	for _, n := range numbers {
		out = append(out, fmt.Sprint(n))
	}
	return strings.Join(out, ", ")
}

func levelTable(c *kinds.Comparison) stage.Section {
	t := stage.Section{
		Title: "Level of the prediction",
		Text:  "one factor per axis on the predicted density, whose source is assumed; fitted outside the masked bands",
		Columns: []stage.Column{{Name: "axis"}, {Name: "factor", Right: true}, {Name: "dB", Right: true}, {Name: "left over, dB", Right: true},
			{Name: "likeness", Right: true}, {Name: "bins", Right: true}},
	}
	for _, a := range c.Axes {
		t.Rows = append(t.Rows, []string{a.Axis, fmt.Sprintf("%.3g", a.Scale), fmt.Sprintf("%+.1f", 10*math.Log10(a.Scale)),
			fmt.Sprintf("%.1f", a.Residual), fmt.Sprintf("%.2f", a.Assurance), fmt.Sprint(a.Bins)})
	}
	return t
}

func aloneTable(title string, peaks []kinds.ComparisonPeak) stage.Section {
	t := stage.Section{
		Title: title,
		Columns: []stage.Column{{Name: "side"}, {Name: "axis"}, {Name: "Hz", Right: true}, {Name: "(deg/s)²/Hz", Right: true},
			{Name: "modes"}, {Name: "why"}},
	}
	for _, p := range peaks {
		t.Rows = append(t.Rows, []string{p.Side, p.Axis, fmt.Sprintf("%.1f", p.Frequency), fmt.Sprintf("%.3g", p.Density/degree/degree), modes(p.Modes), p.Reason})
	}
	return t
}
