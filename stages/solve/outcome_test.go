package solve

import (
	"math"
	"slices"
	"strings"
	"testing"
	"unicode/utf8"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
)

// frame is a basis of four arms and a mount, with modes of given strengths (deg/s/N).
func frame(strengths ...[3]float64) *kinds.Modes {
	m := &kinds.Modes{Basis: &modal.Basis{}, Survey: &modal.Survey{}}
	for _, name := range []string{"arm_fl", "arm_fr", "arm_rl", "arm_rr"} {
		m.Basis.Groups = append(m.Basis.Groups, modal.LossGroup{Name: name, Kind: "part"})
		m.Survey.Groups = append(m.Survey.Groups, name)
	}
	for i, s := range strengths {
		mode := modal.Mode{Number: i + 1, Frequency: 1057.3, Loss: 0.02, Part: "arm_fl", Motion: "bending", ByGroup: []float64{0.23, 0.23, 0.23, 0.23}, Below: 150, Above: 150}
		for axis, v := range s {
			mode.Strength[axis] = v * degree
		}
		m.Survey.Modes = append(m.Survey.Modes, mode)
	}
	return m
}

// Strengths are plain numbers, 0 below a thousandth of the strongest of the axis; four alike arms leave the table narrow.
func TestModeTable(t *testing.T) {
	s := modeTable(frame([3]float64{1060.4, 0.5, 0}, [3]float64{1.06, 7.39e-7, 0}, [3]float64{1.07, 0.0312, 0}))
	at := 4
	for i, want := range []string{"1060 0.500 0", "0 0 0", "1.07 0.0312 0"} {
		if got := strings.Join(s.Rows[i][at:at+3], " "); got != want {
			t.Errorf("row %d has strengths %s, want %s", i, got, want)
		}
	}
	width := 0
	for c, column := range s.Columns {
		n := utf8.RuneCountInString(column.Name)
		for _, row := range s.Rows {
			n = max(n, utf8.RuneCountInString(row[c]))
		}
		width += n + 2
	}
	if width > 112 {
		t.Errorf("the table is %d columns wide", width)
	}
}

// Speeds are compared whole: 2433 is not in 12433.
func TestMeetingTable(t *testing.T) {
	m := frame([3]float64{1, 1, 1})
	for _, speed := range []float64{12433, 2433, 12433, 2433} {
		m.Survey.Modes[0].Meetings = append(m.Survey.Modes[0].Meetings, modal.Meeting{Order: 1, Speed: speed * rpm, Service: true})
	}
	if got := meetingTable(m).Rows[0][2]; got != "12433, 2433" {
		t.Errorf("order 1 meets at %s", got)
	}
}

// A footprint and the body that stands on it are named once.
func TestNamesOfMergedBodies(t *testing.T) {
	if got := once([]string{"rotor r", "lump bat", "r", "bat", "clamp 3"}); !slices.Equal(got, []string{"rotor r", "lump bat", "clamp 3"}) {
		t.Errorf("named are %q", got)
	}
}

// Screws of standoffs are no named points.
func TestPlacesLeaveScrewsOut(t *testing.T) {
	p := &airframe.Properties{Standoffs: []airframe.StandoffProperties{{Standoff: "post-1"}}}
	for _, name := range []string{"battery", "post-1-lower-screw", "post-2-upper-screw", "post-1-upper-screw"} {
		p.Bodies = append(p.Bodies, airframe.Body{Name: name, Kind: "lump"})
	}
	sites, err := places(&assembly.Frame{BodyOf: []int{4, 5, 6, 7}}, p)
	if err != nil || len(sites) != 2 || sites[0].Name != "battery" || sites[1].Name != "post-2-upper-screw" || sites[1].Body != 6 {
		t.Errorf("sites are %+v, %v", sites, err)
	}
}

// A mode without damping has no peak: its strength is no number, and the table says why.
func TestStrengthWithoutDamping(t *testing.T) {
	free := [3]float64{math.Inf(1), math.Inf(1), math.Inf(1)}
	table := modeTable(frame(free, free))
	if row := table.Rows[0]; !slices.Equal(row[4:7], []string{"–", "–", "–"}) || !strings.HasSuffix(table.Text, "– where nothing damps the mode") {
		t.Errorf("%q under %q", row, table.Text)
	}
	if table = modeTable(frame([3]float64{1, 1, 1})); strings.Contains(table.Text, "damps") {
		t.Errorf("damped modes read %q", table.Text)
	}
}
