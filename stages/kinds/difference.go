package kinds

import "hushframe/core/pipeline/artifact"

// DifferenceKind is what `contrast` makes of two states of a frame, before and after a change.
var DifferenceKind = artifact.Kind{
	Name: "difference", Version: 1,
	About: "what a change did: modes followed by their shapes, response in bands, at peaks and lines, and mass",
	Scalars: []artifact.Column{
		col("shared_before", artifact.Float, "1", "part of the mass before at points that both have, where shapes were laid over each other; NaN if they were not"),
		col("shared_after", artifact.Float, "1", "the same after"),
		col("mass_before", artifact.Float, "kg", "all-up mass; NaN if not known"),
		col("mass_after", artifact.Float, "kg", "all-up mass; NaN if not known"),
		col("from", artifact.Float, "Hz", "lower end of what both responses sweep; NaN without"),
		col("to", artifact.Float, "Hz", "upper end"),
	},
	Tables: []artifact.TableSpec{
		{Name: "modes", About: "modes that both have, by frequency before", Columns: columns(
			col("before", artifact.Int, "", "number of the elastic mode before"),
			col("after", artifact.Int, "", "its number after"),
			col("frequency_before", artifact.Float, "Hz", "natural frequency"),
			col("frequency_after", artifact.Float, "Hz", "natural frequency"),
			col("assurance", artifact.Float, "1", "modal assurance criterion over the mass, 0 to 1"),
			col("damping_before", artifact.Float, "1", "damping ratio"),
			col("damping_after", artifact.Float, "1", "damping ratio"),
			axisCols("strength_before_", "rad/s per N", "gyro strength"),
			axisCols("strength_after_", "rad/s per N", "gyro strength"),
			col("part", artifact.Text, "", "part, joint or mount with the greatest strain energy before"),
			col("motion", artifact.Text, "", "its greatest kind of strain energy before"),
		)},
		{Name: "alone", About: "modes without a partner", Columns: columns(
			col("side", artifact.Text, "", "before: lost; after: new"),
			col("number", artifact.Int, "", "number of the elastic mode"),
			col("frequency", artifact.Float, "Hz", "natural frequency"),
			col("nearest", artifact.Int, "", "the mode of the other side most like it; 0 for none"),
			col("assurance", artifact.Float, "1", "how like, 0 to 1"),
			col("spanned", artifact.Float, "1", "how much of its motion the modes of the other side make together, 0 to 1"),
			col("reason", artifact.Text, "", "why it is alone"),
		)},
		{Name: "unshared", About: "parts and bodies with mass that only one side has, which the comparison of shapes leaves out", Columns: columns(
			col("side", artifact.Text, "", "before or after"),
			col("name", artifact.Text, "", "name"),
		)},
		{Name: "spectrum", About: "gyro rate under the broadband source, over the frequencies of both", Columns: columns(
			col("frequency", artifact.Float, "Hz", "ascending, not evenly spaced"),
			axisCols("before_", "(rad/s)^2/Hz", "one-sided power spectral density"),
			axisCols("after_", "(rad/s)^2/Hz", "one-sided power spectral density"),
		)},
		{Name: "bands", About: "root mean square of the rate in third-octave bands, then in the whole range, by axis", Columns: columns(
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("from", artifact.Float, "Hz", "lower end"),
			col("to", artifact.Float, "Hz", "upper end"),
			col("whole", artifact.Truth, "", "the whole range that both sweep"),
			col("before", artifact.Float, "rad/s", "root mean square"),
			col("after", artifact.Float, "rad/s", "root mean square"),
			col("change", artifact.Float, "dB", "20 log10 of after over before"),
		)},
		{Name: "peaks", About: "peaks of the response by axis and frequency; NaN and empty on the side that lacks one", Columns: columns(
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("frequency_before", artifact.Float, "Hz", ""),
			col("frequency_after", artifact.Float, "Hz", ""),
			col("density_before", artifact.Float, "(rad/s)^2/Hz", "at the peak"),
			col("density_after", artifact.Float, "(rad/s)^2/Hz", "at the peak"),
			col("change", artifact.Float, "dB", "10 log10 of after over before"),
			col("modes_before", artifact.IntList, "", "elastic modes that make the peak, the strongest first"),
			col("modes_after", artifact.IntList, "", "the same after"),
		)},
		{Name: "lines", About: "gyro rate at the rotor lines at hover, rotors of equal frequency together", Columns: columns(
			col("source", artifact.Text, "", "what drives the line"),
			col("order", artifact.Float, "1", "multiple of the rotor's speed"),
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("frequency_before", artifact.Float, "Hz", ""),
			col("frequency_after", artifact.Float, "Hz", ""),
			col("before", artifact.Float, "rad/s", "peak amplitude"),
			col("after", artifact.Float, "rad/s", "peak amplitude"),
			col("change", artifact.Float, "dB", "20 log10 of after over before"),
		)},
		{Name: "masses", About: "what carries mass on either side", Columns: columns(
			col("name", artifact.Text, "", "name"),
			col("kind", artifact.Text, "", "part or body"),
			col("before", artifact.Float, "kg", "0 if only the other side has it"),
			col("after", artifact.Float, "kg", "the same"),
		)},
	},
}

