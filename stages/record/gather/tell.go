package gather

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// Notes are facts about what was found, guessed and left out.
func (r *Recording) Notes() []string {
	d := r.Data
	out := append(append([]string{}, r.Header.Notes...), r.Plan.Notes...)
	out = append(out, d.Notes...)
	if d.Partial > 0 {
		out = append(out, fmt.Sprintf("%d rows hold some axes but not all and were left out", d.Partial))
	}
	if left := d.Rows - int64(d.Axes.Len()) - int64(d.Partial); left > 0 && len(d.Findings) == 0 {
		out = append(out, fmt.Sprintf("%d of %d rows hold no sample of the axes", left, d.Rows))
	}
	if d.Epoch {
		out = append(out, "the time column counts from an epoch; times are told from its first row")
	}
	return out
}

// rateTolerance is how far a stated rate may be off the measured one without a word; common practice.
const rateTolerance = 0.01

// Findings are faults of the rows and of the rate that leave the rest usable.
func (r *Recording) Findings(timing recording.Timing) []recording.Finding {
	out := slices.Concat(r.Plan.Findings, r.Data.Findings)
	stated, by, believed := r.Header.Rate, timing.Rate, "the times are believed"
	if r.Data.Rate > 0 {
		by, believed = r.Data.Rate, "that of the job is believed"
	}
	if stated > 0 && math.Abs(stated/by-1) > rateTolerance {
		told := "the times make it"
		if r.Data.Rate > 0 {
			told = "the job states"
		}
		out = append(out, recording.Finding{What: "rate", Extent: fmt.Sprintf("the recording states %.6g Hz, %s %.6g Hz", stated, told, by),
			Consequence: believed + "; every frequency is wrong by that ratio if it is the other"})
	}
	return out
}

// muchJitter is worth a warning; common practice.
const muchJitter = 0.05

// Warnings are findings about units, times and rotor speeds in the window used. The ids begin with the name of the stage.
func (r *Recording) Warnings(stageName string, axes Series, timing recording.Timing) []stage.Warning {
	var out []stage.Warning
	add := func(id, where, remedy, format string, args ...any) {
		out = append(out, stage.Warning{ID: stageName + "." + id, Where: where, Remedy: remedy, Text: fmt.Sprintf(format, args...)})
	}
	for _, text := range append(append([]string{}, r.Plan.Assumed...), r.Data.Assumed...) {
		add("unit-assumed", r.set.File, "state it in units", "%s", text)
	}
	if len(timing.Gaps) > 0 {
		missing := 0
		for _, g := range timing.Gaps {
			missing += g.Missing
		}
		add("gaps", r.set.File, "", "%s with %s missing, the first at %.6g s; no segment straddles one", recording.Count(len(timing.Gaps), "gap"), recording.Count(missing, "sample"),
			axes.Time[timing.Gaps[0].After])
	}
	if timing.Jitter > muchJitter {
		add("jitter", r.set.File, "log at equal steps", "steps between samples differ by %.1f %% (root mean square); lines are blurred and levels lowered towards high frequencies",
			100*timing.Jitter)
	}
	for _, f := range r.Findings(timing) {
		add(strings.ReplaceAll(f.What, " ", "-"), cmp.Or(f.Where, r.set.File), "", "%s; %s", f.Extent, f.Consequence)
	}
	if len(r.Plan.Rotors) == 0 && !r.set.Force {
		add("no-rotor-speed", r.set.File, "log the rotor speeds and name their columns in rotors", "no rotor speed is recorded, so rotor orders cannot be told from structure")
	}
	for i, c := range r.Plan.Rotors {
		if within(r.Data.Rotors[i].Time, timing.Start, timing.End).Len() == 0 {
			add("no-rotor-speed", c.Column, "", "rotor %s has no speed within the times used", c.Name)
		}
	}
	return out
}
