package sweep

import (
	"context"
	"math"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

func turning(speed float64) stage.Quantity {
	return stage.Quantity{SI: speed, Dimension: "rotational speed"}
}

func flownAt(throttle, share float64) any {
	return map[string]any{"throttle": throttle, "share": share}
}

func curved(throttleAndSpeed ...float64) []any {
	var out []any
	for k := 0; k < len(throttleAndSpeed); k += 2 {
		out = append(out, map[string]any{"throttle": throttleAndSpeed[k], "speed": turning(throttleAndSpeed[k+1])})
	}
	return out
}

// Throttles stand for the speeds on the straight lines between the points given, in whatever order they stand.
func TestThrottleStandsForSpeed(t *testing.T) {
	m, p := tilting()
	// Halfway from 0.2 to 0.4 is 1500 rad/s, a quarter from 0.4 to 0.8 is 2250.
	throttle, out := run(t, m, p, stage.Arguments{"throttle_flown": []any{flownAt(0.3, 1), flownAt(0.5, 3)}, "speed_at_throttle": curved(0.8, 3000, 0.2, 1000, 0.4, 2000)})
	speeds, _ := run(t, m, p, stage.Arguments{"speeds_flown": []any{map[string]any{"speed": turning(1500), "share": 1.0}, map[string]any{"speed": turning(2250), "share": 3.0}}})
	other, _ := run(t, m, p, nil)
	differ := false
	for axis := range 3 {
		for k, want := range speeds.Flown[axis] {
			if got := throttle.Flown[axis][k]; math.Abs(got/want-1) > 1e-9 {
				t.Fatalf("axis %d at %g Hz: %g, want %g", axis, throttle.Frequency[k], got, want)
			}
			differ = differ || math.Abs(other.Flown[axis][k]/want-1) > 0.5
		}
	}
	if !differ {
		t.Error("the throttle makes no difference, which tests nothing")
	}
	const want = "rotor speed over a flight follows the throttle as told: 0.3 for 25 % (14324 rpm), 0.5 for 75 % (21486 rpm); it is assumed to stray by 3 % about each"
	if notes := strings.Join(out.Notes, "\n"); !strings.Contains(notes, want) {
		t.Errorf("notes %s, want %s", notes, want)
	}
}

// A recording without rotor speeds tells by its throttle: of the pieces in use, or of its window.
func TestRecordedThrottle(t *testing.T) {
	m, p := tilting()
	cells := func(axis int) []kinds.SpectraMapRow {
		cell := func(centre float64, segments int) kinds.SpectraMapRow {
			return kinds.SpectraMapRow{Axis: axis, Against: kinds.MapThrottle, Unit: "1", Centre: centre, Low: centre - 0.01, High: centre + 0.01, Segments: segments, Step: 4, Density: []float64{1}}
		}
		return []kinds.SpectraMapRow{cell(0.3, 20), cell(0.5, 60)}
	}
	for name, s := range map[string]*kinds.Spectra{
		"window": {ChosenBy: "window", Maps: append(cells(0), cells(1)...)},
		"pieces": {ChosenBy: kinds.MapThrottle, Maps: []kinds.SpectraMapRow{{Against: kinds.MapThrottle, Centre: 0.1, Segments: 50, Step: 4, Density: []float64{1}}}, Pieces: []kinds.SpectraPiece{
			{Samples: 900, Level: 0.01}, {Samples: 200, Level: 0.3, Used: true}, {Samples: 400, Level: 0.5, Used: true}, {Samples: 200, Level: 0.5, Used: true}}},
	} {
		s.Axes = []kinds.SpectraAxis{{Density: []float64{1}}, {Density: []float64{1}}}
		r, out := decoded(t, recorded(t, call(t, m, p, stage.Arguments{"speed_at_throttle": curved(0.2, 1000, 0.4, 2000, 0.8, 3000)}), s))
		mean, total := 0.0, 0.0
		for _, x := range r.Flight {
			mean, total = mean+x.Share*x.Speed, total+x.Share
		}
		if want := 0.25*1500 + 0.75*2250; math.Abs(total-1) > 1e-12 || math.Abs(mean-want) > 1 {
			t.Errorf("%s: a mean speed of %g, want %g", name, mean, want)
		}
		if notes := strings.Join(out.Notes, "\n"); !strings.Contains(notes, "follows the throttle as recorded: 0.3 for 25 % (14324 rpm), 0.5 for 75 % (21486 rpm); it is assumed to stray by 3 % about each, and by no less than half the speeds of its class, up to 477 rpm") {
			t.Errorf("%s: notes %s", name, notes)
		}
	}
	// Many levels become few classes that leave no gap between them.
	many := &kinds.Spectra{ChosenBy: kinds.MapThrottle}
	for k := range 100 {
		many.Pieces = append(many.Pieces, kinds.SpectraPiece{Samples: 10, Level: 0.2 + 0.006*float64(k), Used: true})
	}
	many.Pieces = append(many.Pieces, kinds.SpectraPiece{Samples: 10, Level: math.NaN(), Used: true}) // of no weight
	list, width := recordedThrottle(many)
	share, mean := 0.0, 0.0
	for _, x := range list {
		share, mean = share+x.share, mean+x.share*x.throttle
	}
	if len(list) != mostClasses || share != 1000 || math.Abs(mean/share-0.497) > 1e-12 || math.Abs(width-0.0495) > 1e-12 {
		t.Errorf("%d classes, width %g, share %g, mean %g", len(list), width, share, mean/share)
	}
	flown, err := curve{{0, 0}, {1, 2000}}.steered(list, width, "recording")
	if err != nil || math.Abs(flown[0].stray-0.0495*1000) > 1e-9 {
		t.Errorf("%v, %v", flown, err)
	}
}

func TestThrottleRefusals(t *testing.T) {
	m, p := frame()
	line := curved(0.2, 1000, 0.7, 2500)
	one := []any{flownAt(0.3, 1)}
	level := func() *kinds.Spectra {
		return &kinds.Spectra{Axes: []kinds.SpectraAxis{{Density: []float64{1}}}, Maps: []kinds.SpectraMapRow{{Against: kinds.MapThrottle, Centre: 0.9, Segments: 4, Step: 4, Density: []float64{1}}}}
	}
	turns := &kinds.Spectra{Axes: []kinds.SpectraAxis{{Density: []float64{1}}}, Rotors: []kinds.SpectraRotor{{Rotor: "a", Median: 2000, Low: 1990, High: 2010}, {Rotor: "b", Median: 2000, Low: 1990, High: 2010}}}
	for name, x := range map[string]struct {
		change   stage.Arguments
		recorded *kinds.Spectra
		argument string
		says     string
	}{
		"no curve":            {stage.Arguments{"throttle_flown": one}, nil, "throttle_flown", "how fast the rotors turn"},
		"nothing flown":       {stage.Arguments{"speed_at_throttle": line}, nil, "speed_at_throttle", "nothing says"},
		"one point":           {stage.Arguments{"throttle_flown": one, "speed_at_throttle": curved(0.3, 1000)}, nil, "speed_at_throttle", "one point"},
		"twice":               {stage.Arguments{"throttle_flown": one, "speed_at_throttle": curved(0.3, 1000, 0.3, 1100)}, nil, "speed_at_throttle", "two speeds"},
		"falling":             {stage.Arguments{"throttle_flown": one, "speed_at_throttle": curved(0.3, 1000, 0.6, 900)}, nil, "speed_at_throttle", "falls"},
		"beyond the points":   {stage.Arguments{"throttle_flown": []any{flownAt(0.8, 1)}, "speed_at_throttle": line}, nil, "throttle_flown", "throttle of 0.8"},
		"speeds, too":         {stage.Arguments{"throttle_flown": one, "speed_at_throttle": line, "speeds_flown": []any{map[string]any{"speed": turning(1700), "share": 1.0}}}, nil, "throttle_flown", "speeds_flown"},
		"recording, too":      {stage.Arguments{"throttle_flown": one, "speed_at_throttle": line}, level(), "throttle_flown", "recording"},
		"recorded speeds":     {stage.Arguments{"speed_at_throttle": line}, turns, "speed_at_throttle", "count more"},
		"nothing recorded":    {stage.Arguments{"speed_at_throttle": line}, &kinds.Spectra{Axes: []kinds.SpectraAxis{{Density: []float64{1}}}}, "recording", "neither"},
		"recorded beyond":     {stage.Arguments{"speed_at_throttle": line}, level(), "recording", "throttle of 0.9"},
		"throttle, no points": {nil, level(), "recording", "has throttle, but no rotor speeds"},
	} {
		c := call(t, m, p, x.change)
		if x.recorded != nil {
			c = recorded(t, c, x.recorded)
		}
		_, err := Stage{}.Run(context.Background(), c)
		if f := fault.From(err); err == nil || f.Kind != fault.Input || f.Argument != x.argument || f.Remedy == "" || !strings.Contains(f.Error(), x.says) {
			t.Errorf("%s: %v", name, err)
		}
	}
}
