package gather

import (
	"strings"
	"testing"

	"hushframe/core/signal/recording"
)

func TestFind(t *testing.T) {
	names := []string{"time [us]", "gyro x (deg/s)", "Gyro Y", "raw", "raw_2", "-odd"}
	for written, want := range map[string]int{
		"time [us]": 0, "time": 0, "gyro x": 1, "GYRO X": 1, "gyro y": 2, "#4": 3, "*gyro*x*": 1, "raw": 3, "raw_?": 4, "-odd": 5,
	} {
		if i, err := Find(names, written); err != nil || i != want {
			t.Errorf("%q: %d, %v", written, i, err)
		}
	}
	for written, want := range map[string]string{
		"*gyro*": "2 columns fit, the first two at #2 and #3; choose one by its place, such as \"#2\"", "#7": "has 6 columns, and none at place 7", "gyro z": `did you mean "Gyro Y"?`,
		"[": "no such column", "*z*": "no such column",
	} {
		if i, err := Find(names, written); i != -1 || err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %d, %v", written, i, err)
		}
	}
	h := recording.Header{}
	for _, n := range names {
		h.Columns = append(h.Columns, recording.Column{Name: n})
	}
	for written, want := range map[string]float64{"-raw": -1, "+raw": 1, "-#4": -1, "-odd": 1, "--odd": -1, "- raw": -1} {
		if _, sign, err := findSigned(h, written); err != nil || sign != want {
			t.Errorf("%q: sign %g, %v", written, sign, err)
		}
	}
	units, err := unitsByColumn(h, map[string]string{"raw*": "g", "#3": "deg/s", "time": "us"})
	if err != nil || len(units) != 4 || units["raw"] != "g" || units["raw_2"] != "g" || units["Gyro Y"] != "deg/s" || units["time [us]"] != "us" {
		t.Errorf("%v %v", units, err)
	}
}

func TestWords(t *testing.T) {
	for name, want := range map[string]string{"gyro_x": "roll", "scaledGyroY": "pitch", "gz": "yaw", "rate_target_roll": "", "gyro setpoint x": "", "sample rate x": "", "accel_x": ""} {
		if got := rateAxis(words(name)); got != want {
			t.Errorf("%s is the rate of %q", name, got)
		}
	}
	for name, want := range map[string]string{"rate_target_roll": "roll", "gyro setpoint [y]": "pitch", "yaw_rate_cmd": "yaw", "angle_target_roll": "", "gyro_x": ""} {
		if got := setPointAxis(words(name)); got != want {
			t.Errorf("%s is the set-point of %q", name, got)
		}
	}
	for name, want := range map[string]bool{"erpm_1": true, "eRPM1": true, "rpm_1": false, "electrical speed motor 2": true} {
		if got := isElectrical(words(name)); got != want {
			t.Errorf("%s is electrical: %v", name, got)
		}
		if _, ok := rotorName(words(name)); !ok {
			t.Errorf("%s is no rotor", name)
		}
	}
	if _, ok := rotorName(words("rpm_target_1")); ok {
		t.Error("a set-point of speed is taken for a speed")
	}
}

// Keeping samples moves values within their own slices, copies times, and tells rows.
func TestKeepAndMend(t *testing.T) {
	s := Series{Time: []float64{0, 1, 2, 2, 3}, Values: [][]float64{{5, 6, 7, 8, 9}}, first: 1}
	shared := s.Time
	if n := s.keep(func(i int) bool { return s.Values[0][i] != 6 }); n != 1 || s.Len() != 4 || s.RowAt(1) != 3 || s.Values[0][1] != 7 || s.Time[1] != 2 {
		t.Errorf("%d dropped, %+v", n, s)
	}
	if shared[1] != 1 {
		t.Error("times of another series were moved")
	}
	long := Series{first: 1, Values: [][]float64{nil}}
	for i := range 1000 {
		long.Time, long.Values[0] = append(long.Time, float64(i)), append(long.Values[0], float64(i))
	}
	long.Time[500], long.Time[700] = 499, 3
	if n, first := long.mend(); n != 2 || first != 501 || long.Len() != 998 || long.Values[0][500] != 501 || long.RowAt(500) != 502 {
		t.Errorf("%d dropped from row %d", n, first)
	}
	for i := 300; i < 400; i++ {
		long.Time[i] = 5
	}
	if n, _ := long.mend(); n != 0 || long.Len() != 998 {
		t.Errorf("a tenth of the rows was left out: %d", n)
	}
}

// A column longer than a chunk comes back whole.
func TestColumn(t *testing.T) {
	var c column
	var want []float64
	for i := range 5 {
		part := make([]float64, 40_000)
		for k := range part {
			part[k] = float64(i*len(part) + k)
		}
		c.add(part)
		want = append(want, part...)
	}
	got := c.take()
	if len(got) != len(want) {
		t.Fatalf("%d samples, want %d", len(got), len(want))
	}
	for i := range got {
		if got[i] != want[i] {
			t.Fatalf("sample %d is %g", i, got[i])
		}
	}
}
