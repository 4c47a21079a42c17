package kinds

import "hushframe/core/pipeline/artifact"

// FilteredKind is what `filter` says of a chain of filters: what each one buys at the gyro and what it costs the loop.
var FilteredKind = artifact.Kind{
	Name: "filtered", Version: 1,
	About: "a chain of filters for the gyro: its response and delay, and what it leaves of the observed and the predicted spectra",
	Scalars: []artifact.Column{
		col("rate", artifact.Float, "Hz", "sample rate of the loop that runs the filters"),
		col("bandwidth", artifact.Float, "Hz", "bandwidth of the control at which delay and lag count"),
		col("from", artifact.Float, "Hz", "lower end of the band whose residual counts"),
		col("to", artifact.Float, "Hz", "upper end of the band whose residual counts"),
		col("lag", artifact.Float, "rad", "phase by which the whole chain is late at the bandwidth"),
		col("delay", artifact.Float, "s", "lag over the angular frequency of the bandwidth: the phase delay there"),
		col("group_delay", artifact.Float, "s", "how late the chain passes a slow change of a tone at the bandwidth"),
		col("gain", artifact.Float, "1", "magnitude of the response at the bandwidth"),
		col("target", artifact.Float, "rad/s", "root mean square to be left on every axis; NaN if none was asked for"),
		col("chosen", artifact.Truth, "", "the chain was chosen to meet the target, not given"),
		col("met", artifact.Truth, "", "the target is met on every axis; true without one"),
	},
	Tables: []artifact.TableSpec{
		{Name: "filters", About: "the filters, in the order of the chain", Columns: columns(
			col("name", artifact.Text, "", "what it is, with its numbers"),
			col("type", artifact.Text, "", "first-order, low-pass, notch or rotor-notch"),
			col("frequency", artifact.Float, "Hz", "cut-off or centre; of a rotor-notch the mean centre over the time"),
			col("q", artifact.Float, "1", "NaN for first-order"),
			col("count", artifact.Int, "", "equal filters in a row; of a rotor-notch the rotors"),
			col("order", artifact.Float, "1", "multiple of the rotor speeds that a rotor-notch follows, NaN for others"),
			col("lag", artifact.Float, "rad", "phase by which it is late at the bandwidth"),
			col("delay", artifact.Float, "s", "the same as phase delay"),
			col("group_delay", artifact.Float, "s", "group delay at the bandwidth"),
			col("gain", artifact.Float, "1", "magnitude at the bandwidth"),
			col("buys", artifact.FloatList, "dB", "by axis: how much more of the observed residual would be left without this filter alone, in power"),
			col("power", artifact.FloatList, "1", "mean of the squared magnitude over the time, at the frequencies of curves"),
		)},
		{Name: "curves", About: "the whole chain over frequency, one row per frequency", Columns: columns(
			col("frequency", artifact.Float, "Hz", ""),
			col("power", artifact.Float, "1", "mean of the squared magnitude over the time"),
			col("lag", artifact.Float, "rad", "phase by which it is late, at the mean speeds of the rotors"),
			col("group_delay", artifact.Float, "s", "at the mean speeds of the rotors"),
		)},
		{Name: "axes", About: "spectra before and behind the chain, over the frequencies of curves", Columns: columns(
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("observed", artifact.FloatList, "(rad/s)^2/Hz", "recorded density"),
			col("observed_after", artifact.FloatList, "(rad/s)^2/Hz", "the same behind the chain"),
			col("predicted", artifact.FloatList, "(rad/s)^2/Hz", "predicted density; empty if no prediction was given, NaN outside the sweep"),
			col("predicted_after", artifact.FloatList, "(rad/s)^2/Hz", "the same behind the chain"),
			col("observed_rms", artifact.Float, "rad/s", "root mean square of the recorded density within the band"),
			col("observed_left", artifact.Float, "rad/s", "the same behind the chain"),
			col("predicted_rms", artifact.Float, "rad/s", "root mean square of the predicted density within band and sweep; NaN if none was given"),
			col("predicted_left", artifact.Float, "rad/s", "the same behind the chain"),
		)},
		{Name: "tried", About: "chains weighed against the target, by rising lag; empty without a target", Columns: columns(
			col("chain", artifact.Text, "", "its filters"),
			col("filters", artifact.Int, "", "how many"),
			col("lag", artifact.Float, "rad", "at the bandwidth"),
			col("left", artifact.Float, "rad/s", "largest root mean square left on an axis"),
			col("met", artifact.Truth, "", "whether that meets the target"),
		)},
		{Name: "notes", About: "what a reader should know", Columns: columns(col("text", artifact.Text, "", ""))},
	},
}

