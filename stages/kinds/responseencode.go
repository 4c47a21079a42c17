package kinds

import (
	"math"
	"slices"

	"hushframe/core/pipeline/artifact"
)

// axisCols are three columns named after the axes.
func axisCols(prefix, unit, about string) []artifact.Column {
	var out []artifact.Column
	for _, name := range AxisNames {
		out = append(out, col(prefix+name, artifact.Float, unit, about))
	}
	return out
}

// EncodeResponse makes the artifact.
func EncodeResponse(r *Response) *artifact.Artifact {
	a := artifact.New(ResponseKind)
	a.Scalars = map[string]any{
		"from": r.From, "to": r.To, "modes_to": r.ModesTo, "force_density": r.Force, "moment_density": r.Moment,
		"residual": r.Residual, "thrust": r.Thrust, "blade_share": r.BladeShare, "spinning": r.Spinning,
		"first_mode": r.FirstMode, "gyro_noise": r.GyroNoise,
	}
	t := a.Table("spectrum").Set("frequency", r.Frequency)
	for axis, name := range AxisNames {
		known := func(y []float64) []float64 {
			if y == nil {
				return slices.Repeat([]float64{math.NaN()}, len(r.Frequency))
			}
			return y
		}
		t.Set(name, r.Density[axis]).Set("uncorrected_"+name, r.Uncorrected[axis]).Set("flown_"+name, known(r.Flown[axis])).
			Set("rigid_"+name, known(r.Rigid[axis])).Set("static_"+name, known(r.Static[axis]))
	}
	a.Table("sources").
		Set("rotor", list(r.Sources, func(x ResponseSource) string { return x.Rotor })).
		Set("axis", list(r.Sources, func(x ResponseSource) string { return x.Axis })).
		Set("density", list(r.Sources, func(x ResponseSource) []float64 { return x.Density }))
	a.Table("transfer").
		Set("rotor", list(r.Transfer, func(x ResponseTransfer) string { return x.Rotor })).
		Set("component", list(r.Transfer, func(x ResponseTransfer) int64 { return int64(x.Component) })).
		Set("axis", list(r.Transfer, func(x ResponseTransfer) string { return x.Axis })).
		Set("real", list(r.Transfer, func(x ResponseTransfer) []float64 { return x.Real })).
		Set("imaginary", list(r.Transfer, func(x ResponseTransfer) []float64 { return x.Imaginary }))
	a.Table("axes").
		Set("axis", list(r.Axes, func(x ResponseAxis) string { return x.Axis })).
		Set("rms", list(r.Axes, func(x ResponseAxis) float64 { return x.RMS })).
		Set("correction", list(r.Axes, func(x ResponseAxis) float64 { return x.Correction })).
		Set("correction_at", list(r.Axes, func(x ResponseAxis) float64 { return x.CorrectionAt })).
		Set("give_force", list(r.Axes, func(x ResponseAxis) float64 { return x.GiveForce })).
		Set("give_moment", list(r.Axes, func(x ResponseAxis) float64 { return x.GiveMoment }))
	setResponsePeaks(a.Table("peaks"), r.Peaks)
	a.Table("modes").
		Set("number", list(r.Modes, func(x ResponseMode) int64 { return int64(x.Number) })).
		Set("frequency", list(r.Modes, func(x ResponseMode) float64 { return x.Frequency })).
		Set("damping", list(r.Modes, func(x ResponseMode) float64 { return x.Damping }))
	a.Table("rotors").
		Set("rotor", list(r.Rotors, func(x ResponseRotor) string { return x.Rotor })).
		Set("blades", list(r.Rotors, func(x ResponseRotor) int64 { return int64(x.Blades) })).
		Set("hover", list(r.Rotors, func(x ResponseRotor) float64 { return x.Hover })).
		Set("highest", list(r.Rotors, func(x ResponseRotor) float64 { return x.Highest })).
		Set("speed", list(r.Rotors, func(x ResponseRotor) float64 { return x.Speed })).
		Set("polar", list(r.Rotors, func(x ResponseRotor) float64 { return x.Polar })).
		Set("bell", list(r.Rotors, func(x ResponseRotor) float64 { return x.Bell })).
		Set("propeller", list(r.Rotors, func(x ResponseRotor) float64 { return x.Propeller })).
		Set("tilt", list(r.Rotors, func(x ResponseRotor) float64 { return x.Tilt })).
		Set("equal", list(r.Rotors, func(x ResponseRotor) float64 { return x.Equal }))
	a.Table("speeds").Set("speed", append([]float64{}, r.Speeds...))
	t = a.Table("separations").
		Set("lower", list(r.Separations, func(x ResponseSeparation) int64 { return int64(x.Lower) })).
		Set("upper", list(r.Separations, func(x ResponseSeparation) int64 { return int64(x.Upper) })).
		Set("at", list(r.Separations, func(x ResponseSeparation) float64 { return x.At })).
		Set("gap", list(r.Separations, func(x ResponseSeparation) float64 { return x.Gap })).
		Set("bandwidths", list(r.Separations, func(x ResponseSeparation) float64 { return x.Bandwidths }))
	for axis, name := range AxisNames {
		t.Set("lower_"+name, list(r.Separations, func(x ResponseSeparation) float64 { return x.LowerAlone[axis] })).
			Set("upper_"+name, list(r.Separations, func(x ResponseSeparation) float64 { return x.UpperAlone[axis] })).
			Set("amplification_"+name, list(r.Separations, func(x ResponseSeparation) float64 { return x.Amplification[axis] }))
	}
	a.Table("map_speeds").Set("speed", append([]float64{}, r.MapSpeeds...))
	t = a.Table("map").
		Set("source", list(r.Orders, func(x ResponseOrder) string { return x.Source })).
		Set("order", list(r.Orders, func(x ResponseOrder) float64 { return x.Order })).
		Set("rotors", list(r.Orders, func(x ResponseOrder) []string { return x.Rotors }))
	for axis, name := range AxisNames {
		t.Set(name, list(r.Orders, func(x ResponseOrder) []float64 { return x.Rate[axis] }))
	}
	a.Table("whirl").
		Set("mode", list(r.Whirl, func(x ResponseWhirl) int64 { return int64(x.Mode) })).
		Set("frequency", list(r.Whirl, func(x ResponseWhirl) []float64 { return x.Frequency })).
		Set("damping", list(r.Whirl, func(x ResponseWhirl) []float64 { return x.Damping })).
		Set("direction", list(r.Whirl, func(x ResponseWhirl) []float64 { return x.Direction }))
	a.Table("critical").
		Set("order", list(r.Critical, func(x ResponseCritical) int64 { return int64(x.Order) })).
		Set("rotors", list(r.Critical, func(x ResponseCritical) []string { return x.Rotors })).
		Set("speed", list(r.Critical, func(x ResponseCritical) float64 { return x.Speed })).
		Set("frequency", list(r.Critical, func(x ResponseCritical) float64 { return x.Frequency })).
		Set("damping", list(r.Critical, func(x ResponseCritical) float64 { return x.Damping })).
		Set("direction", list(r.Critical, func(x ResponseCritical) float64 { return x.Direction })).
		Set("mode", list(r.Critical, func(x ResponseCritical) int64 { return int64(x.Mode) }))
	t = a.Table("lines").
		Set("source", list(r.Lines, func(x ResponseLine) string { return x.Source })).
		Set("rotor", list(r.Lines, func(x ResponseLine) string { return x.Rotor })).
		Set("order", list(r.Lines, func(x ResponseLine) float64 { return x.Order })).
		Set("frequency", list(r.Lines, func(x ResponseLine) float64 { return x.Frequency })).
		Set("force", list(r.Lines, func(x ResponseLine) float64 { return x.Force }))
	for axis, name := range AxisNames {
		t.Set(name, list(r.Lines, func(x ResponseLine) float64 { return x.Rate[axis] }))
	}
	a.Table("shapes").
		Set("frequency", list(r.Shapes, func(x ResponseShape) float64 { return x.Frequency })).
		Set("axis", list(r.Shapes, func(x ResponseShape) string { return x.Axis })).
		Set("rotor", list(r.Shapes, func(x ResponseShape) string { return x.Rotor })).
		Set("component", list(r.Shapes, func(x ResponseShape) int64 { return int64(x.Component) })).
		Set("real", list(r.Shapes, func(x ResponseShape) []float64 { return x.Real })).
		Set("imaginary", list(r.Shapes, func(x ResponseShape) []float64 { return x.Imaginary }))
	setOver(a, r)
	setMotion(a, r)
	setCheck(a, r)
	return a
}

