package delimited

import (
	"context"
	"math"
	"strings"
	"testing"

	"hushframe/core/signal/recording"
)

func TestStamps(t *testing.T) {
	for text, want := range map[string]float64{ // seconds and nanoseconds as one number
		"00:00:01.5": 1.5, "7:05:09": 25509, "12:34:56.789012345": 45296.789012345, "23:59:60": 86400, "12:00:00,25": 43200.25,
		"1970-01-01T00:00:10Z": 10, "1970-01-02 00:00:00.125": 86400.125, "1970-01-01T01:00:00+01:00": 0, "1970-01-01T00:00:00-0130": 5400,
	} {
		s, n, dated, ok := parseStamp([]byte(text))
		if got := float64(s) + float64(n)/1e9; !ok || math.Abs(got-want) > 1e-9 || dated != strings.Contains(text, "-") {
			t.Errorf("%s: %g %v %v", text, got, dated, ok)
		}
	}
	for _, text := range []string{"", "12:34", "12:34:5x", "12:61:00", "25:00:00", "12:34:56.", "12:34:56Z", "2026-13-01T00:00:00", "2026-01-01T00:00", "1:2:3:4:5:6", "12:34:56+01:00", "2026-01-01T00:00:00+1"} {
		if s, n, _, ok := parseStamp([]byte(text)); ok {
			t.Errorf("%q is taken for %d s %d ns", text, s, n)
		}
	}
}

// Times of day count from the first and pass midnight; what is no time of day in such a column is told with its line.
func TestStampColumn(t *testing.T) {
	got, err := readAll(strings.NewReader("when,a\n23:59:59.9995,1\n23:59:59.99975,2\n00:00:00.0000,3\n00:00:00.00025,4\n"), recording.Request{Columns: []string{"a"}, Time: "when", TimeUnit: 1})
	if err != nil || len(got.time) != 4 {
		t.Fatal(got, err)
	}
	for i, v := range got.time {
		if math.Abs(v-0.00025*float64(i)) > 1e-12 {
			t.Errorf("row %d at %g s", i+1, v)
		}
	}
	h, err := Reader{}.Inspect(context.Background(), strings.NewReader("when,a\n2026-03-01T10:00:00Z,1\n2026-03-01T10:00:01Z,2\n"), nil)
	if err != nil || h.Columns[0].Text || h.Columns[0].Unit != "s" {
		t.Errorf("%+v %v", h, err)
	}
	if _, err := readAll(strings.NewReader("when,a\n10:00:00,1\n10:00:0x,2\n10:00:02,3\n"), recording.Request{Columns: []string{"a"}, Time: "when", TimeUnit: 1}); err == nil || !strings.Contains(err.Error(), "line 3, row 2") {
		t.Error(err)
	}
}

func TestStatedRate(t *testing.T) {
	for text, want := range map[string]float64{
		"sample rate: 2 kHz": 2000, "Sampling frequency [Hz],1000": 1000, "fs=3200": 3200, "SampleRate;1600,5": 0, "Delta_X\t0.000625": 1600, "rate, 500": 500,
		"sample interval (ms): 0.5": 2000, "time step [us] 250": 0, "time step [us]: 250": 4000, "sampling period;0.5 ms": 2000, "dt: 0.001 s": 1000,
		"rate of descent: 3": 0, "frequency: 100": 0, "sample rate: none": 0, "sample rate: -5": 0, "Delta_X\t0.1\t0.1\t0.1": 10, "Delta_X\t0.1\t0.2": 0, "baud rate: 115200": 0,
		"# sample rate = 8000 Hz": 8000,
	} {
		if got, _ := statedRate([][]byte{[]byte(text)}, '.'); math.Abs(got-want) > 1e-9*want {
			t.Errorf("%q states %g Hz, want %g", text, got, want)
		}
	}
	if got, twice := statedRate([][]byte{[]byte("fs: 100"), []byte("sample rate: 200")}, '.'); got != 0 || !twice {
		t.Errorf("two rates make %g", got)
	}
	if got, twice := statedRate([][]byte{[]byte("fs: 100"), []byte("dt: 0.01")}, '.'); got != 100 || twice {
		t.Errorf("the same rate twice makes %g", got)
	}
	if got, _ := statedRate([][]byte{[]byte("sample rate; 1600,5 Hz")}, ','); got != 1600.5 {
		t.Errorf("a decimal comma makes %g", got)
	}
}

// Any one character may separate fields, lines may end in carriage returns alone, and what cannot be read in few rows is left out.
func TestOddText(t *testing.T) {
	got, err := readAll(strings.NewReader("t~a\r0~1\r1~2\r2~3"), recording.Request{Columns: []string{"a"}, Time: "t", TimeUnit: 1, Options: map[string]string{"separator": "~"}})
	if err != nil || !same(got.values[0], []float64{1, 2, 3}) {
		t.Errorf("%+v %v", got, err)
	}
	if _, err := readAll(strings.NewReader("t,a\n0,1\n"), recording.Request{Columns: []string{"a"}, Options: map[string]string{"separator": "5"}}); err == nil || !strings.Contains(err.Error(), `no separator "5"`) {
		t.Error(err)
	}
	var text strings.Builder
	text.WriteString("t,a,b\n")
	for i := range 300 {
		switch i {
		case 100:
			text.WriteString("100,x,5\n")
		case 200:
			text.WriteString("200,1\n")
		case 250:
			text.WriteString("late,1,2\n")
		default:
			text.WriteString(strings.Repeat("1", 1+i%3) + ",2,3\n")
		}
	}
	got, err = readAll(strings.NewReader(text.String()), recording.Request{Columns: []string{"a", "b"}, Time: "t", TimeUnit: 1})
	if err != nil || len(got.time) != 300 || !math.IsNaN(got.values[0][100]) || got.values[1][100] != 5 || !math.IsNaN(got.values[1][200]) || !math.IsNaN(got.time[250]) {
		t.Fatalf("%v", err)
	}
	if len(got.findings) != 1 || got.findings[0].What != "rows" || !strings.Contains(got.findings[0].Extent, `3 of 300 rows and was left out, first in line 102: "x" is not a number`) {
		t.Errorf("%+v", got.findings)
	}
}
