package kinds

import "hushframe/core/pipeline/artifact"

// setVerdicts writes the tables of a comparison that judge peaks and pair modes; decodeVerdicts reads them.
func setVerdicts(a *artifact.Artifact, c *Comparison) {
	a.Table("verdicts").
		Set("axis", list(c.Verdicts, func(x Verdict) string { return x.Axis })).
		Set("frequency", list(c.Verdicts, func(x Verdict) float64 { return x.Frequency })).
		Set("density", list(c.Verdicts, func(x Verdict) float64 { return x.Density })).
		Set("verdict", list(c.Verdicts, func(x Verdict) string { return x.Verdict })).
		Set("reason", list(c.Verdicts, func(x Verdict) string { return x.Reason }))
	pair := func(of func(ModePair) float64) []float64 { return list(c.ModePairs, of) }
	a.Table("mode_pairs").
		Set("mode", list(c.ModePairs, func(x ModePair) int64 { return int64(x.Mode) })).
		Set("predicted", pair(func(x ModePair) float64 { return x.Predicted })).
		Set("observed", pair(func(x ModePair) float64 { return x.Observed })).
		Set("observed_error", pair(func(x ModePair) float64 { return x.ObservedError })).
		Set("error", pair(func(x ModePair) float64 { return x.Error })).
		Set("agreement", pair(func(x ModePair) float64 { return x.Agreement })).
		Set("predicted_damping", pair(func(x ModePair) float64 { return x.PredictedDamping })).
		Set("observed_damping", pair(func(x ModePair) float64 { return x.ObservedDamping })).
		Set("observed_damping_error", pair(func(x ModePair) float64 { return x.ObservedDampingError })).
		Set("damping_ratio", pair(func(x ModePair) float64 { return x.DampingRatio })).
		Set("near_loop", list(c.ModePairs, func(x ModePair) bool { return x.NearLoop })).
		Set("confidence", pair(func(x ModePair) float64 { return x.Confidence }))
	a.Table("modes_alone").
		Set("side", list(c.ModesAlone, func(x ModeAlone) string { return x.Side })).
		Set("mode", list(c.ModesAlone, func(x ModeAlone) int64 { return int64(x.Mode) })).
		Set("frequency", list(c.ModesAlone, func(x ModeAlone) float64 { return x.Frequency })).
		Set("damping", list(c.ModesAlone, func(x ModeAlone) float64 { return x.Damping })).
		Set("direction", list(c.ModesAlone, func(x ModeAlone) []float64 { return x.Direction })).
		Set("strength", list(c.ModesAlone, func(x ModeAlone) float64 { return x.Strength })).
		Set("reason", list(c.ModesAlone, func(x ModeAlone) string { return x.Reason }))
}

func decodeVerdicts(a *artifact.Artifact, c *Comparison) {
	t := a.Table("verdicts")
	for i := range t.Rows() {
		c.Verdicts = append(c.Verdicts, Verdict{t.Texts("axis")[i], t.Floats("frequency")[i], t.Floats("density")[i], t.Texts("verdict")[i], t.Texts("reason")[i]})
	}
	t = a.Table("mode_pairs")
	for i := range t.Rows() {
		c.ModePairs = append(c.ModePairs, ModePair{
			Mode: int(t.Ints("mode")[i]), Predicted: t.Floats("predicted")[i], Observed: t.Floats("observed")[i], ObservedError: t.Floats("observed_error")[i],
			Error: t.Floats("error")[i], Agreement: t.Floats("agreement")[i], PredictedDamping: t.Floats("predicted_damping")[i],
			ObservedDamping: t.Floats("observed_damping")[i], ObservedDampingError: t.Floats("observed_damping_error")[i],
			DampingRatio: t.Floats("damping_ratio")[i], NearLoop: t.Truths("near_loop")[i], Confidence: t.Floats("confidence")[i],
		})
	}
	t = a.Table("modes_alone")
	for i := range t.Rows() {
		c.ModesAlone = append(c.ModesAlone, ModeAlone{
			Side: t.Texts("side")[i], Mode: int(t.Ints("mode")[i]), Frequency: t.Floats("frequency")[i], Damping: t.Floats("damping")[i],
			Direction: t.FloatLists("direction")[i], Strength: t.Floats("strength")[i], Reason: t.Texts("reason")[i],
		})
	}
}
