package sweep

import (
	"fmt"
	"math"

	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// practice sets facts of the trade against this frame. They are common practice
// without a source (rows H-* of testdata/known) and only orient; a fact that this
// response cannot judge is left out.
func practice(r *kinds.Response) []kinds.ResponsePractice {
	var out []kinds.ResponsePractice
	add := func(name, about, unit string, value, low, high float64) {
		if !math.IsNaN(value) {
			out = append(out, kinds.ResponsePractice{Name: name, About: about, Unit: unit, Value: value, Low: low, High: high, Holds: value >= low*(1-1e-9) && value <= high*(1+1e-9)})
		}
	}
	none := math.Inf(1)
	add("modes reach on", "modes go to 1.5 times the highest swept frequency, and a static residual stands in for the rest", "times", reach(r), 1.5, none) // H-MODES-1.5
	loudest, lowest := math.NaN(), math.NaN()
	most := 0.0
	for _, p := range r.Peaks {
		if p.Density > most {
			most, loudest = p.Density, p.Frequency
		}
		if !(p.Frequency >= lowest) {
			lowest = p.Frequency
		}
	}
	add("structural band", "small frames show their structure between about 100 and 500 Hz: the loudest peak", "Hz", loudest, 100, 500)                                // H-BAND
	add("below 100 Hz", "below about 100 Hz the gyro sees flight and the control loop rather than structure: the lowest peak", "Hz", lowest, 100, none)                // H-BELOW100
	add("number of modes", "a five-inch frame has about 14 modes between 150 and 750 Hz, give or take half", "modes", modeCount(r), 7, 21)                             // H-MODECOUNT
	add("separation", "modes that the gyro feels on one axis lie 20 Hz and more apart, or add up in one broad peak: the smallest gap", "Hz", smallestGap(r), 20, none) // H-SEPARATION
	add("pure modes", "with neighbours 40 Hz and more away a mode looks pure: the most that such neighbours add", "dB", pureness(r), 0, 1)                             // H-PURE
	add("order 1", "unbalance acts between 100 and 600 Hz: the first order at the speed of the rotors", "Hz", firstOrder(r), 100, 600)                                 // H-PROP-1P
	return out
}

// reach is how far the modes go beyond the sweep; not far enough without residual vectors.
func reach(r *kinds.Response) float64 {
	if !r.Residual {
		return 0
	}
	return r.ModesTo / r.To
}

func modeCount(r *kinds.Response) float64 {
	const from, to = 150, 750
	if r.ModesTo < to {
		return math.NaN()
	}
	n := 0.0
	for _, m := range r.Modes {
		if m.Frequency >= from && m.Frequency <= to {
			n++
		}
	}
	return n
}

// felt lists per axis the pairs of neighbours whose quieter one has at least a
// tenth of the amplitude of the loudest motion on the axis.
func felt(r *kinds.Response, visit func(axis int, s *kinds.ResponseSeparation)) {
	for axis := range kinds.AxisNames {
		most := 0.0
		for _, s := range r.Separations {
			most = max(most, s.LowerAlone[axis], s.UpperAlone[axis])
		}
		for k := range r.Separations {
			if s := &r.Separations[k]; min(s.LowerAlone[axis], s.UpperAlone[axis]) >= most/100 {
				visit(axis, s)
			}
		}
	}
}

func smallestGap(r *kinds.Response) float64 {
	gap := math.NaN()
	felt(r, func(_ int, s *kinds.ResponseSeparation) {
		if !(s.Gap >= gap) {
			gap = s.Gap
		}
	})
	return gap
}

func pureness(r *kinds.Response) float64 {
	most := math.NaN()
	felt(r, func(axis int, s *kinds.ResponseSeparation) {
		if x := math.Abs(10 * math.Log10(s.Amplification[axis])); s.Gap >= 40 && !(x <= most) {
			most = x
		}
	})
	return most
}

func firstOrder(r *kinds.Response) float64 {
	if len(r.Rotors) == 0 || !(r.Rotors[0].Speed > 0) {
		return math.NaN()
	}
	return r.Rotors[0].Speed / (2 * math.Pi)
}

func practiceTable(r *kinds.Response) stage.Section {
	s := stage.Section{
		Title:   "Common practice",
		Text:    "rules of thumb of the trade, without a source; a frame may break one and be sound",
		Columns: []stage.Column{{Name: "rule"}, {Name: "says"}, {Name: "here", Right: true}, {Name: "expected", Right: true}, {Name: ""}},
	}
	for _, x := range r.Practice {
		expected := fmt.Sprintf("%.3g to %.3g", x.Low, x.High)
		switch {
		case math.IsInf(x.High, 1):
			expected = fmt.Sprintf("%.3g or more", x.Low)
		case x.Low == 0:
			expected = fmt.Sprintf("%.3g at most", x.High)
		}
		verdict := "holds"
		if !x.Holds {
			verdict = "differs"
		}
		s.Rows = append(s.Rows, []string{x.Name, x.About, fmt.Sprintf("%.3g %s", x.Value, x.Unit), expected, verdict})
	}
	return s
}
