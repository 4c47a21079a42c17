package identify

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/signal/spectrum"
)

// Settings say what is looked for. From and To must be given; the zero value of everything else means its default.
type Settings struct {
	From, To float64 // band in Hz, 0 < From < To < half the rate
	// Cover is the length of the lags i in seconds; 0 means 3.2 periods of From, cut so that T has at most 300 rows.
	Cover      float64
	Order      int     // highest order of a model; 0 means twice the rank of T, 20 to 120
	Groups     int     // groups of time behind the uncertainty; 0 means 20
	MaxDamping float64 // ζ above which a pole is no mode; 0 means 0.2
	Bands      []Band  // where lines of machines may be
	// Left is the share of the noise that is left at a frequency in Hz where lines were taken out; nil means all.
	Left    func(f float64) float64
	Segment int // samples of a segment of the decomposition; 0 means bins of about From/160
	Threads int

	fixed bool // Order was given
}

// Kind is what a stable pole is taken for.
type Kind string

const (
	Structure Kind = "structure"
	Line      Kind = "line"     // of a machine
	Doubtful  Kind = "doubtful" // too uncertain, or not to be told from a line
)

// Mode is one cluster of stable poles.
type Mode struct {
	Kind                      Kind
	Reason                    string  // why it is a line or doubtful; "" for structure
	Frequency, FrequencyError float64 // Hz, one standard error
	Damping, DampingError     float64 // ζ
	Shape                     []complex128
	Direction                 []float64 // unit vector over the channels, largest component positive
	DirectionError            float64   // standard error of its angle, rad
	Collinearity              float64   // share of the shape that the direction holds, ½ to 1
	Orders                    int       // models that have it
	Share                     float64   // of all models, 0 to 1
	First                     int       // lowest order that has it
	Kurtosis                  float64   // of the band about it; NaN if not known
	// PeakFrequency and PeakDamping are those of the decomposition; NaN where it shows no peak of this shape.
	PeakFrequency, PeakDamping float64
	// Worth is by how much the log-likelihood of the spectra would sink without it; NaN if no model was fitted to them, 0 for a cluster that
	// such a model has no use for.
	Worth float64

	own     scatter // errors within the model that was kept, without what leaving poles out adds
	cluster int     // of the diagram, -1 for none
	lone    bool    // worth too little to be told without a cluster that reaches through the models
}

// Result is what was found.
type Result struct {
	Modes      []Mode // by frequency, also lines and doubtful ones
	Diagram    *Diagram
	Singular   []float64 // of the weighted T
	Spectra    *Decomposition
	Decimation int     // samples of the record per sample analysed
	Rate       float64 // analysed, Hz
	Rows       int     // i
	Order      int     // highest
}

const (
	periods       = 3.2  // of the lowest frequency that the lags cover
	mostRows      = 300  // of T
	near          = 0.03 // distance of stable poles; see distance
	reach         = 0.04 // distance within a cluster
	leastOrder    = 20   // highest order of a record without modes
	mostOrder     = 120
	leastOrders   = 6    // parts of the orders that a cluster must have: one in six
	enoughOrders  = 0.4  // share of the orders that a mode must have
	members       = 8    // of a cluster whose errors are computed
	sureFrequency = 0.01 // largest relative standard error of a mode's frequency
	sureDamping   = 0.3  // and of its damping
	sureAngle     = math.Pi / 12
	beyond        = 1.5 // times these, what leaving poles out may add to the errors
	steadyBelow   = 2.1 // kurtosis below which a band holds a steady line
	analysedRate  = 2.5 // sample rate kept, over To
	agrees        = 2.0 // combined standard errors within which two estimates agree
	sameShape     = 0.8 // least agreement of shapes of one mode
)

