package delimited

import (
	"math"
	"math/rand/v2"
	"strconv"
	"testing"
)

// strconv is the measure: every text that both take must give the same bits.
func TestParseFloatAgainstStrconv(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	texts := []string{"0", "-0", "+1", "1.", ".5", "00012.500", "1e5", "1E-5", "-2.5e+3", "123456789012345678901234567890",
		"0.1234567890123456789012345", "9007199254740993", "1e22", "1e23", "1e-22", "1.7976931348623157e308", "5e-324",
		"1730147596612447367", "18446744073709551615", "0.000000000000000000000000000001"}
	for range 20000 {
		v := math.Float64frombits(random.Uint64())
		if math.IsNaN(v) || math.IsInf(v, 0) {
			continue
		}
		texts = append(texts, strconv.FormatFloat(v, 'g', -1, 64), strconv.FormatFloat(random.NormFloat64()*1000, 'f', random.IntN(12), 64))
	}
	for _, text := range texts {
		want, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Fatal(err)
		}
		if got, ok := parseFloat([]byte(text), '.'); !ok || math.Float64bits(got) != math.Float64bits(want) {
			t.Errorf("%q: got %v %v, want %v", text, got, ok, want)
		}
		for _, tail := range []string{"", ",7"} {
			got, used, more := quick([]byte(text+tail), ',', '.')
			if used > 0 && (math.Float64bits(got) != math.Float64bits(want) || used != len(text)+min(1, len(tail)) || more != (tail != "")) {
				t.Errorf("%q: quickly %v, used %d, more %v, want %v", text+tail, got, used, more, want)
			}
		}
	}
	for _, text := range []string{"", "-", ".", "e5", "1e", "1e+", "1.2.3", "12a", "0x10", "1_000", "inf", "nan", "1,5", " 1", "1e4000"} {
		if got, ok := parseFloat([]byte(text), '.'); ok {
			t.Errorf("%q is no number, got %v", text, got)
		}
	}
	for _, text := range []string{"", "-", ".", ",", "1.2.3", "1 ", " 1", "1e3", "1234567890123456"} {
		if _, used, _ := quick([]byte(text), ';', '.'); used > 0 {
			t.Errorf("%q was read quickly", text)
		}
	}
	if got, used, more := quick([]byte("-0.05,x"), ',', '.'); got != -0.05 || used != 6 || !more {
		t.Errorf("quickly: %v %d %v", got, used, more)
	}
	if got, ok := parseFloat([]byte("-12,75"), ','); !ok || got != -12.75 {
		t.Errorf("decimal comma: %v %v", got, ok)
	}
	if got, ok := parseFloat([]byte("0,12345678901234567890123"), ','); !ok || got != 0.12345678901234567890123 {
		t.Errorf("long decimal comma: %v %v", got, ok)
	}
}

// Nanoseconds since 1970 need 61 bits; a float64 has 53 and would be off by up to 128 ns.
func TestClockKeepsDigits(t *testing.T) {
	c := clock{unit: 1e-9, point: '.'}
	first, _ := c.read([]byte("1730147596612924198"))
	second, _ := c.read([]byte("1730147596613923328"))
	if first != 0 || second != 999130e-9 {
		t.Errorf("%v, %v", first, second)
	}
	c = clock{unit: 1, point: '.'}
	c.read([]byte("1730147596.612924198"))
	if got, _ := c.read([]byte("1730147597.61292420")); got != 1.000000002 {
		t.Errorf("seconds with nine decimals: %.12f", got)
	}
	c = clock{unit: 1, point: '.'}
	c.read([]byte("0.25"))
	if got, _ := c.read([]byte("7.5e-1")); got != 0.5 {
		t.Errorf("an exponent: %v", got)
	}
	if got, _ := c.read([]byte("1.00000000000125")); math.Abs(got-0.75000000000125) > 1e-15 {
		t.Errorf("more decimals than the first: %v", got)
	}
	c = clock{unit: 1e-3, point: '.'}
	c.read([]byte("-5"))
	if got, ok := c.read([]byte("5")); got != 0.01 || !ok || c.origin != -5 {
		t.Errorf("from below zero: %v", got)
	}
	if _, ok := c.read([]byte("noon")); ok {
		t.Error("noon is no number")
	}
}
