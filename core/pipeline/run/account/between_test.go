package account

import (
	"reflect"
	"testing"
)

func TestBetween(t *testing.T) {
	before := &Account{
		Sources: []Source{{"job.hcl", "", "1"}}, Files: []File{{"frame", "cut/arm.dxf", "2"}, {"frame", "cut/top.dxf", "3"}},
		Settings:    []Setting{{Name: "t", Value: `"5 mm"`}, {Name: "gone", Value: "1"}, {Name: "same", Value: "2"}},
		Figures:     []Figure{{Step: "modes", Name: "gap", Text: "20 Hz", Number: 20}, {Step: "modes", Name: "n", Text: "7", Number: 7}, {Step: "frame", Name: "centre_y", Text: "1e-18 m", Number: 1e-18}},
		Executables: []Executable{{Name: "stages", SHA256: "a"}},
		Verdicts: []Verdict{{Name: "light", Holds: true, Judged: true, Value: "500 g"}, {Name: "apart", Judged: true}, {Name: "old", Holds: true, Judged: true},
			{Name: "steady", Holds: true, Judged: true}},
	}
	after := &Account{
		Sources: []Source{{"job.hcl", "", "1"}}, Files: []File{{"frame", "cut/arm.dxf", "4"}, {"frame", "cut/top.dxf", "3"}},
		Settings:    []Setting{{Name: "t", Value: `"6 mm"`}, {Name: "same", Value: "2"}, {Name: "fresh", Value: "3"}},
		Figures:     []Figure{{Step: "modes", Name: "gap", Text: "25 Hz", Number: 25}, {Step: "modes", Name: "n", Text: "7", Number: 7}, {Step: "frame", Name: "centre_y", Text: "-2e-18 m", Number: -2e-18}},
		Executables: []Executable{{Name: "stages", SHA256: "b"}},
		Verdicts: []Verdict{{Name: "apart", Holds: true, Judged: true}, {Name: "light", Judged: true, Value: "560 g"}, {Name: "steady", Holds: true, Judged: true},
			{Name: "fresh", Holds: true, Judged: true}},
	}
	got := Between(before, after)
	for name, pairs := range map[string][2][]Pair{
		"settings": {got.Settings, {{"fresh", "", "3"}, {"gone", "1", ""}, {"t", `"5 mm"`, `"6 mm"`}}},
		"figures":  {got.Figures, {{"modes.gap", "20 Hz", "25 Hz"}}},
		"files":    {got.Files, {{"frame: cut/arm.dxf", "2", "4"}}},
		"programs": {got.Programs, {{"stages", "a", "b"}}},
	} {
		if !reflect.DeepEqual(pairs[0], pairs[1]) {
			t.Errorf("%s: %v, want %v", name, pairs[0], pairs[1])
		}
	}
	want := [][3]string{{"apart", Broken, Holds}, {"light", Holds, Broken}, {"steady", Holds, Holds}, {"fresh", Absent, Holds}, {"old", Holds, Absent}}
	for i, v := range got.Verdicts {
		if i >= len(want) || [3]string{v.Name, v.State[0], v.State[1]} != want[i] || v.Worse() != (v.Name == "light") || v.Changed() != (v.Name != "steady") {
			t.Errorf("%d: %+v", i, v)
		}
	}
	if len(got.Verdicts) != len(want) || got.Verdicts[1].Value != [2]string{"500 g", "560 g"} {
		t.Errorf("%+v", got.Verdicts)
	}
	if none := Between(before, before); none.Settings != nil || none.Figures != nil || none.Files != nil || none.Programs != nil || none.Verdicts[0].Changed() {
		t.Errorf("%+v", none)
	}
}
