package run

import (
	"fmt"
	"sort"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// CheckFigures compares the figures a stage reports with those it declared. A
// declared figure may have no value in a run.
func CheckFigures(d stage.Description, figures map[string]any) error {
	declared := map[string]stage.Type{}
	for _, f := range d.Figures {
		declared[f.Name] = f.Type
	}
	names := make([]string, 0, len(figures))
	for n := range figures {
		names = append(names, n)
	}
	sort.Strings(names)
	for _, n := range names {
		t, ok := declared[n]
		if !ok {
			return fault.New(fault.Protocol, "stage %s reports the figure %q, which it does not declare", d.Name, n)
		}
		if err := conforms(figures[n], t); err != nil {
			return fault.New(fault.Protocol, "stage %s reports the figure %q as %v", d.Name, n, err)
		}
	}
	return nil
}

// conforms says in an error what a value is instead of what its type wants.
func conforms(v any, t stage.Type) error {
	if v == nil {
		return nil
	}
	wrong := func() error { return fmt.Errorf("%T, where it declares %s", v, t.Kind) }
	switch t.Kind {
	case stage.Any:
		return nil
	case stage.Number, stage.Whole:
		if _, ok := v.(float64); !ok {
			return wrong()
		}
	case stage.Text, stage.File, stage.Target:
		if _, ok := v.(string); !ok {
			return wrong()
		}
	case stage.Truth:
		if _, ok := v.(bool); !ok {
			return wrong()
		}
	case stage.Amount:
		q, ok := v.(stage.Quantity)
		if !ok {
			return wrong()
		}
		if q.Dimension != t.Dimension {
			return fmt.Errorf("%s, where it declares %s", q.Dimension, t.Dimension)
		}
	case stage.List:
		list, ok := v.([]any)
		if !ok {
			return wrong()
		}
		for i, x := range list {
			if t.Element == nil {
				break
			}
			if err := conforms(x, *t.Element); err != nil {
				return fmt.Errorf("a list with entry %d %w", i, err)
			}
		}
	case stage.Map:
		m, ok := v.(map[string]any)
		if !ok {
			return wrong()
		}
		for k, x := range m {
			if t.Element == nil {
				break
			}
			if err := conforms(x, *t.Element); err != nil {
				return fmt.Errorf("a map with entry %q %w", k, err)
			}
		}
	case stage.Object:
		m, ok := v.(map[string]any)
		if !ok {
			return wrong()
		}
		for _, f := range t.Fields {
			if err := conforms(m[f.Name], f.Type); err != nil {
				return fmt.Errorf("an object with field %q %w", f.Name, err)
			}
		}
	}
	return nil
}
