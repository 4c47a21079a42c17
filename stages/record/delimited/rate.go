package delimited

import (
	"bytes"
	"math"
	"slices"
	"strings"
	"unicode"
)

// statedRate looks for the sample rate that the lines above the rows state, by key and value: "sample rate: 2 kHz", "fs,2000",
// "delta_x\t0.0005". It returns Hz, 0 where nothing is stated or, with twice set, where the lines contradict each other.
func statedRate(lines [][]byte, point byte) (found float64, twice bool) {
	for _, line := range lines {
		rate := rateOf(uncomment(line), point)
		switch {
		case rate == 0:
		case found == 0:
			found = rate
		case math.Abs(rate/found-1) > 1e-3:
			return 0, true
		}
	}
	return found, false
}

func rateOf(line []byte, point byte) float64 {
	cut := bytes.IndexAny(line, ":=,;\t|")
	if cut < 0 {
		return 0
	}
	key := strings.FieldsFunc(strings.ToLower(string(line[:cut])), func(r rune) bool { return !unicode.IsLetter(r) })
	words := strings.FieldsFunc(string(line[cut+1:]), func(r rune) bool {
		return unicode.IsSpace(r) || strings.ContainsRune("[]()\"=:;|", r) || r == ',' && point != ','
	})
	if len(words) == 0 {
		return 0
	}
	v, ok := parseFloat([]byte(words[0]), point)
	if !ok || !(v > 0) {
		return 0
	}
	for _, other := range words[1:] {
		if w, ok := parseFloat([]byte(other), point); ok && w != v {
			return 0 // one value per channel, and not the same
		}
	}
	// A unit stands behind the number or at the end of the key.
	unit := key[max(0, len(key)-1):]
	if len(words) > 1 {
		unit = append(unit, strings.ToLower(words[1]))
	}
	factor := func(units map[string]float64) float64 {
		for _, u := range unit {
			if f, ok := units[u]; ok {
				return f
			}
		}
		return 1
	}
	has := func(any ...string) bool {
		return slices.ContainsFunc(any, func(w string) bool { return slices.Contains(key, w) })
	}
	sampling := has("sample", "samples", "sampling")
	switch {
	case has("fs", "samplerate", "odr") || has("rate", "frequency") && (sampling || len(key) == 1 && key[0] == "rate"):
		return v * factor(map[string]float64{"khz": 1e3, "mhz": 1e6})
	case has("dt") || has("delta") && has("x", "t", "time") || sampling && has("interval", "period", "time") || has("time") && has("step"):
		return 1 / (v * factor(map[string]float64{"ms": 1e-3, "us": 1e-6, "µs": 1e-6, "ns": 1e-9}))
	}
	return 0
}
