package account

import (
	"reflect"
	"testing"

	"hushframe/core/pipeline/artifact"
)

// Every field is filled with a value of its own, so that a forgotten or
// swapped column shows.
func TestRoundTrip(t *testing.T) {
	want := &Account{}
	n := 0
	fill(reflect.ValueOf(want).Elem(), &n)
	dir := t.TempDir()
	if _, err := artifact.Write(dir, want.Encode()); err != nil {
		t.Fatal(err)
	}
	a, err := artifact.Open(dir, artifact.NewRegistry(Kind))
	if err != nil {
		t.Fatal(err)
	}
	if got := Decode(a); !reflect.DeepEqual(got, want) {
		t.Errorf("got  %+v\nwant %+v", got, want)
	}
	if got := Decode((&Account{}).Encode()); !reflect.DeepEqual(got, &Account{}) {
		t.Errorf("empty: %+v", got)
	}
}

func fill(v reflect.Value, n *int) {
	*n++
	switch v.Kind() {
	case reflect.String:
		v.SetString(string(rune('a'+*n%26)) + string(rune('a'+*n/26)))
	case reflect.Float64:
		v.SetFloat(float64(*n))
	case reflect.Bool:
		v.SetBool(*n%2 == 0)
	case reflect.Slice:
		v.Set(reflect.MakeSlice(v.Type(), 3, 3))
		for i := range 3 {
			fill(v.Index(i), n)
		}
	case reflect.Struct:
		for i := range v.NumField() {
			fill(v.Field(i), n)
		}
	}
}
