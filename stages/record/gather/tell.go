package gather

import (
	"fmt"

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
	if left := d.Rows - int64(len(d.Axes.Row)) - int64(d.Partial); left > 0 {
		out = append(out, fmt.Sprintf("%d of %d rows hold no sample of the axes", left, d.Rows))
	}
	if d.Epoch {
		out = append(out, "the time column counts from an epoch; times are told from its first row")
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
		add("gaps", r.set.File, "", "%d gaps with %d samples missing, the first at %.6g s; no segment straddles one", len(timing.Gaps), missing,
			axes.Time[timing.Gaps[0].After])
	}
	if timing.Jitter > muchJitter {
		add("jitter", r.set.File, "log at equal steps", "steps between samples differ by %.1f %% (root mean square); lines are blurred and levels lowered towards high frequencies",
			100*timing.Jitter)
	}
	if len(r.Plan.Rotors) == 0 {
		add("no-rotor-speed", r.set.File, "log the rotor speeds and name their columns in rotors", "no rotor speed is recorded, so rotor orders cannot be told from structure")
	}
	for i, c := range r.Plan.Rotors {
		if len(r.Data.Rotors[i].Cut(timing.Start, timing.End).Time) == 0 {
			add("no-rotor-speed", c.Column, "", "rotor %s has no speed within the times used", c.Name)
		}
	}
	return out
}
