package store

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// Step is all that a step depends on before it runs.
type Step struct {
	Stage      string
	Executable string // SHA-256 of the executable that runs the stage
	Arguments  stage.Arguments
	// Inputs holds the content hashes for each argument that takes artifacts.
	Inputs map[string][]string
}

// Key is the address of the records of the step.
func (s Step) Key() (string, error) {
	arguments, err := stage.EncodeValues(s.Arguments)
	if err != nil {
		return "", fault.New(fault.Internal, "%v", err)
	}
	inputs := s.Inputs
	if inputs == nil {
		inputs = map[string][]string{}
	}
	data, err := json.Marshal(struct {
		Form       string              `json:"form"`
		Stage      string              `json:"stage"`
		Executable string              `json:"executable"`
		Arguments  json.RawMessage     `json:"arguments"`
		Inputs     map[string][]string `json:"inputs"`
	}{"step 1", s.Stage, s.Executable, arguments, inputs})
	if err != nil {
		return "", fault.New(fault.Internal, "%v", err)
	}
	return sum(data), nil
}

// keptKey is the address of an intermediate result.
func keptKey(executable, key string) string {
	data, _ := json.Marshal([]string{"kept 1", executable, key}) // texts cannot fail
	return sum(data)
}

func sum(data []byte) string {
	s := sha256.Sum256(data)
	return hex.EncodeToString(s[:])
}
