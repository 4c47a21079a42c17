package stage

import (
	"encoding/json"
	"math"
	"reflect"
	"testing"
)

func TestJSONRoundTrips(t *testing.T) {
	low := 0.0
	values := map[string]any{
		"none": nil, "yes": true, "text": "a", "number": 1.5, "nan": math.Inf(-1),
		"length": Quantity{0.002, "length"}, "list": []any{Quantity{math.Inf(1), "mass"}, "x"}, "map": map[string]any{"k": 2.0},
	}
	want := Description{
		Name: "mesh", About: "a", Doc: "d", Last: true,
		Arguments: []Argument{{Name: "size", About: "b", Type: Type{Kind: Object, Fields: []Argument{
			{Name: "inner", Type: Type{Kind: Amount, Dimension: "length", Unit: "mm"}, Default: Quantity{0.003, "length"}, Min: &low},
		}}, Default: values, Choices: []string{"c"}, Required: true, Example: "e", Above: &low, Max: &low}},
		Outputs: []Output{{Name: "mesh", Kind: "mesh", About: "o", Publish: "to"}},
		Figures: []Figure{{Name: "f", About: "g", Type: Type{Kind: List, Element: &Type{Kind: Number}, Kinds: []string{"k"}}}},
	}
	var got Description
	roundTrip(t, want, &got)
	outcome := Outcome{Figures: values, Warnings: []Warning{{"a.b", "t", "w", "r"}}, Notes: []string{"n"},
		Summary: []Section{{Title: "T", Text: "x", Columns: []Column{{"c", true}}, Rows: [][]string{{"1"}}}}}
	var gotOutcome Outcome
	roundTrip(t, outcome, &gotOutcome)
	request := ExtensionRequest{Method: "m", Arguments: values, Request: map[string]any{"columns": []any{"a"}}, In: "i", Out: "o", Threads: 2, Memory: 3}
	var gotRequest ExtensionRequest
	roundTrip(t, request, &gotRequest)

	if _, err := json.Marshal(Argument{Default: struct{}{}}); err == nil {
		t.Error("a default of an unknown type was written")
	}
	if err := json.Unmarshal([]byte(`{"figures":{"x":{"$number":"many"}}}`), &gotOutcome); err == nil {
		t.Error("a malformed number was read")
	}
}

func roundTrip[T any](t *testing.T, want T, got *T) {
	t.Helper()
	data, err := json.Marshal(want)
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(data, got); err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(want, *got) {
		t.Errorf("got  %+v\nwant %+v\nover %s", *got, want, data)
	}
}
