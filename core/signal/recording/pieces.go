package recording

import (
	"math"
	"slices"
)

// Why a piece of a flight is used or left out.
const (
	PieceSteady   = "steady"
	PieceGround   = "ground"
	PieceTakeOff  = "take-off"
	PieceLanding  = "landing"
	PieceUnsteady = "unsteady"
	PieceShort    = "short" // steady, but not for long enough
)

// Piece is a stretch of a flight of one kind, from a time up to another in seconds, with its mean level.
type Piece struct {
	From, To float64
	Level    float64 // NaN without samples
	Why      string
}

// PieceSettings say what counts as steady. Zero values take the defaults, which are common practice.
type PieceSettings struct {
	Block     float64 // seconds over which the level is averaged first; 0 means 0.25
	Airborne  float64 // share of the usual level in flight above which the frame flies; 0 means 0.6
	Tolerance float64 // largest change of the mean from one second to the next, over the usual level; 0 means 0.05
	Shortest  float64 // seconds of the shortest steady piece; 0 means 2
	TakeOff   float64 // seconds left out after a take-off; 0 means 2
	Landing   float64 // seconds left out before a landing; 0 means 1
}

func (s PieceSettings) filled() PieceSettings {
	set := func(v *float64, usual float64) {
		if *v == 0 {
			*v = usual
		}
	}
	set(&s.Block, 0.25)
	set(&s.Airborne, 0.6)
	set(&s.Tolerance, 0.05)
	set(&s.Shortest, 2)
	set(&s.TakeOff, 2)
	set(&s.Landing, 1)
	return s
}

// mostBlocks bounds what a time column with wild steps can ask for: about three days of quarter seconds.
const mostBlocks = 1 << 20

// Pieces cuts the time from start to end (s) by a level that says how hard the rotors work: their speed or the throttle,
// given by one or more series, each with its own rising times, whose block means are averaged. The usual level is the median of
// what exceeds half of the level that is reached for a twentieth of the time. Pieces are in order and cover the whole; none
// is returned where no level is above zero or the blocks would be too many.
func Pieces(time, level [][]float64, start, end float64, settings PieceSettings) []Piece {
	s := settings.filled()
	if !(end > start) || (end-start)/s.Block > mostBlocks {
		return nil
	}
	blocks := max(1, int((end-start)/s.Block))
	means := blockMeans(time, level, start, (end-start)/float64(blocks), blocks)
	usual := usualLevel(means)
	if !(usual > 0) {
		return nil
	}
	width := (end - start) / float64(blocks)
	kinds := classifyBlocks(means, usual, width, s)
	var out []Piece
	for i := 0; i < blocks; {
		j := i
		sum, count := 0.0, 0.0
		for ; j < blocks && kinds[j] == kinds[i]; j++ {
			if !math.IsNaN(means[j]) {
				sum, count = sum+means[j], count+1
			}
		}
		p := Piece{From: start + float64(i)*width, To: start + float64(j)*width, Level: sum / count, Why: kinds[i]}
		if j == blocks {
			p.To = end
		}
		if p.Why == PieceSteady && p.To-p.From < s.Shortest {
			p.Why = PieceShort
		}
		out = append(out, p)
		i = j
	}
	return out
}

func blockMeans(time, level [][]float64, start, width float64, blocks int) []float64 {
	total, series := make([]float64, blocks), make([]float64, blocks)
	for k := range time {
		sum, count := make([]float64, blocks), make([]float64, blocks)
		for i, t := range time[k] {
			b := int((t - start) / width)
			if v := level[k][i]; t >= start && b <= blocks && !math.IsNaN(v) {
				b = min(b, blocks-1)
				sum[b] += math.Abs(v)
				count[b]++
			}
		}
		for b := range sum {
			if count[b] > 0 {
				total[b] += sum[b] / count[b]
				series[b]++
			}
		}
	}
	for b := range total {
		total[b] /= series[b] // NaN where no series has a sample
	}
	return total
}

func usualLevel(means []float64) float64 {
	var known []float64
	for _, v := range means {
		if !math.IsNaN(v) {
			known = append(known, v)
		}
	}
	if len(known) == 0 {
		return 0
	}
	slices.Sort(known)
	high := known[len(known)-1-len(known)/20]
	at, _ := slices.BinarySearch(known, high/2) // at most the place of high
	return known[(at+len(known)-1)/2]
}

func classifyBlocks(means []float64, usual, width float64, s PieceSettings) []string {
	n := len(means)
	kinds := make([]string, n)
	for i, v := range means {
		switch {
		case math.IsNaN(v):
			kinds[i] = PieceUnsteady
		case v < s.Airborne*usual:
			kinds[i] = PieceGround
		default:
			kinds[i] = PieceSteady
		}
	}
	second := max(1, int(math.Round(1/width)))
	mean := func(from, to int) float64 {
		sum, count := 0.0, 0.0
		for i := max(0, from); i < min(n, to); i++ {
			if kinds[i] != PieceGround && !math.IsNaN(means[i]) {
				sum, count = sum+means[i], count+1
			}
		}
		return sum / count
	}
	out := slices.Clone(kinds)
	for i := range out {
		if kinds[i] == PieceSteady {
			if before, after := mean(i-second, i+1), mean(i, i+1+second); math.Abs(after-before) > s.Tolerance*usual {
				out[i] = PieceUnsteady
			}
		}
	}
	mark := func(from, to int, why string) {
		for i := max(0, from); i < min(n, to) && i >= 0; i++ {
			if out[i] != PieceGround {
				out[i] = why
			}
		}
	}
	for i := 1; i < n; i++ {
		switch {
		case kinds[i-1] == PieceGround && kinds[i] != PieceGround:
			mark(i, i+int(math.Ceil(s.TakeOff/width)), PieceTakeOff)
		case kinds[i-1] != PieceGround && kinds[i] == PieceGround:
			mark(i-int(math.Ceil(s.Landing/width)), i, PieceLanding)
		}
	}
	return out
}

// Cover cuts runs down to the given stretches of indices, First to End-1 each, in order; what is left out makes no gap.
func Cover(runs, stretches []Run) []Run {
	var out []Run
	for _, r := range runs {
		for _, s := range stretches {
			if c := (Run{max(r.First, s.First), min(r.End, s.End)}); c.Len() > 0 {
				out = append(out, c)
			}
		}
	}
	return out
}

// Within restricts a timing to stretches of its samples: runs are cut, gaps outside are dropped, and samples are counted anew.
// Rate and jitter stay those of the whole.
func (t Timing) Within(stretches []Run) Timing {
	out := t
	out.Runs, out.Gaps, out.Samples = Cover(t.Runs, stretches), nil, 0
	for _, r := range out.Runs {
		out.Samples += r.Len()
	}
	for _, g := range t.Gaps {
		for _, s := range stretches {
			if s.First <= g.After && g.After+1 < s.End {
				out.Gaps = append(out.Gaps, g)
			}
		}
	}
	return out
}