// Identify finds the modes of a record. It returns ErrDegenerate, or an error of spectrum.CrossMatrix for a record
// without a whole segment or with values that are not finite.
//
// Models are fitted twice, with all lags and with half of them. Fewer lags know less of narrow neighbours but scatter less:
// where both agree within their errors, the surer one counts, otherwise that of all lags (after O. V. Lepski, On a problem
// of adaptive estimation in Gaussian white noise, Theory Probab. Appl. 35, 1991). Then a model of high order is fitted to
// the spectra; where that succeeds its modes count, and clusters that it has no use for are doubtful.
func Identify(r Record, s Settings) (*Result, error) {
	r.check()
	s = s.filled(r)
	factor := max(1, int(r.Rate/(analysedRate*s.To)))
	thin := centred(Decimate(r, factor))
	if thin.channels() == 0 {
		return nil, &spectrum.ShortError{Longest: longest(r), Segment: 20 * factor}
	}
	out := &Result{Decimation: factor, Rate: thin.Rate}
	var err error
	out.Spectra, err = Singular(r, spectrum.Settings{Rate: r.Rate, Segment: s.Segment, Overlap: s.Segment / 2})
	if err != nil {
		return nil, err
	}
	l := thin.channels()
	out.Rows = max(4, min(int(math.Ceil(s.Cover*thin.Rate)), mostRows/l))
	if longest(thin) < 4*out.Rows {
		return nil, &spectrum.ShortError{Longest: longest(r), Segment: 4 * out.Rows * factor}
	}
	c := Covariances(thin, 2*out.Rows-1, s.Groups, s.Threads)
	if !c.finite() {
		return nil, spectrum.ErrNotFinite
	}
	fine, sub, err := level(c, out.Rows, s, out)
	if err != nil {
		return nil, err
	}
	if half := out.Rows / 2; half >= 8 {
		coarse, _, err := level(c, half, s, nil)
		if err == nil {
			surer(fine, coarse)
		}
	}
	if likely, ok := refine(thin, sub, c, fine, s, out.Order); ok {
		fine = settle(fine, likely)
		rows := map[int]int{-1: -1}
		for i, m := range fine {
			if m.cluster >= 0 {
				rows[m.cluster] = i
			}
		}
		for i := range out.Diagram.Entries {
			e := &out.Diagram.Entries[i]
			e.Mode = rows[e.Mode]
		}
	}
	for i := range fine {
		fine[i].judge(r, s, out.Spectra)
	}
	repeats(fine)
	out.Modes = fine
	return out, nil
}

func (s Settings) filled(r Record) Settings {
	if !(s.From > 0) || !(s.To > s.From) || !(s.To < r.Rate/2) {
		panic("identify: the band must lie between zero and half the sample rate")
	}
	if s.Cover == 0 {
		s.Cover = periods / s.From
	}
	if s.fixed = s.Order > 0; !s.fixed {
		s.Order = mostOrder
	}
	if s.Groups == 0 {
		s.Groups = 20
	}
	if s.MaxDamping == 0 {
		s.MaxDamping = 0.2
	}
	if s.Segment == 0 {
		s.Segment = 64
		for float64(s.Segment) < 160*r.Rate/s.From && 16*s.Segment <= r.samples() {
			s.Segment *= 2
		}
	}
	return s
}

func longest(r Record) int {
	n := 0
	for _, run := range r.Runs {
		n = max(n, len(run[0]))
	}
	return n
}

// centred takes the mean of each channel out of each run.
func centred(r Record) Record {
	out := Record{Rate: r.Rate}
	for _, run := range r.Runs {
		var moved [][]float64
		for _, x := range run {
			mean := 0.0
			for _, v := range x {
				mean += v
			}
			mean /= float64(len(x))
			y := make([]float64, len(x))
			for i, v := range x {
				y[i] = v - mean
			}
			moved = append(moved, y)
		}
		out.Runs = append(out.Runs, moved)
	}
	return out
}

// level finds the modes with i block rows. The diagram is kept in out, if there is one.
func level(c *Covariance, rows int, s Settings, out *Result) ([]Mode, *Subspace, error) {
	sub, err := Decompose(c.Mean(-1), c.Channels, rows, c.Rate, Canonical)
	if err != nil {
		return nil, nil, err
	}
	order := min(s.Order, (rows-1)*c.Channels)
	if !s.fixed {
		order = min(order, max(leastOrder, 2*sub.rank(c.Counts)))
	}
	order &^= 1
	d, models := sub.diagram(order, bounds{s.From, s.To, s.MaxDamping}, near, s.Threads)
	clusters := d.cluster(reach, max(3, len(d.Orders)/leastOrders))
	deltas := changes(c, rows)
	var modes []Mode
	for _, entries := range clusters {
		mode, ok := sub.mode(d, models, entries, deltas)
		if !ok {
			continue
		}
		for _, i := range entries {
			d.Entries[i].Mode = len(modes)
		}
		mode.cluster = len(modes)
		modes = append(modes, mode)
	}
	if out != nil {
		out.Diagram, out.Singular, out.Order = d, sub.Singular, order
	}
	return modes, sub, nil
}

