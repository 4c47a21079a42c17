package solve_test

import (
	"context"
	"errors"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/solve"
)

// crooked is an element type whose matrices are not what they should be, as one of an extension might be.
type crooked struct {
	element.Type
	spoil func(m *element.Matrices)
}

func (c crooked) Matrices(ctx context.Context, in *element.Batch, out *element.Matrices) error {
	err := c.Type.Matrices(ctx, in, out)
	if err == nil {
		c.spoil(out)
	}
	return err
}

func times(factor float64, values []float64) {
	for i := range values {
		values[i] *= factor
	}
}

// offDiagonal multiplies all entries of packed matrices of the six-node plate element but those of the diagonal.
func offDiagonal(factor float64, packed []float64) {
	size := element.Packed(36)
	for at := 0; at < len(packed); at += size {
		for i := range 36 {
			times(factor, packed[at+element.Packed(i):at+element.Packed(i)+i])
		}
	}
}

// An indefinite stiffness or mass, and motions that nothing holds, are refused by the name of the part that they come
// from or of the joint that holds it, before any mode is told.
func TestCrookedElements(t *testing.T) {
	for _, c := range []struct {
		name, want, item string
		spoil            func(m *element.Matrices)
	}{
		{"negative stiffness", "stiffness has a direction in which it is negative", `part "tail"`, func(m *element.Matrices) { times(-1, m.Stiffness) }},
		{"indefinite behind a positive diagonal", "has a direction in which it is negative", `body "bolt far under"`, func(m *element.Matrices) { offDiagonal(1.2, m.Stiffness) }},
		{"negative mass", "mass has a direction in which it is negative", `part "tail"`, func(m *element.Matrices) { times(-1, m.Mass) }},
		{"neither", "neither stiffness nor mass", `part "tail"`, func(m *element.Matrices) { times(0, m.Stiffness); times(0, m.Mass) }},
	} {
		m, p := known.Airframe(0.03)
		const tail = 1
		m.Parts[tail].Element = "crooked"
		f, err := assembly.FromAirframe(m, p, func(name string) element.Type {
			if name == "crooked" {
				return crooked{shell.QuadraticTriangle(), c.spoil}
			}
			return shell.QuadraticTriangle()
		})
		if err != nil {
			t.Fatal(err)
		}
		s, err := assembly.Assemble(t.Context(), &f.Problem, 2)
		if err != nil {
			t.Errorf("%s: refused by the assembly: %v", c.name, err)
			continue
		}
		_, err = modal.Build(t.Context(), s, nil, modal.Options{UpTo: 300, Threads: 2})
		if err == nil {
			t.Errorf("%s: modes were computed", c.name)
			continue
		}
		var told *fault.Error
		if !errors.As(solve.Explain(solve.Placed(s, err)), &told) || told.Kind != fault.Numeric || !strings.Contains(told.Error(), c.want) || !strings.Contains(told.Error(), c.item) || told.Remedy == "" {
			t.Errorf("%s: got %v", c.name, told)
		}
	}
}
