package main

import (
	"reflect"
	"testing"

	"hushframe/core/pipeline/store"
)

// A branch holds what its end was made of: of two meshes that which the modes rest on, of two properties the nearer, and
// a response that shares its modes with another is a branch of its own.
func TestBranches(t *testing.T) {
	out := func(pairs ...string) map[string]store.Output {
		m := map[string]store.Output{}
		for i := 0; i < len(pairs); i += 3 {
			m[pairs[i]] = store.Output{Kind: pairs[i+1], Hash: pairs[i+2]}
		}
		return m
	}
	in := func(pairs ...string) map[string][]string {
		m := map[string][]string{}
		for i := 0; i < len(pairs); i += 2 {
			m[pairs[i]] = append(m[pairs[i]], pairs[i+1])
		}
		return m
	}
	r := &storedRun{record: &store.RunRecord{Steps: []store.RunStep{
		{Label: "frame", Outputs: out("geometry", "geometry", "g", "properties", "properties", "p")},
		{Label: "other", Outputs: out("geometry", "geometry", "g", "properties", "properties", "q")},
		{Label: "meshes", Inputs: in("geometry", "g"), Outputs: out("coarse", "mesh", "m1", "fine", "mesh", "m2")},
		{Label: "modes", Inputs: in("mesh", "m2", "properties", "p"), Outputs: out("modes", "modes", "x")},
		{Label: "flight", Inputs: in("modes", "x", "properties", "q"), Outputs: out("response", "response", "r1")},
		{Label: "slow", Inputs: in("modes", "x", "properties", "p"), Outputs: out("response", "response", "r2")},
		{Label: "alone", Inputs: in("mesh", "m1", "properties", "p"), Outputs: out("modes", "modes", "y")},
	}}}
	want := []branch{
		{"flight", "response", []string{"r1", "x", "q", "m2"}},
		{"slow", "response", []string{"r2", "x", "p", "m2"}},
		{"alone", "modes", []string{"y", "m1", "p"}},
	}
	got := r.branches()
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got  %v\nwant %v", got, want)
	}
	b := []branch{{"sweep", "response", nil}, {"alone", "modes", nil}}
	pairs := partners([2][]branch{got[1:], b})
	if len(pairs) != 2 || pairs[0][0].label != "alone" || pairs[1][0].label != "slow" || pairs[1][1].label != "sweep" {
		t.Errorf("%v", pairs)
	}
	if pairs = partners([2][]branch{got, b[:1]}); len(pairs) != 0 { // two could be meant
		t.Errorf("%v", pairs)
	}
}
