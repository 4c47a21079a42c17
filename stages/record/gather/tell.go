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
	if r.Plan.Time != "" && r.Data.Rate == 0 && timing.Rate < slowGyro && r.Plan.Axes[0].Of == AngularRate {
		out = append(out, recording.Finding{What: "unit", Where: r.Plan.Time, Consequence: "every frequency is wrong if so",
			Extent: fmt.Sprintf("the times make the rate %.4g Hz, too slow for a gyro: they may be in another unit", timing.Rate)})
	}
	return out
}

// slowGyro is less than any gyro is recorded at to hear a frame, Hz; common practice.
const slowGyro = 20.0

// SpikesDo is the consequence of spikes.
const SpikesDo = "raise the density at all frequencies and hide modes; mend them or leave these times out, unless they are true blows"

// StandOut says how many samples are spikes.
func StandOut(n int) string {
	verb := "stand"
	if n == 1 {
		verb = "stands"
	}
	return recording.Count(n, "sample") + " " + verb + " out from those beside"
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
	for i, c := range r.Plan.Axes {
		if r.set.Force { // a blow is what is wanted
			break
		}
		if spikes := recording.FindSpikes(Join(axes.Values[i], timing.Runs)); len(spikes.At) > 0 {
			add("spikes", c.Column, "", "%s, the first at %.6g s, with %.3g %% of the mean square; they %s", StandOut(len(spikes.At)),
				Join(axes.Time, timing.Runs)[spikes.At[0]], 100*spikes.Share, SpikesDo)
		}
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
