package filter

import (
	"fmt"
	"math"
	"strconv"

	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/filter"
	"hushframe/stages/kinds"
)

// The values that filters have where the job gives none; common practice.
const (
	lowPassQ  = math.Sqrt2 / 2 // Butterworth's: no overshoot in magnitude
	notchQ    = 4
	followQ   = 5
	followLow = 60 // Hz
	mostCount = 8
)

// settings are the arguments.
type settings struct {
	filters         []kinds.FilteredFilter // Type, Frequency, Q, Count, Order; Frequency of a rotor-notch is its lowest centre
	target          float64                // rad/s, NaN if none
	orders          []float64
	notches         int
	rate, bandwidth float64
	band            []float64 // empty or two
}

func read(a stage.Arguments) (settings, error) {
	s := settings{target: math.NaN(), notches: a.Whole("fixed_notches"), rate: a.SI("loop_rate"), bandwidth: a.SI("control_bandwidth"), band: a.SIs("band")}
	if a.Has("residual") {
		s.target = a.SI("residual")
	}
	for i, v := range a.List("follow_orders") {
		n := v.(float64)
		if !(n > 0) || math.IsInf(n, 0) {
			return s, refuse("follow_orders", "order %g at place %d is not above zero", n, i+1).Do("list multiples of the rotor speed such as [1, 2]")
		}
		s.orders = append(s.orders, n)
	}
	switch {
	case !(s.bandwidth < s.rate/4):
		return s, refuse("control_bandwidth", "a control of %g Hz cannot run at %g Hz", s.bandwidth, s.rate).Do("give a bandwidth far below loop_rate")
	case a.Has("band") && len(s.band) != 2:
		return s, refuse("band", "the band has %d frequencies", len(s.band)).Do(`give the lowest and the highest, such as ["80 Hz", "900 Hz"]`)
	case len(s.band) == 2 && !(s.band[1] > s.band[0] && s.band[0] >= 0):
		return s, refuse("band", "the band runs from %g Hz to %g Hz", s.band[0], s.band[1]).Do("make its second frequency higher than the first")
	case !a.Has("filters") && !a.Has("residual"):
		return s, refuse("filters", "there is neither a chain to weigh nor a target to choose one for").Do("give filters, or residual")
	}
	for i, v := range a.List("filters") {
		f, err := one(v.(map[string]any), i+1, s.rate)
		if err != nil {
			return s, err
		}
		s.filters = append(s.filters, f)
	}
	if a.Has("filters") && len(s.filters) == 0 {
		return s, refuse("filters", "the chain has no filter").Do("give at least one, or leave filters out and give residual")
	}
	return s, nil
}

// one reads a filter of the chain; place counts from 1.
func one(m map[string]any, place int, rate float64) (kinds.FilteredFilter, error) {
	f := kinds.FilteredFilter{Type: m["type"].(string), Q: math.NaN(), Count: 1, Order: math.NaN()}
	wrong := func(format string, args ...any) error {
		return refuse("filters", "filter %d, %s: %s", place, f.Type, fmt.Sprintf(format, args...)).
			Do("see hushframe stages filter for what each type takes")
	}
	given := func(name string) (float64, bool) {
		switch v := m[name].(type) {
		case stage.Quantity:
			return v.SI, true
		case float64:
			return v, true
		}
		return 0, false
	}
	at, placed := given("at")
	q, sharp := given("q")
	count, counted := given("count")
	order, ordered := given("order")
	first, follows := f.Type == kinds.FilterFirstOrder, f.Type == kinds.FilterRotorNotch
	f.Frequency = at
	switch {
	case !placed && !follows:
		return f, wrong("it has no frequency; give at")
	case sharp && first:
		return f, wrong("it has no q")
	case counted && !first:
		return f, wrong("only first-order filters are counted")
	case ordered && !follows:
		return f, wrong("it follows no order")
	case counted && count > mostCount:
		return f, wrong("%g in a row are more than %d", count, mostCount)
	case at >= 0.45*rate:
		return f, wrong("%g Hz is too near half the loop's rate of %g Hz", at, rate)
	case sharp && q > 1000:
		return f, wrong("a q of %g is narrower than any filter can hold", q)
	}
	if counted {
		f.Count = int(count)
		if raised := at / math.Sqrt(math.Pow(2, 1/count)-1); raised >= 0.45*rate {
			return f, wrong("%d in a row need cut-offs of %.4g Hz, too near half the loop's rate of %g Hz", f.Count, raised, rate)
		}
	}
	switch f.Type {
	case kinds.FilterLowPass:
		f.Q = lowPassQ
	case kinds.FilterNotch:
		f.Q = notchQ
	case kinds.FilterRotorNotch:
		f.Q, f.Order = followQ, 1
		if !placed {
			f.Frequency = followLow
		}
		if ordered {
			f.Order = order
		}
	}
	if sharp {
		f.Q = q
	}
	return f, nil
}

// build makes the filter that runs.
func build(f kinds.FilteredFilter, rate float64) filter.Filter {
	switch f.Type {
	case kinds.FilterFirstOrder:
		return filter.Filter{Fixed: filter.Cascade(f.Frequency, rate, f.Count)}
	case kinds.FilterLowPass:
		return filter.Filter{Fixed: filter.Chain{filter.LowPass(f.Frequency, f.Q, rate)}}
	case kinds.FilterNotch:
		return filter.Filter{Fixed: filter.Chain{filter.Notch(f.Frequency, f.Q, rate)}}
	}
	return filter.Filter{Follow: &filter.Follower{Order: f.Order, Q: f.Q, Lowest: f.Frequency}}
}

// name says what a filter is.
func name(f kinds.FilteredFilter) string {
	q := " Q " + strconv.FormatFloat(math.Round(100*f.Q)/100, 'g', -1, 64)
	switch f.Type {
	case kinds.FilterFirstOrder:
		if f.Count > 1 {
			return fmt.Sprintf("%d × first-order %.4g Hz", f.Count, f.Frequency)
		}
		return fmt.Sprintf("first-order %.4g Hz", f.Frequency)
	case kinds.FilterRotorNotch:
		return fmt.Sprintf("rotor-notch order %g%s", f.Order, q)
	}
	return fmt.Sprintf("%s %.4g Hz%s", f.Type, f.Frequency, q)
}
