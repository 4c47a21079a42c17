package stage

import "encoding/json"

// The JSON form of a description, an outcome and a relayed request is what
// crosses the process boundary and what the store keeps. Their values are
// written as EncodeValue does, so that quantities and infinities survive.

type plainArgument Argument

// MarshalJSON writes the default as EncodeValue does.
func (a Argument) MarshalJSON() ([]byte, error) {
	w := struct {
		plainArgument
		Default json.RawMessage `json:"default,omitempty"`
	}{plainArgument: plainArgument(a)}
	if a.Default != nil {
		data, err := EncodeValue(a.Default)
		if err != nil {
			return nil, err
		}
		w.Default = data
	}
	return json.Marshal(w)
}

// UnmarshalJSON reads what MarshalJSON wrote.
func (a *Argument) UnmarshalJSON(data []byte) error {
	var w struct {
		plainArgument
		Default json.RawMessage `json:"default"`
	}
	if err := json.Unmarshal(data, &w); err != nil {
		return err
	}
	*a = Argument(w.plainArgument)
	if len(w.Default) == 0 {
		return nil
	}
	var err error
	a.Default, err = DecodeValue(w.Default)
	return err
}

type plainOutcome Outcome

// MarshalJSON writes the figures as EncodeValues does.
func (o Outcome) MarshalJSON() ([]byte, error) {
	figures, err := EncodeValues(o.Figures)
	if err != nil {
		return nil, err
	}
	return json.Marshal(struct {
		plainOutcome
		Figures json.RawMessage `json:"figures"`
	}{plainOutcome(o), figures})
}

// UnmarshalJSON reads what MarshalJSON wrote.
func (o *Outcome) UnmarshalJSON(data []byte) error {
	var w struct {
		plainOutcome
		Figures json.RawMessage `json:"figures"`
	}
	if err := json.Unmarshal(data, &w); err != nil {
		return err
	}
	*o = Outcome(w.plainOutcome)
	var err error
	o.Figures, err = DecodeValues(w.Figures)
	return err
}

type plainRequest ExtensionRequest

// MarshalJSON writes arguments and request as EncodeValues does.
func (r ExtensionRequest) MarshalJSON() ([]byte, error) {
	arguments, err := EncodeValues(r.Arguments)
	if err != nil {
		return nil, err
	}
	request, err := EncodeValues(r.Request)
	if err != nil {
		return nil, err
	}
	return json.Marshal(struct {
		plainRequest
		Arguments json.RawMessage `json:"arguments"`
		Request   json.RawMessage `json:"request"`
	}{plainRequest(r), arguments, request})
}

// UnmarshalJSON reads what MarshalJSON wrote.
func (r *ExtensionRequest) UnmarshalJSON(data []byte) error {
	var w struct {
		plainRequest
		Arguments json.RawMessage `json:"arguments"`
		Request   json.RawMessage `json:"request"`
	}
	if err := json.Unmarshal(data, &w); err != nil {
		return err
	}
	*r = ExtensionRequest(w.plainRequest)
	arguments, err := DecodeValues(w.Arguments)
	if err != nil {
		return err
	}
	r.Arguments = arguments
	r.Request, err = DecodeValues(w.Request)
	return err
}
