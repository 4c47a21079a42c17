package recording

import (
	"errors"
	"math"
	"strings"
	"testing"
)

// Times at 3198.6 Hz rounded to microseconds, two samples lost after every 1118th: the rate is that within runs.
func TestAnalyseWithGaps(t *testing.T) {
	const rate, block = 3198.6, 1118
	var time []float64
	index := 0
	for i := range 10 * block {
		if i > 0 && i%block == 0 {
			index += 2
		}
		time = append(time, 0.864257+math.Round(float64(index)/rate*1e6)*1e-6)
		index++
	}
	got, err := Analyse(time)
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(got.Rate-rate) > 0.01 {
		t.Errorf("rate %g, want %g", got.Rate, rate)
	}
	if len(got.Gaps) != 9 || len(got.Runs) != 10 {
		t.Fatalf("%d gaps, %d runs", len(got.Gaps), len(got.Runs))
	}
	for i, g := range got.Gaps {
		if g.After != (i+1)*block-1 || g.Missing != 2 || math.Abs(g.Length-3/rate) > 2e-6 {
			t.Errorf("gap %d: %+v", i, g)
		}
	}
	if r := got.Runs[9]; r.First != 9*block || r.Len() != block {
		t.Errorf("last run %+v", r)
	}
	// Rounding to 1 µs of a step of 312.6 µs: uniform error of both ends, rms 1/√6 µs.
	if want := 1e-6 / math.Sqrt(6) * rate; math.Abs(got.Jitter-want) > 0.2*want {
		t.Errorf("jitter %g, want about %g", got.Jitter, want)
	}
}

func TestAnalyseRefuses(t *testing.T) {
	for _, c := range []struct {
		name, text string
		time       []float64
		row        int64
	}{
		{"one sample", "do not make a series", []float64{1}, 0},
		{"constant", "never changes", []float64{2, 2, 2}, 0},
		{"repeated", "repeats", []float64{0, 1, 1, 2}, 3},
		{"backwards", "goes back by 0.5 s", []float64{0, 1, 2, 1.5}, 4},
		{"not a number", "not a number", []float64{0, 1, math.NaN(), 3}, 3},
	} {
		_, err := Analyse(c.time)
		var e *Error
		if !errors.As(err, &e) || !strings.Contains(e.Text, c.text) || e.Row != c.row || e.Remedy == "" {
			t.Errorf("%s: %v", c.name, err)
		}
	}
}

func TestSteady(t *testing.T) {
	got := Steady(101, 50)
	if got.Rate != 50 || got.End != 2 || len(got.Runs) != 1 || got.Runs[0].Len() != 101 {
		t.Errorf("%+v", got)
	}
}

func TestInspect(t *testing.T) {
	q := Inspect([]float64{0, 3, 3, 3, 1, 1, 1, -2, -2, 0})
	if q.Max != 3 || q.Min != -2 || q.Saturated != 3 || math.Abs(q.Repeated-5.0/9) > 1e-15 {
		t.Errorf("%+v", q)
	}
	if q = Inspect([]float64{4, 4, 4, 4}); q.Saturated != 0 || q.Repeated != 1 {
		t.Errorf("constant column: %+v", q)
	}
}

func TestErrorPlace(t *testing.T) {
	e := &Error{Row: 7, Line: 9, Byte: 120, Column: "gz", Text: "bad", Remedy: "mend it"}
	if got := e.Error(); got != `line 9, row 7, column "gz": bad; mend it` {
		t.Error(got)
	}
	e.Line = 0
	if got := e.Place(); got != `byte 120, row 7, column "gz"` {
		t.Error(got)
	}
}
