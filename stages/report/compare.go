package report

import (
	"fmt"
	"math"
	"strings"

	"hushframe/stages/kinds"
)

// comparisonSection shows which predicted peak is which recorded one.
func comparisonSection(c *kinds.Comparison) *section {
	s := &section{ID: "comparison", Title: "Prediction against recording"}
	s.text(fmt.Sprintf("Compared from %.4g to %.4g Hz, within %.3g %% of frequency. Peaks where a rotor order may lie are masked and not paired.",
		c.From, c.To, 100*c.Reach))
	pairs := &table{Name: "pairs", Title: "Paired peaks",
		About: "The error is predicted over recorded frequency, less one.",
		Columns: []column{{"axis", "", false}, {"predicted", "Hz", true}, {"recorded", "Hz", true}, {"± (one sigma)", "Hz", true}, {"error", "%", true},
			{"confidence", "", true}, {"damping ratio predicted", "%", true}, {"recorded", "%", true}, {"± (one sigma)", "%", true}, {"modes", "", false}}}
	for _, p := range c.Pairs {
		pairs.Rows = append(pairs.Rows, []cell{
			words(p.Axis), number(p.Predicted, 1), number(p.Observed, 1), number(p.ObservedError, 1), signed(100*p.Error, 1), number(p.Confidence, 2),
			percent(p.PredictedDamping, 2), percent(p.ObservedDamping, 2), percent(p.ObservedDampingError, 2), modeList(p.Modes)})
	}
	if len(pairs.Rows) == 0 {
		s.text("No predicted peak could be paired with a recorded one.")
	}
	s.table(pairs)
	verdicts := &table{Name: "peak-verdicts", Title: "What each recorded peak is taken for",
		Columns: []column{{"axis", "", false}, {"frequency", "Hz", true}, {"density", "(deg/s)²/Hz", true}, {"taken for", "", false}, {"because", "", false}}}
	for _, v := range c.Verdicts {
		verdicts.Rows = append(verdicts.Rows, []cell{words(v.Axis), number(v.Frequency, 1), digits(v.Density/square, 3), words(v.Verdict), words(v.Reason)})
	}
	s.table(verdicts)
	s.table(modePairTable(c))
	s.table(lonely("unpaired-peaks", "Peaks without a partner", "", c.Unpaired))
	s.table(lonely("masked-peaks", "Masked peaks", "These lie where a rotor order may be and say nothing certain about the structure.", c.Masked))
	scales := &table{Name: "scale-factors", Title: "Scale factors",
		About:   "One factor per axis on the predicted density, fitted to the recording over the bins that are not masked; the residual is what is left of the difference.",
		Columns: []column{{"axis", "", false}, {"factor", "", true}, {"factor", "dB", true}, {"residual", "dB", true}, {"bins", "", true}}}
	for _, x := range c.Axes {
		scales.Rows = append(scales.Rows, []cell{words(x.Axis), digits(x.Scale, 3), signed(10*math.Log10(x.Scale), 1), number(x.Residual, 1), count(x.Bins)})
	}
	s.table(scales)
	if len(c.Notes) > 0 {
		s.list(c.Notes)
	}
	return s
}

func modeList(modes []int) cell {
	var parts []string
	for _, m := range modes {
		parts = append(parts, fmt.Sprint(m))
	}
	return words(strings.Join(parts, ", "))
}

func lonely(file, title, about string, peaks []kinds.ComparisonPeak) *table {
	t := &table{Name: file, Title: title, About: about,
		Columns: []column{{"side", "", false}, {"axis", "", false}, {"frequency", "Hz", true}, {"density", "(deg/s)²/Hz", true}, {"damping ratio", "%", true}, {"modes", "", false}, {"reason", "", false}}}
	for _, p := range peaks {
		side := p.Side
		if side == kinds.Observed {
			side = "recorded"
		}
		t.Rows = append(t.Rows, []cell{words(side), words(p.Axis), number(p.Frequency, 1), digits(p.Density/square, 3), percent(p.Damping, 2), modeList(p.Modes), words(p.Reason)})
	}
	return t
}

