package kinds

import (
	"reflect"
	"strings"
	"testing"
)

func sampleTransfer() *Transfer {
	return &Transfer{Rate: 100, Step: 25, Segment: 4, Averages: 2, Method: "strikes", Decay: 0.3, ForceColumn: "-f", ExcitedTo: 50, Force: []float64{1, 2, 3},
		Responses: []TransferResponse{{Axis: "z", Quantity: "acceleration", Unit: "1/kg", Column: "a", H1: []complex128{1i, 2, 3}, H2: []complex128{4, 5i, 6}, Coherence: []float64{0.1, 0.2, 0.3}}},
		Strikes:   []TransferStrike{{Time: 1, Force: 2, Length: 0.001, Used: true}, {Time: 3, Force: 4, Length: 0.002, Why: "double"}},
		Peaks:     []TransferPeak{{Response: 0, Frequency: 25, Damping: 0.01, Magnitude: 2, Coherence: 0.2}}}
}

func TestTransferRoundTrip(t *testing.T) {
	want := sampleTransfer()
	a := EncodeTransfer(want)
	if err := a.Check(); err != nil {
		t.Fatal(err)
	}
	got, err := DecodeTransfer(a)
	if err != nil || !reflect.DeepEqual(got, want) {
		t.Errorf("got %+v, want %+v, %v", got, want, err)
	}
	for text, spoil := range map[string]func(*Transfer){
		"response 1 of 1": func(x *Transfer) { x.Peaks[0].Response = 1 },
		"z does not have": func(x *Transfer) { x.Responses[0].H2 = x.Responses[0].H2[:2] },
		"no density of 3": func(x *Transfer) { x.Force = nil },
	} {
		x := sampleTransfer()
		spoil(x)
		if _, err := DecodeTransfer(EncodeTransfer(x)); err == nil || !strings.Contains(err.Error(), text) {
			t.Errorf("%s: %v", text, err)
		}
	}
}
