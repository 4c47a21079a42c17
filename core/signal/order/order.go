package order

import (
	"math"
	"slices"
	"sort"
)

// Rotor is one rotor with its recorded speed.
type Rotor struct {
	Name string
	// Speed holds samples of the speed in revolutions per second at equal intervals of time. Samples that are not above
	// zero, or not numbers, count as standing still and have no orders.
	Speed []float64
	// Blades is the number of blades; 0 if it is not known, which leaves out blade passing.
	Blades int
}

// Settings say how bands are made. Rate and Step must be above zero.
type Settings struct {
	// Orders are the multiples wanted of every rotor besides blade passing; nil means 1 and 2.
	Orders []float64
	// Rate is the sample rate of the recording in Hz, about which orders fold.
	Rate float64
	// Step is the width of a cell in Hz, best that of the spectrum's bins.
	Step float64
	// Coverage is the share of the time that the bands of an order hold, 0 to 1; 0 means 0.98.
	Coverage float64
	// Margin widens each band on either side, in Hz; best the resolution of the spectrum.
	Margin float64
}

// Band is a band of frequencies in which an order of a rotor appears.
type Band struct {
	Rotor        string
	Order        float64
	BladePassing bool
	Low, High    float64 // Hz, within 0 to Rate/2
	Share        float64 // of the time with the rotor turning
	Folded       bool    // most of the time in it is above half the sample rate in truth
}

// Contains tells whether a frequency lies in the band.
func (b Band) Contains(f float64) bool { return b.Low <= f && f <= b.High }

// Fold returns where a line at f Hz, not negative, appears when sampled at rate Hz: 0 to rate/2.
func Fold(f, rate float64) float64 { return math.Abs(f - rate*math.Round(f/rate)) }

// Meets returns the frequency in truth, of those that appear at f Hz when sampled at rate Hz, that is nearest to a line at
// line Hz.
func Meets(f, line, rate float64) float64 {
	turn := math.Round(line/rate) * rate
	best := f
	for _, v := range []float64{turn - rate + f, turn - f, turn + f, turn + rate - f} {
		if v > 0 && math.Abs(v-line) < math.Abs(best-line) {
			best = v
		}
	}
	return best
}

// Bands returns the bands of all rotors, in the order of the rotors, then of the orders, then by frequency. A rotor that
// never turns has none.
func Bands(rotors []Rotor, s Settings) []Band {
	if !(s.Rate > 0) || !(s.Step > 0) {
		panic("order: rate and cell width must be above zero")
	}
	coverage := s.Coverage
	if coverage == 0 {
		coverage = 0.98
	}
	var out []Band
	for _, r := range rotors {
		for _, n := range orders(s.Orders, r.Blades) {
			for _, b := range bands(r.Speed, n, coverage, s) {
				b.Rotor, b.Order, b.BladePassing = r.Name, n, r.Blades > 0 && n == float64(r.Blades)
				out = append(out, b)
			}
		}
	}
	return out
}

// orders returns the wanted orders and blade passing, rising and without repeats.
func orders(wanted []float64, blades int) []float64 {
	if wanted == nil {
		wanted = []float64{1, 2}
	}
	out := slices.Clone(wanted)
	if blades > 0 {
		out = append(out, float64(blades))
	}
	slices.Sort(out)
	return slices.Compact(out)
}

func bands(speed []float64, n, coverage float64, s Settings) []Band {
	cells := int(math.Ceil(s.Rate/2/s.Step)) + 1
	count, above := make([]int, cells), make([]int, cells)
	total := 0
	for _, v := range speed {
		if !(v > 0) || math.IsInf(v, 0) {
			continue
		}
		cell := int(math.Round(Fold(n*v, s.Rate) / s.Step))
		cell = min(cell, cells-1)
		count[cell]++
		if n*v > s.Rate/2 {
			above[cell]++
		}
		total++
	}
	if total == 0 {
		return nil
	}
	chosen := fewest(count, int(math.Ceil(coverage*float64(total))))
	reach := s.Step/2 + s.Margin
	var out []Band
	held, folded := 0, 0
	for i, in := range chosen {
		if !in {
			continue
		}
		low, high := float64(i)*s.Step-reach, float64(i)*s.Step+reach
		if len(out) == 0 || low > out[len(out)-1].High {
			out = append(out, Band{Low: max(0, low)})
			held, folded = 0, 0
		}
		held += count[i]
		folded += above[i]
		b := &out[len(out)-1]
		b.High = min(high, s.Rate/2)
		b.Share = float64(held) / float64(total)
		b.Folded = 2*folded > held
	}
	return out
}

// fewest marks the fullest cells that together hold at least that many; of equally full cells the lower ones.
func fewest(count []int, wanted int) []bool {
	by := make([]int, len(count))
	for i := range by {
		by[i] = i
	}
	sort.SliceStable(by, func(a, b int) bool { return count[by[a]] > count[by[b]] })
	out := make([]bool, len(count))
	for held, k := 0, 0; k < len(by) && held < wanted; k++ {
		out[by[k]] = true
		held += count[by[k]]
	}
	return out
}

// Holding returns the indices of the bands that contain a frequency.
func Holding(bands []Band, f float64) []int {
	var out []int
	for i, b := range bands {
		if b.Contains(f) {
			out = append(out, i)
		}
	}
	return out
}
