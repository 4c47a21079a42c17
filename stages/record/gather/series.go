package gather

import (
	"math"
	"slices"

	"hushframe/core/signal/recording"
)

// Series are the samples of channels that share their rows.
type Series struct {
	Time   []float64   // seconds on the time column; from 0 at the stated rate without one
	Values [][]float64 // by channel, in SI
	rows   []int64     // number of each row, from 1; nil for rows that follow each other from first
	first  int64
}

// Len is the number of samples of a channel.
func (s Series) Len() int {
	if len(s.Values) == 0 {
		return len(s.Time)
	}
	return len(s.Values[0])
}

// RowAt is the number of the row of the recording that holds sample i, from 1.
func (s Series) RowAt(i int) int64 {
	if s.rows == nil {
		return s.first + int64(i)
	}
	return s.rows[i]
}

// unbroken tells whether every row of the recording between the first and the last holds a sample.
func (s Series) unbroken() bool {
	n := s.Len()
	return n == 0 || s.RowAt(n-1)-s.RowAt(0) == int64(n-1)
}

// part is samples from up to end, which it shares.
func (s Series) part(from, end int) Series {
	out := Series{Time: s.Time[from:end], first: s.first + int64(from)}
	if s.rows != nil {
		out.rows = s.rows[from:end]
	}
	for _, v := range s.Values {
		out.Values = append(out.Values, v[from:end])
	}
	return out
}

// Cut copies the samples within from to to seconds, both included.
func (s Series) Cut(from, to float64) Series {
	w := within(s.Time, from, to)
	out := s.part(w.First, w.End)
	out.Time = slices.Clone(out.Time)
	for k, v := range out.Values {
		out.Values[k] = slices.Clone(v)
	}
	return out
}

// keep drops the samples that keeps refuses, in place: the values of the series must be its own. Times are not its own and are
// copied. It returns how many were dropped.
func (s *Series) keep(keeps func(i int) bool) int {
	n, kept := s.Len(), 0
	for i := range n {
		if keeps(i) {
			kept++
		}
	}
	if kept == n {
		return 0
	}
	at := make([]int, 0, kept) // the choice is made before values move: keeps may look at them
	for i := range n {
		if keeps(i) {
			at = append(at, i)
		}
	}
	rows := make([]int64, kept)
	for place, i := range at {
		rows[place] = s.RowAt(i)
		for k := range s.Values {
			s.Values[k][place] = s.Values[k][i]
		}
	}
	if s.Time != nil {
		time := make([]float64, kept)
		for place, i := range at {
			time[place] = s.Time[i]
		}
		s.Time = time
	}
	for k := range s.Values {
		s.Values[k] = s.Values[k][:kept:kept]
	}
	s.rows = rows
	return n - kept
}

// mendable is the share of rows whose times may repeat or go back and be left out; more means that the column is no time.
const mendable = 0.01

// mend leaves out rows whose time does not rise above all before it, if these are few. It tells how many and where the first was.
func (s *Series) mend() (dropped int, first int64) {
	last, wrong := math.Inf(-1), 0
	bad := make(map[int]bool)
	for i, t := range s.Time {
		if t > last {
			last = t
			continue
		}
		if wrong++; float64(wrong) > mendable*float64(len(s.Time)) {
			return 0, 0
		}
		if first == 0 {
			first = s.RowAt(i)
		}
		bad[i] = true
	}
	if wrong == 0 {
		return 0, 0
	}
	return s.keep(func(i int) bool { return !bad[i] }), first
}

// Runs cuts the values of one channel at the gaps.
func Runs(values []float64, runs []recording.Run) [][]float64 {
	var out [][]float64
	for _, r := range runs {
		out = append(out, values[r.First:r.End])
	}
	return out
}

// Join is the values of one channel within the runs, one after the other; the values themselves where the runs hold all.
func Join(values []float64, runs []recording.Run) []float64 {
	n := 0
	for _, r := range runs {
		n += r.Len()
	}
	if n == len(values) {
		return values
	}
	out := make([]float64, 0, n)
	for _, r := range runs {
		out = append(out, values[r.First:r.End]...)
	}
	return out
}
