package kinds

import (
	"fmt"
	"math"

	"hushframe/core/pipeline/artifact"
)

// DecodeResponse reads the artifact; the fault names what contradicts.
func DecodeResponse(a *artifact.Artifact) (*Response, error) {
	if a.Kind.Name != ResponseKind.Name {
		return nil, fmt.Errorf("this is a %s artifact, not %s", a.Kind.Name, ResponseKind.Name)
	}
	r := &Response{
		From: a.Float("from"), To: a.Float("to"), ModesTo: a.Float("modes_to"), Force: a.Float("force_density"),
		Moment: a.Float("moment_density"), Residual: a.Truth("residual"), Thrust: a.Float("thrust"), BladeShare: a.Float("blade_share"),
		Spinning: a.Truth("spinning"), Speeds: a.Table("speeds").Floats("speed"), FirstMode: a.Float("first_mode"), GyroNoise: a.Float("gyro_noise"),
	}
	t := a.Table("spectrum")
	r.Frequency = t.Floats("frequency")
	for axis, name := range AxisNames {
		r.Density[axis], r.Uncorrected[axis] = t.Floats(name), t.Floats("uncorrected_"+name)
		r.Rigid[axis], r.Static[axis] = t.Floats("rigid_"+name), t.Floats("static_"+name)
		if flown := t.Floats("flown_" + name); len(flown) > 0 && !math.IsNaN(flown[0]) {
			r.Flown[axis] = flown
		}
	}
	for k := 1; k < len(r.Frequency); k++ {
		if !(r.Frequency[k] > r.Frequency[k-1]) {
			return nil, malformed("response", "the frequencies of the spectrum do not ascend at row %d", k)
		}
	}
	n := len(r.Frequency)
	t = a.Table("sources")
	for i := range t.Rows() {
		x := ResponseSource{t.Texts("rotor")[i], t.Texts("axis")[i], t.FloatLists("density")[i]}
		if len(x.Density) != n {
			return nil, malformed("response", "the source of rotor %s has %d values over %d frequencies", x.Rotor, len(x.Density), n)
		}
		r.Sources = append(r.Sources, x)
	}
	t = a.Table("transfer")
	for i := range t.Rows() {
		x := ResponseTransfer{t.Texts("rotor")[i], int(t.Ints("component")[i]), t.Texts("axis")[i], t.FloatLists("real")[i], t.FloatLists("imaginary")[i]}
		if len(x.Real) != n || len(x.Imaginary) != n {
			return nil, malformed("response", "a transfer function of rotor %s has %d and %d values over %d frequencies", x.Rotor, len(x.Real), len(x.Imaginary), n)
		}
		if x.Component < 0 || x.Component > 5 {
			return nil, malformed("response", "a transfer function of rotor %s is of component %d", x.Rotor, x.Component)
		}
		r.Transfer = append(r.Transfer, x)
	}
	t = a.Table("axes")
	for i := range t.Rows() {
		r.Axes = append(r.Axes, ResponseAxis{t.Texts("axis")[i], t.Floats("rms")[i], t.Floats("correction")[i], t.Floats("correction_at")[i],
			t.Floats("give_force")[i], t.Floats("give_moment")[i]})
	}
	var err error
	if r.Peaks, err = responsePeaks(a.Table("peaks")); err != nil {
		return nil, err
	}
	t = a.Table("modes")
	for i := range t.Rows() {
		r.Modes = append(r.Modes, ResponseMode{int(t.Ints("number")[i]), t.Floats("frequency")[i], t.Floats("damping")[i]})
	}
	t = a.Table("rotors")
	for i := range t.Rows() {
		r.Rotors = append(r.Rotors, ResponseRotor{t.Texts("rotor")[i], int(t.Ints("blades")[i]), t.Floats("hover")[i], t.Floats("highest")[i],
			t.Floats("speed")[i], t.Floats("polar")[i], t.Floats("tilt")[i], t.Floats("equal")[i],
			t.Floats("bell")[i], t.Floats("propeller")[i]})
	}
	for _, p := range r.Peaks {
		if n, m := len(p.ModeShares), len(p.RotorShares); n > 0 && n != len(r.Modes) || m > 0 && m != len(r.Rotors) {
			return nil, malformed("response", "the peak at %g Hz has shares of %d modes and %d rotors, and not of %d and %d", p.Frequency, len(p.ModeShares), len(p.RotorShares), len(r.Modes), len(r.Rotors))
		}
	}
	t = a.Table("separations")
	for i := range t.Rows() {
		x := ResponseSeparation{Lower: int(t.Ints("lower")[i]), Upper: int(t.Ints("upper")[i]), At: t.Floats("at")[i], Gap: t.Floats("gap")[i], Bandwidths: t.Floats("bandwidths")[i]}
		for axis, name := range AxisNames {
			x.LowerAlone[axis], x.UpperAlone[axis], x.Amplification[axis] = t.Floats("lower_" + name)[i], t.Floats("upper_" + name)[i], t.Floats("amplification_" + name)[i]
		}
		r.Separations = append(r.Separations, x)
	}
	r.MapSpeeds = a.Table("map_speeds").Floats("speed")
	t = a.Table("map")
	for i := range t.Rows() {
		x := ResponseOrder{Source: t.Texts("source")[i], Order: t.Floats("order")[i], Rotors: t.TextLists("rotors")[i]}
		for axis, name := range AxisNames {
			x.Rate[axis] = t.FloatLists(name)[i]
			if len(x.Rate[axis]) != len(r.MapSpeeds) {
				return nil, malformed("response", "%s of order %g has %d values over %d speeds", x.Source, x.Order, len(x.Rate[axis]), len(r.MapSpeeds))
			}
		}
		r.Orders = append(r.Orders, x)
	}
	t = a.Table("whirl")
	for i := range t.Rows() {
		x := ResponseWhirl{int(t.Ints("mode")[i]), t.FloatLists("frequency")[i], t.FloatLists("damping")[i], t.FloatLists("direction")[i]}
		if n := len(r.Speeds); len(x.Frequency) != n || len(x.Damping) != n || len(x.Direction) != n {
			return nil, malformed("response", "the whirl of mode %d has %d frequencies over %d speeds", x.Mode, len(x.Frequency), n)
		}
		r.Whirl = append(r.Whirl, x)
	}
	t = a.Table("critical")
	for i := range t.Rows() {
		r.Critical = append(r.Critical, ResponseCritical{int(t.Ints("order")[i]), t.TextLists("rotors")[i], t.Floats("speed")[i],
			t.Floats("frequency")[i], t.Floats("damping")[i], t.Floats("direction")[i], int(t.Ints("mode")[i])})
	}
	t = a.Table("lines")
	for i := range t.Rows() {
		x := ResponseLine{Source: t.Texts("source")[i], Rotor: t.Texts("rotor")[i], Order: t.Floats("order")[i],
			Frequency: t.Floats("frequency")[i], Force: t.Floats("force")[i]}
		for axis, name := range AxisNames {
			x.Rate[axis] = t.Floats(name)[i]
		}
		r.Lines = append(r.Lines, x)
	}
	t = a.Table("shapes")
	for i := range t.Rows() {
		x := ResponseShape{t.Floats("frequency")[i], t.Texts("axis")[i], t.Texts("rotor")[i], int(t.Ints("component")[i]), t.FloatLists("real")[i], t.FloatLists("imaginary")[i]}
		if len(x.Real) != len(x.Imaginary) || len(x.Real)%3 != 0 {
			return nil, malformed("response", "the shape at %g Hz has %d real and %d imaginary values", x.Frequency, len(x.Real), len(x.Imaginary))
		}
		r.Shapes = append(r.Shapes, x)
	}
	for _, get := range []func(*artifact.Artifact, *Response) error{getOver, getMotion, getCheck} {
		if err := get(a, r); err != nil {
			return nil, err
		}
	}
	return r, nil
}