// Filtered is the content of a filtered artifact. The descriptions of FilteredKind hold.
type Filtered struct {
	Rate, Bandwidth, From, To    float64
	Lag, Delay, GroupDelay, Gain float64
	Target                       float64
	Chosen, Met                  bool

	Filters []FilteredFilter
	Curves  []FilteredCurve
	Axes    []FilteredAxis
	Tried   []FilteredTrial
	Notes   []string
}

// The types of a filter.
const (
	FilterFirstOrder = "first-order"
	FilterLowPass    = "low-pass"
	FilterNotch      = "notch"
	FilterRotorNotch = "rotor-notch"
)

// FilteredFilter is one filter of the chain.
type FilteredFilter struct {
	Name, Type                   string
	Frequency, Q                 float64
	Count                        int
	Order                        float64
	Lag, Delay, GroupDelay, Gain float64
	Buys, Power                  []float64
}

// FilteredCurve is the chain at one frequency.
type FilteredCurve struct{ Frequency, Power, Lag, GroupDelay float64 }

// FilteredAxis is one axis before and behind the chain.
type FilteredAxis struct {
	Axis                        string
	Observed, ObservedAfter     []float64
	Predicted, PredictedAfter   []float64
	ObservedRMS, ObservedLeft   float64
	PredictedRMS, PredictedLeft float64
}

// FilteredTrial is a chain that was weighed.
type FilteredTrial struct {
	Chain     string
	Filters   int
	Lag, Left float64
	Met       bool
}

// EncodeFiltered makes the artifact.
func EncodeFiltered(x *Filtered) *artifact.Artifact {
	a := artifact.New(FilteredKind)
	a.Scalars = map[string]any{
		"rate": x.Rate, "bandwidth": x.Bandwidth, "from": x.From, "to": x.To, "lag": x.Lag, "delay": x.Delay, "group_delay": x.GroupDelay, "gain": x.Gain,
		"target": x.Target, "chosen": x.Chosen, "met": x.Met,
	}
	filter := func(of func(FilteredFilter) float64) []float64 { return list(x.Filters, of) }
	a.Table("filters").
		Set("name", list(x.Filters, func(f FilteredFilter) string { return f.Name })).
		Set("type", list(x.Filters, func(f FilteredFilter) string { return f.Type })).
		Set("frequency", filter(func(f FilteredFilter) float64 { return f.Frequency })).
		Set("q", filter(func(f FilteredFilter) float64 { return f.Q })).
		Set("count", list(x.Filters, func(f FilteredFilter) int64 { return int64(f.Count) })).
		Set("order", filter(func(f FilteredFilter) float64 { return f.Order })).
		Set("lag", filter(func(f FilteredFilter) float64 { return f.Lag })).
		Set("delay", filter(func(f FilteredFilter) float64 { return f.Delay })).
		Set("group_delay", filter(func(f FilteredFilter) float64 { return f.GroupDelay })).
		Set("gain", filter(func(f FilteredFilter) float64 { return f.Gain })).
		Set("buys", list(x.Filters, func(f FilteredFilter) []float64 { return f.Buys })).
		Set("power", list(x.Filters, func(f FilteredFilter) []float64 { return f.Power }))
	a.Table("curves").
		Set("frequency", list(x.Curves, func(c FilteredCurve) float64 { return c.Frequency })).
		Set("power", list(x.Curves, func(c FilteredCurve) float64 { return c.Power })).
		Set("lag", list(x.Curves, func(c FilteredCurve) float64 { return c.Lag })).
		Set("group_delay", list(x.Curves, func(c FilteredCurve) float64 { return c.GroupDelay }))
	a.Table("axes").
		Set("axis", list(x.Axes, func(c FilteredAxis) string { return c.Axis })).
		Set("observed", list(x.Axes, func(c FilteredAxis) []float64 { return c.Observed })).
		Set("observed_after", list(x.Axes, func(c FilteredAxis) []float64 { return c.ObservedAfter })).
		Set("predicted", list(x.Axes, func(c FilteredAxis) []float64 { return c.Predicted })).
		Set("predicted_after", list(x.Axes, func(c FilteredAxis) []float64 { return c.PredictedAfter })).
		Set("observed_rms", list(x.Axes, func(c FilteredAxis) float64 { return c.ObservedRMS })).
		Set("observed_left", list(x.Axes, func(c FilteredAxis) float64 { return c.ObservedLeft })).
		Set("predicted_rms", list(x.Axes, func(c FilteredAxis) float64 { return c.PredictedRMS })).
		Set("predicted_left", list(x.Axes, func(c FilteredAxis) float64 { return c.PredictedLeft }))
	a.Table("tried").
		Set("chain", list(x.Tried, func(c FilteredTrial) string { return c.Chain })).
		Set("filters", list(x.Tried, func(c FilteredTrial) int64 { return int64(c.Filters) })).
		Set("lag", list(x.Tried, func(c FilteredTrial) float64 { return c.Lag })).
		Set("left", list(x.Tried, func(c FilteredTrial) float64 { return c.Left })).
		Set("met", list(x.Tried, func(c FilteredTrial) bool { return c.Met }))
	a.Table("notes").Set("text", append([]string{}, x.Notes...))
	return a
}