// mode sums up a cluster: frequency and damping are means over members spread over its orders, without the lowest, and the
// shape is that of the surest. Orders far above the rank scatter, so the surest members dominate the means.
func (s *Subspace) mode(d *Diagram, models map[int]*model, entries []int, deltas []*mat.Dense) (Mode, bool) {
	m := Mode{Kind: Structure, Orders: len(entries), First: d.Entries[entries[0]].Order, Kurtosis: math.NaN(), PeakFrequency: math.NaN(), PeakDamping: math.NaN(), Worth: math.NaN()}
	m.Share = float64(len(entries)) / float64(len(d.Orders))
	wanted := 1
	if m.Share >= enoughOrders {
		wanted = members
	}
	var fs, zs, fe, ze []float64
	settled := entries[len(entries)/4:]
	least := math.Inf(1)
	for k := range wanted {
		e := d.Entries[settled[(2*k+1)*len(settled)/(2*wanted)]]
		sure, ok := s.jackknife(models[e.Order], e.Pole, deltas)
		if !ok || !(sure.frequency > 0) || !(sure.damping > 0) {
			continue
		}
		fs, zs = append(fs, e.Frequency), append(zs, e.Damping)
		fe, ze = append(fe, sure.frequency), append(ze, sure.damping)
		if sure.frequency < least {
			least = sure.frequency
			m.DirectionError, m.Shape = sure.angle, e.Shape
			m.Direction, m.Collinearity = Direction(e.Shape)
		}
	}
	if len(fs) == 0 {
		return Mode{}, false
	}
	m.Frequency, m.FrequencyError = pooled(fs, fe)
	m.Damping, m.DampingError = pooled(zs, ze)
	m.own = scatter{m.FrequencyError, m.DampingError, m.DirectionError}
	return m, true
}

// pooled returns the mean of values with weights 1/σ⁴, and its standard error. The values rest on the same record, so their
// errors do not average out: it is the root mean square of σ and of the scatter about the mean, under the same weights.
func pooled(x, sigma []float64) (mean, err float64) {
	sum, square := 0.0, 0.0
	for i, s := range sigma {
		w := 1 / (s * s * s * s)
		sum += w
		mean += w * x[i]
		square += w * (s*s + x[i]*x[i])
	}
	mean /= sum
	return mean, math.Sqrt(max(0, square/sum-mean*mean))
}

// surer replaces fine estimates by coarse ones that agree with them and scatter less. A coarse one with two partners is
// their blend and replaces neither.
func surer(fine, coarse []Mode) {
	same := func(a, b Mode) bool {
		return math.Abs(a.Frequency-b.Frequency) <= agrees*math.Hypot(a.FrequencyError, b.FrequencyError) &&
			math.Abs(a.Damping-b.Damping) <= agrees*math.Hypot(a.DampingError, b.DampingError) && Agreement(a.Shape, b.Shape) >= sameShape
	}
	for _, c := range coarse {
		partner, count := -1, 0
		for i, f := range fine {
			if same(f, c) && f.sure() {
				partner = i
				count++
			}
		}
		if count != 1 || c.FrequencyError >= fine[partner].FrequencyError || c.DampingError >= fine[partner].DampingError {
			continue
		}
		c.Orders, c.First, c.Share, c.cluster = fine[partner].Orders, fine[partner].First, fine[partner].Share, fine[partner].cluster
		fine[partner] = c
	}
}

// sure tells whether the errors are those of a mode.
func (m Mode) sure() bool {
	return m.FrequencyError <= sureFrequency*m.Frequency && m.DampingError <= sureDamping*m.Damping
}