func responsePeaks(t *artifact.Table) ([]ResponsePeak, error) {
	var out []ResponsePeak
	for i := range t.Rows() {
		x := ResponsePeak{
			Axis: t.Texts("axis")[i], Frequency: t.Floats("frequency")[i], Density: t.Floats("density")[i], Prominence: t.Floats("prominence")[i],
			Damping: t.Floats("damping")[i], Modes: narrow(t.IntLists("modes")[i]), Shares: t.FloatLists("shares")[i],
			Rigid: t.Floats("rigid")[i], Residual: t.Floats("residual")[i], Uncorrected: t.Floats("uncorrected")[i],
			Rotor: t.Texts("rotor")[i], Component: int(t.Ints("component")[i]), ComponentShare: t.Floats("component_share")[i],
			Losses: t.TextLists("losses")[i], LossShares: t.FloatLists("loss_shares")[i],
			ModeShares: t.FloatLists("mode_shares")[i], RotorShares: t.FloatLists("rotor_shares")[i],
		}
		if len(x.Modes) != len(x.Shares) || len(x.Losses) != len(x.LossShares) || x.Component < 0 || x.Component > 5 {
			return nil, malformed("response", "the peak at %g Hz contradicts itself", x.Frequency)
		}
		out = append(out, x)
	}
	return out, nil
}