// DecodeFiltered reads the artifact; the fault names what does not fit together.
func DecodeFiltered(a *artifact.Artifact) (*Filtered, error) {
	if a.Kind.Name != FilteredKind.Name {
		return nil, malformed("filtered", "this is a %s artifact", a.Kind.Name)
	}
	x := &Filtered{
		Rate: a.Float("rate"), Bandwidth: a.Float("bandwidth"), From: a.Float("from"), To: a.Float("to"), Lag: a.Float("lag"), Delay: a.Float("delay"),
		GroupDelay: a.Float("group_delay"), Gain: a.Float("gain"), Target: a.Float("target"), Chosen: a.Truth("chosen"), Met: a.Truth("met"),
		Notes: a.Table("notes").Texts("text"),
	}
	t := a.Table("curves")
	for i := range t.Rows() {
		x.Curves = append(x.Curves, FilteredCurve{t.Floats("frequency")[i], t.Floats("power")[i], t.Floats("lag")[i], t.Floats("group_delay")[i]})
	}
	n := len(x.Curves)
	t = a.Table("axes")
	for i := range t.Rows() {
		c := FilteredAxis{
			Axis: t.Texts("axis")[i], Observed: t.FloatLists("observed")[i], ObservedAfter: t.FloatLists("observed_after")[i],
			Predicted: t.FloatLists("predicted")[i], PredictedAfter: t.FloatLists("predicted_after")[i],
			ObservedRMS: t.Floats("observed_rms")[i], ObservedLeft: t.Floats("observed_left")[i],
			PredictedRMS: t.Floats("predicted_rms")[i], PredictedLeft: t.Floats("predicted_left")[i],
		}
		if len(c.Observed) != n || len(c.ObservedAfter) != n || len(c.PredictedAfter) != len(c.Predicted) || len(c.Predicted) != 0 && len(c.Predicted) != n {
			return nil, malformed("filtered", "the curves of %s do not fit %d frequencies", c.Axis, n)
		}
		x.Axes = append(x.Axes, c)
	}
	t = a.Table("filters")
	for i := range t.Rows() {
		f := FilteredFilter{
			Name: t.Texts("name")[i], Type: t.Texts("type")[i], Frequency: t.Floats("frequency")[i], Q: t.Floats("q")[i], Count: int(t.Ints("count")[i]),
			Order: t.Floats("order")[i], Lag: t.Floats("lag")[i], Delay: t.Floats("delay")[i], GroupDelay: t.Floats("group_delay")[i],
			Gain: t.Floats("gain")[i], Buys: t.FloatLists("buys")[i], Power: t.FloatLists("power")[i],
		}
		if len(f.Power) != n || len(f.Buys) != len(x.Axes) {
			return nil, malformed("filtered", "filter %s does not fit %d frequencies and %d axes", f.Name, n, len(x.Axes))
		}
		x.Filters = append(x.Filters, f)
	}
	t = a.Table("tried")
	for i := range t.Rows() {
		x.Tried = append(x.Tried, FilteredTrial{t.Texts("chain")[i], int(t.Ints("filters")[i]), t.Floats("lag")[i], t.Floats("left")[i], t.Truths("met")[i]})
	}
	return x, nil
}