// The sides of a Difference.
const (
	Before = "before"
	After  = "after"
)

// Difference is the content of a difference artifact; the descriptions of DifferenceKind hold.
type Difference struct {
	SharedBefore, SharedAfter float64
	MassBefore, MassAfter     float64
	From, To                  float64

	Modes    []ModeChange
	Alone    []ModeWithout
	Unshared []Unshared
	// Frequency and Density (of before and after, by axis) are empty without responses.
	Frequency []float64
	Density   [2][3][]float64
	Bands     []BandChange
	Peaks     []PeakChange
	Lines     []LineChange
	Masses    []MassChange
}

// ModeChange is a mode that both sides have; the pairs are before and after.
type ModeChange struct {
	Number             [2]int
	Frequency, Damping [2]float64
	Assurance          float64
	Strength           [2][3]float64
	Part, Motion       string
}

// ModeWithout is a mode that only one side has.
type ModeWithout struct {
	Side                          string
	Number, Nearest               int
	Frequency, Assurance, Spanned float64
	Reason                        string
}

// Unshared is a part or body of one side.
type Unshared struct{ Side, Name string }

// BandChange is the rate of one axis in one band.
type BandChange struct {
	Axis     string
	From, To float64
	Whole    bool
	RMS      [2]float64
	Change   float64
}

// PeakChange is a peak of one axis.
type PeakChange struct {
	Axis               string
	Frequency, Density [2]float64
	Change             float64
	Modes              [2][]int
}

// LineChange is a line of the rotors on one axis.
type LineChange struct {
	Source          string
	Order           float64
	Axis            string
	Frequency, Rate [2]float64
	Change          float64
}

// MassChange is what a part or body weighs.
type MassChange struct {
	Name, Kind string
	Mass       [2]float64
}

// Whole gives the change over the whole range on an axis; false without responses.
func (d *Difference) Whole(axis string) (BandChange, bool) {
	for _, b := range d.Bands {
		if b.Whole && b.Axis == axis {
			return b, true
		}
	}
	return BandChange{}, false
}

var sides = [2]string{Before, After}

// EncodeDifference makes the artifact.
func EncodeDifference(d *Difference) *artifact.Artifact {
	a := artifact.New(DifferenceKind)
	a.Scalars = map[string]any{
		"shared_before": d.SharedBefore, "shared_after": d.SharedAfter, "mass_before": d.MassBefore, "mass_after": d.MassAfter,
		"from": d.From, "to": d.To,
	}
	t := a.Table("modes").
		Set("assurance", list(d.Modes, func(x ModeChange) float64 { return x.Assurance })).
		Set("part", list(d.Modes, func(x ModeChange) string { return x.Part })).
		Set("motion", list(d.Modes, func(x ModeChange) string { return x.Motion }))
	for k, side := range sides {
		t.Set(side, list(d.Modes, func(x ModeChange) int64 { return int64(x.Number[k]) })).
			Set("frequency_"+side, list(d.Modes, func(x ModeChange) float64 { return x.Frequency[k] })).
			Set("damping_"+side, list(d.Modes, func(x ModeChange) float64 { return x.Damping[k] }))
		for axis, name := range AxisNames {
			t.Set("strength_"+side+"_"+name, list(d.Modes, func(x ModeChange) float64 { return x.Strength[k][axis] }))
		}
	}
	a.Table("alone").
		Set("side", list(d.Alone, func(x ModeWithout) string { return x.Side })).
		Set("number", list(d.Alone, func(x ModeWithout) int64 { return int64(x.Number) })).
		Set("frequency", list(d.Alone, func(x ModeWithout) float64 { return x.Frequency })).
		Set("nearest", list(d.Alone, func(x ModeWithout) int64 { return int64(x.Nearest) })).
		Set("assurance", list(d.Alone, func(x ModeWithout) float64 { return x.Assurance })).
		Set("spanned", list(d.Alone, func(x ModeWithout) float64 { return x.Spanned })).
		Set("reason", list(d.Alone, func(x ModeWithout) string { return x.Reason }))
	a.Table("unshared").
		Set("side", list(d.Unshared, func(x Unshared) string { return x.Side })).
		Set("name", list(d.Unshared, func(x Unshared) string { return x.Name }))
	t = a.Table("spectrum").Set("frequency", d.Frequency)
	for k, side := range sides {
		for axis, name := range AxisNames {
			t.Set(side+"_"+name, d.Density[k][axis])
		}
	}
	t = a.Table("bands").
		Set("axis", list(d.Bands, func(x BandChange) string { return x.Axis })).
		Set("from", list(d.Bands, func(x BandChange) float64 { return x.From })).
		Set("to", list(d.Bands, func(x BandChange) float64 { return x.To })).
		Set("whole", list(d.Bands, func(x BandChange) bool { return x.Whole })).
		Set("change", list(d.Bands, func(x BandChange) float64 { return x.Change }))
	for k, side := range sides {
		t.Set(side, list(d.Bands, func(x BandChange) float64 { return x.RMS[k] }))
	}
	t = a.Table("peaks").
		Set("axis", list(d.Peaks, func(x PeakChange) string { return x.Axis })).
		Set("change", list(d.Peaks, func(x PeakChange) float64 { return x.Change }))
	for k, side := range sides {
		t.Set("frequency_"+side, list(d.Peaks, func(x PeakChange) float64 { return x.Frequency[k] })).
			Set("density_"+side, list(d.Peaks, func(x PeakChange) float64 { return x.Density[k] })).
			Set("modes_"+side, list(d.Peaks, func(x PeakChange) []int64 { return ints(x.Modes[k]) }))
	}
	t = a.Table("lines").
		Set("source", list(d.Lines, func(x LineChange) string { return x.Source })).
		Set("order", list(d.Lines, func(x LineChange) float64 { return x.Order })).
		Set("axis", list(d.Lines, func(x LineChange) string { return x.Axis })).
		Set("change", list(d.Lines, func(x LineChange) float64 { return x.Change }))
	for k, side := range sides {
		t.Set("frequency_"+side, list(d.Lines, func(x LineChange) float64 { return x.Frequency[k] })).
			Set(side, list(d.Lines, func(x LineChange) float64 { return x.Rate[k] }))
	}
	t = a.Table("masses").
		Set("name", list(d.Masses, func(x MassChange) string { return x.Name })).
		Set("kind", list(d.Masses, func(x MassChange) string { return x.Kind }))
	for k, side := range sides {
		t.Set(side, list(d.Masses, func(x MassChange) float64 { return x.Mass[k] }))
	}
	return a
}

