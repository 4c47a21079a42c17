package wire

import (
	"encoding/json"
	"fmt"
	"sort"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// EncodeFault gives the JSON form of an error; nil gives nothing.
func EncodeFault(err error) []byte {
	if err == nil {
		return nil
	}
	data, jerr := json.Marshal(fault.From(err))
	if jerr != nil {
		panic("wire: " + jerr.Error()) // texts only
	}
	return data
}

// DecodeFault reads what EncodeFault wrote. A fault that cannot be read is
// itself a fault of the protocol.
func DecodeFault(data []byte) error {
	if len(data) == 0 {
		return nil
	}
	f := &fault.Error{}
	if err := json.Unmarshal(data, f); err != nil || f.Kind == "" || f.Text == "" {
		return fault.New(fault.Protocol, "the process reported a fault that cannot be read: %.200q", data)
	}
	return f
}

// EncodeCall gives the message of one step.
func EncodeCall(id, name string, c *stage.Call) (*RunRequest, error) {
	arguments, err := stage.EncodeValues(c.Arguments)
	if err != nil {
		return nil, fault.New(fault.Internal, "%v", err)
	}
	r := &RunRequest{
		Call: id, Stage: name, ArgumentsJson: arguments, Outputs: c.Outputs, Scratch: c.Scratch,
		JobFolder: c.Files.Folder(), Threads: int32(c.Threads), Memory: c.Memory,
	}
	for argument, inputs := range c.Inputs {
		g := &InputGroup{Argument: argument}
		for _, in := range inputs {
			g.Inputs = append(g.Inputs, &Input{Folder: in.Folder, Kind: in.Kind, Hash: in.Hash, From: in.From})
		}
		r.Inputs = append(r.Inputs, g)
	}
	sort.Slice(r.Inputs, func(i, j int) bool { return r.Inputs[i].Argument < r.Inputs[j].Argument })
	return r, nil
}

// DecodeCall gives the call of a message, without reporter and services.
func DecodeCall(r *RunRequest) (*stage.Call, error) {
	arguments, err := stage.DecodeValues(r.ArgumentsJson)
	if err != nil {
		return nil, fault.New(fault.Protocol, "the arguments cannot be read: %v", err)
	}
	c := &stage.Call{
		Arguments: arguments, Inputs: map[string][]stage.Input{}, Outputs: r.Outputs, Scratch: r.Scratch,
		Files: stage.NewFiles(r.JobFolder), Threads: int(r.Threads), Memory: r.Memory,
	}
	if c.Outputs == nil {
		c.Outputs = map[string]string{}
	}
	for _, g := range r.Inputs {
		list := []stage.Input{}
		for _, in := range g.Inputs {
			list = append(list, stage.Input{Folder: in.Folder, Kind: in.Kind, Hash: in.Hash, From: in.From})
		}
		c.Inputs[g.Argument] = list
	}
	return c, nil
}

// EncodeFiles and DecodeFiles convert the files a step used.
func EncodeFiles(uses []stage.FileUse) []*FileUse {
	var out []*FileUse
	for _, u := range uses {
		out = append(out, &FileUse{Path: u.Path, Hash: u.Hash})
	}
	return out
}

// DecodeFiles reads what EncodeFiles wrote.
func DecodeFiles(uses []*FileUse) []stage.FileUse {
	var out []stage.FileUse
	for _, u := range uses {
		out = append(out, stage.FileUse{Path: u.GetPath(), Hash: u.GetHash()})
	}
	return out
}

// EncodeLog gives the message of a log line with its fields (name, value, ...).
func EncodeLog(level stage.Level, text string, fields []any) *Log {
	l := &Log{Level: string(level), Text: text}
	for i := 0; i+1 < len(fields); i += 2 {
		l.Fields = append(l.Fields, &LogField{Name: fmt.Sprint(fields[i]), Value: fmt.Sprint(fields[i+1])})
	}
	return l
}

// Pairs gives the fields of a log line as names and values by turns.
func (l *Log) Pairs() []any {
	var out []any
	for _, f := range l.GetFields() {
		out = append(out, f.GetName(), f.GetValue())
	}
	return out
}

// EncodeEach gives the JSON of each value: descriptions or extensions.
func EncodeEach[T any](values []T) ([][]byte, error) {
	var out [][]byte
	for _, v := range values {
		data, err := json.Marshal(v)
		if err != nil {
			return nil, fault.New(fault.Internal, "%v", err)
		}
		out = append(out, data)
	}
	return out, nil
}

// DecodeEach reads what EncodeEach wrote.
func DecodeEach[T any](list [][]byte) ([]T, error) {
	var out []T
	for _, data := range list {
		var v T
		if err := json.Unmarshal(data, &v); err != nil {
			return nil, fault.New(fault.Protocol, "a description cannot be read: %v", err)
		}
		out = append(out, v)
	}
	return out, nil
}

// DecodeRequest reads the request of a relayed call.
func DecodeRequest(data []byte) (stage.ExtensionRequest, error) {
	var r stage.ExtensionRequest
	if err := json.Unmarshal(data, &r); err != nil {
		return r, fault.New(fault.Protocol, "the request cannot be read: %v", err)
	}
	return r, nil
}

// EncodeRequest gives the JSON form of a relayed call.
func EncodeRequest(r stage.ExtensionRequest) ([]byte, error) {
	data, err := json.Marshal(r)
	if err != nil {
		return nil, fault.New(fault.Internal, "the request cannot be sent: %v", err)
	}
	return data, nil
}
