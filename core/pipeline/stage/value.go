package stage

import (
	"encoding/json"
	"fmt"
	"math"
)

// Values that cross the process boundary, as arguments and as figures, have
// one of the Go types nil, bool, float64, string, Quantity, []any and
// map[string]any, nested at will. NaN and infinities are allowed in numbers
// and quantities: they are written as text within a marked object.

// EncodeValue gives the JSON form of a value. Maps are written with sorted
// keys, so equal values give equal bytes. It fails on any other Go type.
func EncodeValue(v any) ([]byte, error) {
	w, err := toWire(v)
	if err != nil {
		return nil, err
	}
	return json.Marshal(w)
}

// DecodeValue reads what EncodeValue wrote.
func DecodeValue(data []byte) (any, error) {
	var w any
	if err := json.Unmarshal(data, &w); err != nil {
		return nil, err
	}
	return fromWire(w)
}

// EncodeValues and DecodeValues do the same for a map of named values.
func EncodeValues(m map[string]any) ([]byte, error) {
	if m == nil {
		m = map[string]any{}
	}
	return EncodeValue(m)
}

// DecodeValues reads what EncodeValues wrote.
func DecodeValues(data []byte) (map[string]any, error) {
	if len(data) == 0 {
		return map[string]any{}, nil
	}
	v, err := DecodeValue(data)
	if err != nil {
		return nil, err
	}
	m, ok := v.(map[string]any)
	if !ok {
		return nil, fmt.Errorf("stage: values are %T, not an object", v)
	}
	return m, nil
}

const (
	markQuantity = "$quantity"
	markNumber   = "$number"
)

func toWire(v any) (any, error) {
	switch x := v.(type) {
	case nil, bool, string:
		return x, nil
	case int:
		return float64(x), nil
	case float64:
		return wireNumber(x), nil
	case Quantity:
		return map[string]any{markQuantity: wireNumber(x.SI), "dimension": x.Dimension}, nil
	case []any:
		out := make([]any, len(x))
		for i, e := range x {
			w, err := toWire(e)
			if err != nil {
				return nil, err
			}
			out[i] = w
		}
		return out, nil
	case map[string]any:
		out := make(map[string]any, len(x))
		for k, e := range x {
			w, err := toWire(e)
			if err != nil {
				return nil, err
			}
			out[k] = w
		}
		return out, nil
	}
	return nil, fmt.Errorf("stage: a value of type %T cannot cross the process boundary", v)
}

func wireNumber(x float64) any {
	switch {
	case math.IsNaN(x):
		return map[string]any{markNumber: "nan"}
	case math.IsInf(x, 1):
		return map[string]any{markNumber: "inf"}
	case math.IsInf(x, -1):
		return map[string]any{markNumber: "-inf"}
	}
	return x
}

func fromWire(w any) (any, error) {
	switch x := w.(type) {
	case []any:
		for i := range x {
			v, err := fromWire(x[i])
			if err != nil {
				return nil, err
			}
			x[i] = v
		}
		return x, nil
	case map[string]any:
		if s, ok := x[markNumber]; ok {
			switch s {
			case "nan":
				return math.NaN(), nil
			case "inf":
				return math.Inf(1), nil
			case "-inf":
				return math.Inf(-1), nil
			}
			return nil, fmt.Errorf("stage: %q is no number", s)
		}
		if q, ok := x[markQuantity]; ok {
			si, err := fromWire(q)
			if err != nil {
				return nil, err
			}
			f, ok1 := si.(float64)
			d, ok2 := x["dimension"].(string)
			if !ok1 || !ok2 {
				return nil, fmt.Errorf("stage: malformed quantity %v", x)
			}
			return Quantity{f, d}, nil
		}
		for k := range x {
			v, err := fromWire(x[k])
			if err != nil {
				return nil, err
			}
			x[k] = v
		}
		return x, nil
	}
	return w, nil
}
