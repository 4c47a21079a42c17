package compare

import (
	"fmt"
	"slices"
	"strings"

	"hushframe/stages/kinds"
)

// masks chooses the bands to mask: the wanted orders, and blade passing where the number of blades is known from the job,
// the recording or the airframe. It notes what could not be masked.
func masks(predicted *kinds.Response, observed *kinds.Spectra, set settings) (bands []kinds.OrderBand, notes []string) {
	blades := bladeCounts(predicted, observed, set)
	found := map[float64]bool{}
	for _, b := range observed.Orders {
		b.BladePassing = b.BladePassing || slices.Contains(blades, int(b.Order)) && b.Order == float64(int(b.Order))
		if b.BladePassing || slices.Contains(set.orders, b.Order) {
			bands = append(bands, b)
			found[b.Order] = true
		}
	}
	if len(observed.Rotors) == 0 {
		return nil, []string{"no rotor speed was recorded, so no rotor order could be masked: a pair may be an order"}
	}
	if len(blades) == 0 {
		notes = append(notes, "the number of blades is not known, so blade passing could not be masked")
	}
	for _, n := range wanted(set.orders, blades) {
		if !found[n] {
			notes = append(notes, fmt.Sprintf("order %g could not be masked: record did not keep its bands", n))
		}
	}
	return bands, notes
}

// bladeCounts lists the numbers of blades, rising.
func bladeCounts(predicted *kinds.Response, observed *kinds.Spectra, set settings) []int {
	var out []int
	add := func(n int) {
		if n > 0 && !slices.Contains(out, n) {
			out = append(out, n)
		}
	}
	add(set.blades)
	if len(out) == 0 {
		for _, r := range observed.Rotors {
			add(r.Blades)
		}
	}
	if len(out) == 0 {
		for _, r := range predicted.Rotors {
			add(r.Blades)
		}
	}
	slices.Sort(out)
	return out
}

func wanted(orders []float64, blades []int) []float64 {
	out := slices.Clone(orders)
	for _, n := range blades {
		out = append(out, float64(n))
	}
	slices.Sort(out)
	return slices.Compact(out)
}

// holding says which orders may be at a frequency, "" for none: "order 1 of rotors 1, 3; blade passing of rotor 2".
func holding(bands []kinds.OrderBand, f float64) string {
	rotors := map[string][]string{}
	var names []string
	for _, b := range bands {
		if f < b.Low || f > b.High {
			continue
		}
		name := b.Name()
		if rotors[name] == nil {
			names = append(names, name)
		}
		if !slices.Contains(rotors[name], b.Rotor) {
			rotors[name] = append(rotors[name], b.Rotor)
		}
	}
	for i, name := range names {
		word := "rotor"
		if len(rotors[name]) > 1 {
			word = "rotors"
		}
		names[i] = fmt.Sprintf("%s of %s %s", name, word, strings.Join(rotors[name], ", "))
	}
	return strings.Join(names, "; ")
}