// DecodeDifference reads the artifact; the fault names what contradicts.
func DecodeDifference(a *artifact.Artifact) (*Difference, error) {
	d := &Difference{
		SharedBefore: a.Float("shared_before"), SharedAfter: a.Float("shared_after"), MassBefore: a.Float("mass_before"), MassAfter: a.Float("mass_after"),
		From: a.Float("from"), To: a.Float("to"),
	}
	t := a.Table("modes")
	both := func(name string, i int) [2]float64 {
		return [2]float64{t.Floats(name + Before)[i], t.Floats(name + After)[i]}
	}
	for i := range t.Rows() {
		x := ModeChange{Number: [2]int{int(t.Ints(Before)[i]), int(t.Ints(After)[i])}, Frequency: both("frequency_", i), Damping: both("damping_", i),
			Assurance: t.Floats("assurance")[i], Part: t.Texts("part")[i], Motion: t.Texts("motion")[i]}
		for k, side := range sides {
			for axis, name := range AxisNames {
				x.Strength[k][axis] = t.Floats("strength_" + side + "_" + name)[i]
			}
		}
		d.Modes = append(d.Modes, x)
	}
	t = a.Table("alone")
	for i := range t.Rows() {
		x := ModeWithout{Side: t.Texts("side")[i], Number: int(t.Ints("number")[i]), Frequency: t.Floats("frequency")[i], Nearest: int(t.Ints("nearest")[i]),
			Assurance: t.Floats("assurance")[i], Spanned: t.Floats("spanned")[i], Reason: t.Texts("reason")[i]}
		if x.Side != Before && x.Side != After {
			return nil, malformed("difference", "a mode is of the side %q", x.Side)
		}
		d.Alone = append(d.Alone, x)
	}
	t = a.Table("unshared")
	for i := range t.Rows() {
		d.Unshared = append(d.Unshared, Unshared{t.Texts("side")[i], t.Texts("name")[i]})
	}
	t = a.Table("spectrum")
	if d.Frequency = t.Floats("frequency"); len(d.Frequency) == 0 {
		d.Frequency = nil
	}
	for k, side := range sides {
		for axis, name := range AxisNames {
			if d.Frequency != nil {
				d.Density[k][axis] = t.Floats(side + "_" + name)
			}
		}
	}
	t = a.Table("bands")
	for i := range t.Rows() {
		d.Bands = append(d.Bands, BandChange{t.Texts("axis")[i], t.Floats("from")[i], t.Floats("to")[i], t.Truths("whole")[i], both("", i), t.Floats("change")[i]})
	}
	t = a.Table("peaks")
	for i := range t.Rows() {
		d.Peaks = append(d.Peaks, PeakChange{t.Texts("axis")[i], both("frequency_", i), both("density_", i), t.Floats("change")[i],
			[2][]int{plainInts(t.IntLists("modes_before")[i]), plainInts(t.IntLists("modes_after")[i])}})
	}
	t = a.Table("lines")
	for i := range t.Rows() {
		d.Lines = append(d.Lines, LineChange{t.Texts("source")[i], t.Floats("order")[i], t.Texts("axis")[i], both("frequency_", i), both("", i), t.Floats("change")[i]})
	}
	t = a.Table("masses")
	for i := range t.Rows() {
		d.Masses = append(d.Masses, MassChange{t.Texts("name")[i], t.Texts("kind")[i], both("", i)})
	}
	return d, nil
}

func plainInts(s []int64) []int { return each(len(s), func(i int) int { return int(s[i]) }) }