// judge decides the kind and adds what kurtosis and decomposition say.
func (m *Mode) judge(r Record, s Settings, d *Decomposition) {
	width := 2 * m.Damping * m.Frequency
	m.Kurtosis = Kurtosis(r, m.Direction, m.Frequency, max(width, 20/(float64(r.samples())/r.Rate)))
	aside := max(3*m.FrequencyError, 0.02*m.Frequency, 2*d.Step)
	if p, ok := d.PeakNear(m.Frequency-aside, m.Frequency+aside, m.Shape); ok && math.Abs(p.Frequency-m.Frequency) < 2*aside {
		m.PeakFrequency, m.PeakDamping = p.Frequency, p.Damping
	}
	set := func(k Kind, format string, args ...any) { m.Kind, m.Reason = k, fmt.Sprintf(format, args...) }
	switch b, in := band(s.Bands, m.Frequency, width); {
	case in && !b.Removed:
		set(Line, "no wider than the band of a line from %.1f to %.1f Hz", b.Low, b.High)
	case m.Kurtosis < steadyBelow:
		set(Line, "steady in amplitude: kurtosis %.2f, where the response to noise has 3", m.Kurtosis)
	case in:
		set(Doubtful, "narrow, and a line was taken out there, %.1f to %.1f Hz: maybe its remains", b.Low, b.High)
	case m.Worth == 0:
		set(Doubtful, "the spectra are explained as well without it")
	case m.lone && m.Orders == 0:
		set(Doubtful, "models of rising order do not settle on it, and the spectra need it little")
	case m.lone && m.Share < enoughOrders:
		set(Doubtful, "only %.0f %% of the models have it, and the spectra need it little", 100*m.Share)
	case math.IsNaN(m.Worth) && m.Share < enoughOrders:
		set(Doubtful, "only %.0f %% of the models have it", 100*m.Share)
	case !(m.own.frequency <= sureFrequency*m.Frequency):
		set(Doubtful, "its frequency is not sure to %g %%", 100*sureFrequency)
	case !(m.own.damping <= sureDamping*m.Damping):
		set(Doubtful, "its damping is not sure to %g %%", 100*sureDamping)
	case !(m.own.angle <= sureAngle):
		set(Doubtful, "its direction is not sure to %.0f deg", sureAngle*180/math.Pi)
	case !(m.FrequencyError <= beyond*sureFrequency*m.Frequency):
		set(Doubtful, "models with more poles do not hold its frequency to %g %%", 100*beyond*sureFrequency)
	case !(m.DampingError <= beyond*sureDamping*m.Damping):
		set(Doubtful, "models with more poles do not hold its damping to %g %%", 100*beyond*sureDamping)
	case !(m.DirectionError <= beyond*sureAngle):
		set(Doubtful, "models with more poles do not hold its direction to %.0f deg", beyond*sureAngle*180/math.Pi)
	}
}

// band returns the band that may explain a pole at f with a half-power width: one that holds f and is, untouched, at least
// two thirds as wide, or, with its line removed, twice as wide.
func band(bands []Band, f, width float64) (Band, bool) {
	for _, b := range bands {
		if f < b.Low || f > b.High {
			continue
		}
		if most := b.High - b.Low; !b.Removed && width <= 1.5*most || b.Removed && width <= most/2 {
			return b, true
		}
	}
	return Band{}, false
}

// less tells whether a is the less sure of two modes, by worth or by the models that have it; later settles a tie.
func less(a, b *Mode, later bool) bool {
	x, y := a.Worth, b.Worth
	if math.IsNaN(x) || math.IsNaN(y) {
		x, y = float64(a.Orders), float64(b.Orders)
	}
	return x < y || x == y && later
}

// repeats marks the less sure of two modes that cannot be told apart.
func repeats(modes []Mode) {
	for i := range modes {
		for j := range modes {
			a, b := &modes[i], &modes[j]
			if i == j || a.Kind != Structure || b.Kind != Structure || !less(a, b, i > j) {
				continue
			}
			if math.Abs(a.Frequency-b.Frequency) <= agrees*math.Hypot(a.FrequencyError, b.FrequencyError) && Agreement(a.Shape, b.Shape) >= sameShape {
				a.Kind, a.Reason = Doubtful, fmt.Sprintf("not to be told from the surer one at %.1f Hz", b.Frequency)
			}
		}
	}
}
