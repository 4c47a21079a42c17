package main

import (
	"encoding/json"
	"io"
	"math"
	"slices"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// artifactData is an artifact as JSON: every table as rows, with the units of its columns once.
type artifactData struct {
	Kind    string                       `json:"kind"`
	Version int                          `json:"version"`
	Scalars map[string]any               `json:"scalars"`
	Tables  map[string][]map[string]any  `json:"tables"`
	Units   map[string]map[string]string `json:"units"` // by table, and "scalars"; only of columns that have one
}

// dataOf turns an artifact into data, without some of its tables.
func dataOf(a *artifact.Artifact, without ...string) artifactData {
	d := artifactData{Kind: a.Kind.Name, Version: a.Kind.Version, Scalars: map[string]any{}, Tables: map[string][]map[string]any{}, Units: map[string]map[string]string{}}
	unit := func(table string, c artifact.Column) {
		if c.Unit == "" || c.Unit == "1" {
			return
		}
		if d.Units[table] == nil {
			d.Units[table] = map[string]string{}
		}
		d.Units[table][c.Name] = c.Unit
	}
	for _, c := range a.Kind.Scalars {
		unit("scalars", c)
		d.Scalars[c.Name] = forJSON(a.Scalars[c.Name])
	}
	for _, spec := range a.Kind.Tables {
		if slices.Contains(without, spec.Name) {
			continue
		}
		t := a.Table(spec.Name)
		rows := make([]map[string]any, t.Rows())
		for i := range rows {
			rows[i] = map[string]any{}
			for _, c := range spec.Columns {
				rows[i][c.Name] = forJSON(cellOf(t, c, i))
			}
		}
		for _, c := range spec.Columns {
			unit(spec.Name, c)
		}
		d.Tables[spec.Name] = rows
	}
	return d
}

// forJSON turns a value into what JSON can hold: what is not a number is null, infinities are texts, quantities objects with
// their SI value and dimension.
func forJSON(v any) any {
	switch x := v.(type) {
	case float64:
		switch {
		case math.IsNaN(x):
			return nil
		case math.IsInf(x, 1):
			return "infinite"
		case math.IsInf(x, -1):
			return "-infinite"
		}
	case []float64:
		out := make([]any, len(x))
		for i := range x {
			out[i] = forJSON(x[i])
		}
		return out
	case stage.Quantity:
		return map[string]any{"value": forJSON(x.SI), "dimension": x.Dimension}
	case []any:
		out := make([]any, len(x))
		for i := range x {
			out[i] = forJSON(x[i])
		}
		return out
	case map[string]any:
		out := map[string]any{}
		for k := range x {
			out[k] = forJSON(x[k])
		}
		return out
	case []int64:
		return append([]int64{}, x...)
	case []string:
		return append([]string{}, x...)
	}
	return v
}

// writeJSON writes one object, indented, with a newline at its end.
func writeJSON(out io.Writer, v any) error {
	e := json.NewEncoder(out)
	e.SetIndent("", "  ")
	e.SetEscapeHTML(false)
	if err := e.Encode(v); err != nil {
		return fault.New(fault.Internal, "%v", err)
	}
	return nil
}
