package match

import "math"

// Mode is a mode of either side.
type Mode struct {
	Frequency float64 // Hz, above 0
	Error     float64 // standard error of the frequency, Hz; 0 if not known
	Damping   float64 // ζ; 0 or NaN if not known
	// DampingError is the standard error of ζ; 0 if not known.
	DampingError float64
	// Direction is a real vector over the axes, not all zero; its length and sense mean nothing.
	Direction []float64
	// DirectionError is the standard error of its angle in rad; 0 if not known.
	DirectionError float64
	// Strength says how well the mode can be observed, beside others of its side; 0 if not known, which counts as well.
	Strength float64
}

// ModeOptions are Options with the spread of damping. A peak is seen on one axis at a time, a mode with its whole direction,
// so Turning counts for more. The zero value of each field means its default.
type ModeOptions struct {
	Options
	// DampingSpread is the standard deviation of ln(ζp/ζo) that a prediction of damping is trusted to; default ln 2.
	DampingSpread float64
	// Faint is the strength, over the greatest of its side, at which a mode is as likely missed as seen; default 0.1.
	Faint float64
}

// The defaults of ModeOptions.
const (
	DefaultModeTurning   = 18 // w: directions 60° apart cost as much as the default cut
	DefaultDampingSpread = math.Ln2
	DefaultFaint         = 0.1
)

// Agreement returns the squared cosine of the angle between two real directions, 0 to 1.
func Agreement(a, b []float64) float64 {
	c := cosine(a, b)
	return c * c
}

// Modes pairs modes as Pairs pairs peaks, at a cost of
//
//	d²/s² + w·(1 - cos θ') + (ln(ζp/ζo))²/sζ² - 2·ln v
//
// θ' is the angle between the directions, less its standard error; sζ² the squares of DampingSpread and of the relative error
// of ζ added; v = x²/(x²+Faint²) is how likely a mode of relative strength x is seen, and is that of the predicted mode. It panics as Pairs.
func Modes(predicted, observed []Mode, o ModeOptions) Result {
	if o.Turning == 0 {
		o.Turning = DefaultModeTurning
	}
	o.Options = o.filled()
	if o.DampingSpread == 0 {
		o.DampingSpread = DefaultDampingSpread
	}
	if o.Faint == 0 {
		o.Faint = DefaultFaint
	}
	strongest := 0.0
	for _, p := range predicted {
		strongest = max(strongest, p.Strength)
	}
	peaks := func(modes []Mode) []Peak {
		out := make([]Peak, len(modes))
		for i, m := range modes {
			out[i] = Peak{Frequency: m.Frequency, Error: m.Error, Direction: m.Direction}
		}
		return out
	}
	return pair(peaks(predicted), peaks(observed), o.Options, func(i, j int) float64 {
		return o.modeCost(predicted[i], observed[j], strongest)
	})
}

func (o ModeOptions) modeCost(p, q Mode, strongest float64) float64 {
	d := math.Log(p.Frequency / q.Frequency)
	if math.Abs(d) > o.Reach {
		return math.Inf(1)
	}
	up, uq := p.Error/p.Frequency, q.Error/q.Frequency
	cost := d * d / (o.Tolerance*o.Tolerance + up*up + uq*uq)
	angle := math.Acos(min(1, math.Abs(cosine(p.Direction, q.Direction))))
	cost += o.Turning * (1 - math.Cos(max(0, angle-math.Hypot(p.DirectionError, q.DirectionError))))
	if p.Damping > 0 && q.Damping > 0 {
		l, zp, zq := math.Log(p.Damping/q.Damping), p.DampingError/p.Damping, q.DampingError/q.Damping
		cost += l * l / (o.DampingSpread*o.DampingSpread + zp*zp + zq*zq)
	}
	if p.Strength > 0 && strongest > 0 {
		x := p.Strength / strongest
		cost -= 2 * math.Log(x*x/(x*x+o.Faint*o.Faint))
	}
	return cost
}
