package main

import (
	"bytes"
	"math"
	"reflect"
	"strings"
	"testing"
	"unicode/utf8"
)

// Steps are 5 dB each below the highest value: the highest has the eighth, 5 dB below it the seventh.
func TestStripSteps(t *testing.T) {
	s := strip{}
	var want []int
	for c := range stripWide {
		down := 1.25 * float64(c) // dB
		for range 3 {
			s.x = append(s.x, 100+(float64(c)+0.5)*2)
			s.y = append(s.y, math.Pow(10, -down/10)*7)
		}
		want = append(want, max(0, 8-int(down/5+1e-9)))
	}
	if got := s.cells(100, 100+2*stripWide, 7); !reflect.DeepEqual(got, want) {
		t.Errorf("got  %v\nwant %v", got, want)
	}
	// A peak narrower than a column is not lost, wherever in the column it is.
	for k := range s.y {
		s.y[k] = 0.01 * 7
	}
	s.y[10] = 7
	got := s.cells(100, 100+2*stripWide, 7)
	for c, n := range got {
		if (c == 3) != (n == 8) || c != 3 && n != 4 {
			t.Errorf("column %d has step %d", c, n)
		}
	}
	// Fewer points than columns leave no holes, values outside and below nothing are no trouble.
	s = strip{x: []float64{90, 100, 130, 180, 300}, y: []float64{100, 1, 0.1, math.NaN(), 100}}
	got = s.cells(100, 192, 1)
	if got[0] != 8 || got[14] != 8 || got[15] != 6 || got[stripWide-1] != 6 {
		t.Errorf("%v", got)
	}
}

func TestModeMarks(t *testing.T) {
	modes := []float64{50, 100, 101, 105, 191.9, 192, 193}
	for range 11 {
		modes = append(modes, 150)
	}
	got := modeMarks(modes, 100, 192)
	if len(got) != stripWide || got[:4] != "2 ^ " || got[25] != '*' || got[stripWide-1] != '2' || strings.Trim(got, " ") != got {
		t.Errorf("%q", got)
	}
}

// Everything fits into 80 columns, and block characters are only for terminals that show them.
func TestStripsFit(t *testing.T) {
	for _, blocks := range []bool{false, true} {
		var out bytes.Buffer
		a := &app{out: &out, blocks: blocks}
		x := []float64{12345.6, 12400, 12999.9}
		a.writeStrips("T", "t", 12345.6, 12999.9, [][]strip{{{"pitch before", x, []float64{1, 2, 3}, highestWords(x, []float64{1e-9, 2, 3e9})}}}, x)
		ascii := true
		for line := range strings.Lines(out.String()) {
			if n := utf8.RuneCountInString(strings.TrimRight(line, "\n")); n > 80 {
				t.Errorf("%d columns: %s", n, line)
			}
			ascii = ascii && len(line) == utf8.RuneCountInString(line)
		}
		if ascii == blocks {
			t.Errorf("blocks %v gives\n%s", blocks, out.String())
		}
	}
}

func TestShowsBlocks(t *testing.T) {
	for _, c := range []struct {
		terminal    bool
		environment map[string]string
		want        bool
	}{
		{false, map[string]string{"LANG": "en_GB.UTF-8", "WT_SESSION": "1"}, false},
		{true, map[string]string{"LANG": "en_GB.UTF-8", "WT_SESSION": "1"}, true},
		{true, map[string]string{"LANG": "C", "LC_ALL": "C.utf8", "WT_SESSION": "1"}, true},
		{true, map[string]string{"LANG": "en_GB.UTF-8", "LC_ALL": "C"}, false},
		{true, map[string]string{"LANG": "en_GB.UTF-8", "LC_CTYPE": "de_DE.ISO-8859-1"}, false},
		{true, map[string]string{}, false},
		{true, map[string]string{"LANG": "C.UTF-8", "TERM": "dumb", "WT_SESSION": "1"}, false},
	} {
		if got := showsBlocks(c.terminal, func(name string) string { return c.environment[name] }); got != c.want {
			t.Errorf("%+v: %v", c, got)
		}
	}
}