// recordingSection states what the recording is.
func recordingSection(sp *kinds.Spectra) *section {
	s := &section{ID: "recording", Title: "Recording and its health"}
	if len(sp.Findings) > 0 {
		health := &table{Name: "recording-health", Title: "Health of the recording", Columns: []column{{"what", "", false}, {"where", "", false}, {"extent", "", false}, {"consequence", "", false}}}
		for _, f := range sp.Findings {
			health.Rows = append(health.Rows, []cell{words(f.What), words(f.Where), words(f.Extent), words(f.Consequence)})
		}
		s.table(health)
	} else {
		s.text("Nothing was found wrong with the recording.")
	}
	if len(sp.Pieces) > 0 {
		pieces := &table{Name: "pieces", Title: "Pieces of the flight", About: "The spectra come from the pieces that are used.", Columns: []column{{"from", "s", true}, {"to", "s", true}, {"samples", "", true}, {"used", "", false}, {"why", "", false}}}
		for _, p := range sp.Pieces {
			used := words("no")
			if p.Used {
				used = cell{Text: "yes", Raw: "yes", Strong: true}
			}
			pieces.Rows = append(pieces.Rows, []cell{number(p.From, 2), number(p.To, 2), count(p.Samples), used, words(p.Why)})
		}
		s.table(pieces)
	}
	facts := &table{Name: "recording", Title: "What was recorded", Columns: []column{{"what", "", false}, {"value", "", true}, {"unit", "", false}}}
	add := func(name string, c cell, unit string) {
		facts.Rows = append(facts.Rows, []cell{words(name), c, words(unit)})
	}
	add("sample rate", plain(sp.Rate, 7), "Hz")
	add("from", plain(sp.From, 6), "s")
	add("to", plain(sp.To, 6), "s")
	add("samples per axis", count(sp.Samples), "")
	add("gaps", count(sp.Gaps), "")
	add("samples missing in gaps", count(sp.Missing), "")
	jitter := plain(100*sp.Jitter, 2)
	if sp.Jitter < 1e-6 { // of the last digit of the clock, not of the recorder
		jitter.Text = "below 0.0001"
	}
	add("jitter of the sample interval", jitter, "%")
	add("window: "+sp.Window, count(sp.Segment), "samples")
	add("overlap", count(sp.Overlap), "samples")
	add("segments averaged", count(sp.Segments), "")
	add("degrees of freedom of a bin", plain(sp.Freedom, 3), "")
	add("width of a bin", plain(sp.Step, 4), "Hz")
	add("resolution (noise bandwidth)", plain(sp.Resolution, 4), "Hz")
	s.table(facts)

	axes := &table{Name: "recorded-axes", Title: "Channels", Columns: []column{{"axis", "", false}, {"column", "", false}, {"quantity", "", false}, {"unit", "", false},
		{"mean", "", true}, {"rms about it", "", true}, {"largest", "", true}, {"saturated samples", "", true}, {"repeated samples", "%", true}}}
	for _, x := range sp.Axes {
		unit, factor := x.Unit, 1.0
		if unit == "rad/s" {
			unit, factor = "deg/s", 1/degree
		}
		axes.Rows = append(axes.Rows, []cell{words(x.Axis), words(x.Column), words(x.Quantity), words(unit),
			digits(x.Mean*factor, 3), digits(x.Deviation*factor, 3), digits(x.Largest*factor, 3), count(x.Saturated), percent(x.Repeated, 1)})
	}
	s.table(axes)

	rotors := &table{Name: "recorded-rotors", Title: "Rotor speeds", About: "Below the low and above the high speed a rotor ran for one per cent of the time each.",
		Columns: []column{{"rotor", "", false}, {"column", "", false}, {"blades", "", true}, {"median", "rpm", true}, {"low", "rpm", true}, {"high", "rpm", true}}}
	for _, x := range sp.Rotors {
		blades := count(x.Blades)
		if x.Blades == 0 {
			blades = missing()
		}
		rotors.Rows = append(rotors.Rows, []cell{words(x.Rotor), words(x.Column), blades, number(x.Median/rpm, 0), number(x.Low/rpm, 0), number(x.High/rpm, 0)})
	}
	s.table(rotors)

	orders := &table{Name: "recorded-orders", Title: "Where rotor orders lie in the recording", About: "Bands in which an order spends less than 2 % of the time are left out here, but are masked in the comparison.",
		Columns: []column{{"rotor", "", false}, {"order", "", true}, {"remark", "", false}, {"from", "Hz", true}, {"to", "Hz", true}, {"share of the time", "%", true}}}
	const seldom = 0.02
	for _, x := range sp.Orders {
		if x.Share < seldom {
			continue
		}
		var remarks []string
		if x.BladePassing {
			remarks = append(remarks, "blade passing")
		}
		if x.Folded {
			remarks = append(remarks, "folded from above half the sample rate")
		}
		orders.Rows = append(orders.Rows, []cell{words(x.Rotor), plain(x.Order, 4), words(strings.Join(remarks, ", ")), number(x.Low, 1), number(x.High, 1), percent(x.Share, 0)})
	}
	s.table(orders)

	peaks := &table{Name: "recorded-peaks", Title: "Recorded peaks",
		Columns: []column{{"axis", "", false}, {"frequency", "Hz", true}, {"± (one sigma)", "Hz", true}, {"density", "(deg/s)²/Hz", true}, {"stands out", "dB", true},
			{"damping ratio", "%", true}, {"± (one sigma)", "%", true}, {"remark", "", false}}}
	for _, p := range sp.Peaks {
		axis := sp.Axes[p.Axis]
		if axis.Unit != "rad/s" {
			continue
		}
		remark := ""
		if p.Narrow {
			remark = "as narrow as the window"
		}
		peaks.Rows = append(peaks.Rows, []cell{words(axis.Axis), number(p.Frequency, 1), number(p.FrequencyError, 1), digits(p.Density/square, 3),
			number(10*math.Log10(p.Prominence), 1), percent(p.Damping, 2), percent(p.DampingError, 2), words(remark)})
	}
	s.table(peaks)
	return s
}

// modePairTable sets predicted modes against those identified in flight.
func modePairTable(c *kinds.Comparison) *table {
	t := &table{Name: "mode-pairs", Title: "Predicted modes and modes found in flight", About: "Agreement is the squared cosine of the angle between both gyro directions.",
		Columns: []column{{"mode", "", true}, {"predicted", "Hz", true}, {"found", "Hz", true}, {"±", "Hz", true}, {"error", "%", true}, {"agreement", "", true}, {"damping ratio predicted", "%", true}, {"found", "%", true}, {"confidence", "", true}}}
	for _, p := range c.ModePairs {
		t.Rows = append(t.Rows, []cell{count(p.Mode), number(p.Predicted, 1), number(p.Observed, 1), number(p.ObservedError, 2), signed(100*p.Error, 1), number(p.Agreement, 2),
			percent(p.PredictedDamping, 2), percent(p.ObservedDamping, 2), number(p.Confidence, 2)})
	}
	return t
}
