package impact

import (
	"math"
	"slices"
)

// Settings say what counts as a strike. Zero values take the defaults, which are common practice.
type Settings struct {
	Rate     float64 // samples per second
	Segment  int     // samples of a segment
	Before   int     // samples of it before the pulse begins; 0 means a hundredth, at least four
	Level    float64 // share of the greatest force above which a pulse is a strike; 0 means 0.2
	Rebound  float64 // share of its own peak above which a second pulse makes a strike double; 0 means 0.05
	Longest  float64 // seconds of the longest pulse; 0 means 0.02
	Overload float64 // force at and above which the sensor is at its limit; 0 for none
}

func (s Settings) filled() Settings {
	if s.Before == 0 {
		s.Before = max(4, s.Segment/100)
	}
	if s.Level == 0 {
		s.Level = 0.2
	}
	if s.Rebound == 0 {
		s.Rebound = 0.05
	}
	if s.Longest == 0 {
		s.Longest = 0.02
	}
	return s
}

// Why a strike is not used.
const (
	Used       = ""
	Double     = "double"     // the force comes back within the segment
	Long       = "long"       // the pulse is too long for a strike
	Overloaded = "overloaded" // the sensor was at its limit
	NoRoom     = "no room"    // the segment reaches beyond the run
	Early      = "early"      // the strike before has not died out: its segment is not over
	noiseShare = 6            // standard deviations of the force before a strike, below which nothing is a rebound
	pulseEnd   = 0.02         // share of the peak at which a pulse is over
)

// Strike is one pulse of force within a run.
type Strike struct {
	First int     // first sample of its segment
	Begin int     // first sample of the pulse
	Peak  int     // its highest sample
	End   int     // first sample after the pulse
	Force float64 // at the peak, with its sign
	Why   string  // Used, or why it is not
}

// Find returns the strikes of a run of force. Force has its mean taken out, as the median of the whole, before it is judged. It panics
// unless Rate > 0 and Segment is at least 16.
func Find(force []float64, settings Settings) []Strike {
	if !(settings.Rate > 0) || settings.Segment < 16 {
		panic("impact: a rate above zero and a segment of at least 16 samples are needed")
	}
	s := settings.filled()
	base := median(force)
	greatest := 0.0
	for _, v := range force {
		greatest = max(greatest, math.Abs(v-base))
	}
	if greatest == 0 {
		return nil
	}
	var out []Strike
	for i := 0; i < len(force); {
		if math.Abs(force[i]-base) < s.Level*greatest {
			i++
			continue
		}
		k := pulse(force, base, i, s)
		k.judge(force, base, s, out)
		out = append(out, k)
		// A rebound belongs to this strike; another strike may follow a segment later, or sooner and be early.
		i = k.End
		if k.Why == Double {
			i = max(i, min(len(force), k.First+s.Segment))
		}
	}
	return out
}

// pulse describes the pulse that stands above the level at sample i.
func pulse(force []float64, base float64, i int, s Settings) Strike {
	k := Strike{Peak: i}
	limit := min(len(force), i+1+int(s.Longest*s.Rate))
	sign := math.Copysign(1, force[i]-base)
	for j := i; j < limit && sign*(force[j]-base) > 0; j++ {
		if math.Abs(force[j]-base) > math.Abs(force[k.Peak]-base) {
			k.Peak = j
		}
	}
	k.Force = force[k.Peak] - base
	over := func(j int) bool { return sign*(force[j]-base) > pulseEnd*math.Abs(k.Force) }
	k.Begin, k.End = k.Peak, k.Peak+1
	for k.Begin > 0 && over(k.Begin-1) {
		k.Begin--
	}
	for k.End < len(force) && over(k.End) {
		k.End++
	}
	k.First = k.Begin - s.Before
	return k
}

func (k *Strike) judge(force []float64, base float64, s Settings, before []Strike) {
	last := k.First + s.Segment
	switch {
	case k.First < 0 || last > len(force):
		k.Why = NoRoom
		return
	case len(before) > 0 && k.First < before[len(before)-1].First+s.Segment:
		k.Why = Early
		return
	case float64(k.End-k.Begin) > s.Longest*s.Rate:
		k.Why = Long
		return
	case s.Overload > 0 && math.Abs(k.Force) >= s.Overload:
		k.Why = Overloaded
		return
	}
	mean, square := 0.0, 0.0
	for _, v := range force[k.First:k.Begin] {
		mean += v / float64(k.Begin-k.First)
	}
	for _, v := range force[k.First:k.Begin] {
		square += (v - mean) * (v - mean) / float64(k.Begin-k.First)
	}
	limit := max(s.Rebound*math.Abs(k.Force), noiseShare*math.Sqrt(square))
	// The tail of a filtered pulse swings on for about its own length.
	for j := k.End + 2*(k.End-k.Begin); j < last; j++ {
		if math.Abs(force[j]-mean) > limit {
			k.Why = Double
			return
		}
	}
}

// Cut gives the segments of force and response of a strike, ready to be transformed without another window: means before the strike are
// taken out, the force is zero after twice its pulse, and both decay by exp(-t/τ). τ in seconds; 0 for no decay.
func (k Strike) Cut(force, response []float64, tau float64, settings Settings) (f, x []float64) {
	s := settings.filled()
	f, x = make([]float64, s.Segment), make([]float64, s.Segment)
	n := float64(k.Begin - k.First)
	meanF, meanX := 0.0, 0.0
	for i := k.First; i < k.Begin; i++ {
		meanF += force[i] / n
		meanX += response[i] / n
	}
	silent := k.End + 2*(k.End-k.Begin)
	for i := range f {
		at := k.First + i
		w := 1.0
		if t := float64(at-k.Begin) / s.Rate; tau > 0 && t > 0 {
			w = math.Exp(-t / tau)
		}
		x[i] = w * (response[at] - meanX)
		if at < silent {
			f[i] = w * (force[at] - meanF)
		}
	}
	return f, x
}

// Damping takes what an exponential window of time constant τ adds off a damping ratio seen at f Hz; τ of 0 adds nothing.
func Damping(seen, f, tau float64) float64 {
	if tau == 0 {
		return seen
	}
	return seen - 1/(tau*2*math.Pi*f)
}

func median(values []float64) float64 {
	sorted := slices.Clone(values)
	slices.Sort(sorted)
	if len(sorted) == 0 {
		return 0
	}
	return sorted[len(sorted)/2]
}
