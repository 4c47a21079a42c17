package match

import "math"

// MAC returns the modal assurance criterion of two real mode shapes, weighted by w:
//
//	(Σ w·a·b)² / (Σ w·a² · Σ w·b²)
//
// 0 to 1, whatever their length and sense (R. J. Allemang and D. L. Brown, A correlation coefficient for modal vector
// analysis, Proc. 1st International Modal Analysis Conference, 1982). With the masses of the components as weights it is
// near 0 between any two modes of one structure, since those are orthogonal over the mass; without weights it need not
// be. Nil weights are all 1. NaN when a shape is at rest. It panics on different lengths.
func MAC(a, b, w []float64) float64 {
	if len(a) != len(b) || w != nil && len(w) != len(a) {
		panic("match: shapes of different lengths")
	}
	var ab, aa, bb float64
	for i, x := range a {
		y, m := b[i], 1.0
		if w != nil {
			m = w[i]
		}
		ab += m * x * y
		aa += m * x * x
		bb += m * y * y
	}
	if aa == 0 || bb == 0 {
		return math.NaN()
	}
	return ab * ab / aa / bb
}

// Shapes are the modes of one structure, by rising frequency.
type Shapes struct {
	Frequency []float64   // Hz, above 0
	Motion    [][]float64 // of each mode, at the same points on both sides
}

// TrackOptions say when a mode is taken for the same one. The zero value of each field means its default.
type TrackOptions struct {
	// Least is the MAC below which two modes are not the same; default 0.5: of all that moves like the one, no other
	// mode has as much.
	Least float64
	// Drift weighs the distance of frequencies, (ln f/f')², against 1 - MAC; default 0.1. It decides between modes that
	// look alike, and an octave costs no more than 0.05 of MAC.
	Drift float64
}

// The defaults of TrackOptions.
const (
	DefaultLeast = 0.5
	DefaultDrift = 0.1
)

// Tracked is a mode found on both sides, by its indices.
type Tracked struct {
	Before, After int
	MAC           float64
}

// Tracking says what became of modes.
type Tracking struct {
	Pairs []Tracked // by rising index before
	// Lost are the modes before, New those after, that have no partner; rising.
	Lost, New []int
	// MAC of every mode before (rows) with every mode after, row by row.
	MAC []float64
}

// Track finds the modes before among those after: the pairing of least total cost (1 - MAC) + Drift·(ln f/f')², in which
// a mode without a partner costs 1 - Least, so that no pair has a MAC below Least. Nil weights are all 1; a MAC that is not a
// number counts as 0. It panics on shapes of different lengths.
func Track(before, after Shapes, w []float64, o TrackOptions) Tracking {
	if o.Least == 0 {
		o.Least = DefaultLeast
	}
	if o.Drift == 0 {
		o.Drift = DefaultDrift
	}
	rows, columns := len(before.Motion), len(after.Motion)
	if len(before.Frequency) != rows || len(after.Frequency) != columns {
		panic("match: shapes and frequencies of different numbers")
	}
	out := Tracking{MAC: make([]float64, 0, rows*columns)}
	cost := make([]float64, 0, rows*columns)
	for i, a := range before.Motion {
		for j, b := range after.Motion {
			mac := MAC(a, b, w)
			if math.IsNaN(mac) {
				mac = 0
			}
			d := math.Log(after.Frequency[j] / before.Frequency[i])
			out.MAC, cost = append(out.MAC, mac), append(cost, 1-mac+o.Drift*d*d)
		}
	}
	taken := make([]bool, columns)
	for i, j := range Assign(cost, rows, columns, 1-o.Least) {
		if j < 0 {
			out.Lost = append(out.Lost, i)
			continue
		}
		taken[j] = true
		out.Pairs = append(out.Pairs, Tracked{Before: i, After: j, MAC: out.MAC[i*columns+j]})
	}
	for j, is := range taken {
		if !is {
			out.New = append(out.New, j)
		}
	}
	return out
}