func setResponsePeaks(t *artifact.Table, peaks []ResponsePeak) {
	t.Set("axis", list(peaks, func(x ResponsePeak) string { return x.Axis })).
		Set("frequency", list(peaks, func(x ResponsePeak) float64 { return x.Frequency })).
		Set("density", list(peaks, func(x ResponsePeak) float64 { return x.Density })).
		Set("prominence", list(peaks, func(x ResponsePeak) float64 { return x.Prominence })).
		Set("damping", list(peaks, func(x ResponsePeak) float64 { return x.Damping })).
		Set("modes", list(peaks, func(x ResponsePeak) []int64 { return ints(x.Modes) })).
		Set("shares", list(peaks, func(x ResponsePeak) []float64 { return x.Shares })).
		Set("rigid", list(peaks, func(x ResponsePeak) float64 { return x.Rigid })).
		Set("residual", list(peaks, func(x ResponsePeak) float64 { return x.Residual })).
		Set("uncorrected", list(peaks, func(x ResponsePeak) float64 { return x.Uncorrected })).
		Set("rotor", list(peaks, func(x ResponsePeak) string { return x.Rotor })).
		Set("component", list(peaks, func(x ResponsePeak) int64 { return int64(x.Component) })).
		Set("component_share", list(peaks, func(x ResponsePeak) float64 { return x.ComponentShare })).
		Set("mode_shares", list(peaks, func(x ResponsePeak) []float64 { return x.ModeShares })).
		Set("rotor_shares", list(peaks, func(x ResponsePeak) []float64 { return x.RotorShares })).
		Set("losses", list(peaks, func(x ResponsePeak) []string { return x.Losses })).
		Set("loss_shares", list(peaks, func(x ResponsePeak) []float64 { return x.LossShares }))
}
