package shell_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/numeric/eigen"
)

// elasticFrequencies returns the ten lowest elastic eigenfrequencies of a free arm-like plate.
func elasticFrequencies(t *testing.T, kind element.Type) []float64 {
	t.Helper()
	g := known.Rectangle(0.1, 0.014, 20, 4, 0.15)
	p := &assembly.Problem{Groups: []assembly.Group{{Name: "plate", Kind: assembly.PartGroup}}}
	for _, x := range g.Points {
		p.Nodes = append(p.Nodes, assembly.Vec{x[0], x[1], 0})
	}
	p.Plates = []assembly.PlatePart{{Type: kind, Axes: assembly.Global, Section: woven(t, 0.005, 0.3), Elements: g.Triangles}}
	s, err := assembly.Assemble(context.Background(), p, 2)
	if err != nil {
		t.Fatal(err)
	}
	res, err := eigen.Lowest(context.Background(), s.K, s.M, s.Ordering(), eigen.Options{Modes: 16, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(res.Values[5]) > 1e-6*res.Values[6] {
		t.Errorf("%s: six rigid motions, of which the last has %g of the first elastic eigenvalue", kind.Describe().Name, res.Values[5]/res.Values[6])
	}
	var f []float64
	for _, v := range res.Values[6:] {
		f = append(f, math.Sqrt(v))
	}
	return f
}

// The drilling stiffness moves no frequency by 0.01 %, bending or in the plane: not as it is against a
// hundredth of it, and so not against none either.
func TestDrillingMovesNoFrequency(t *testing.T) {
	eachType(t, func(t *testing.T, kind element.Type) {
		usual, less := elasticFrequencies(t, kind), elasticFrequencies(t, shell.Drill(kind, 0.01))
		much := elasticFrequencies(t, shell.Drill(kind, 1e4))
		moved := false
		for i := range usual {
			if d := math.Abs(less[i]/usual[i] - 1); d > 1e-4 {
				t.Errorf("mode %d moves by %.2g", i+1, d)
			}
			moved = moved || math.Abs(much[i]/usual[i]-1) > 1e-7
		}
		if !moved {
			t.Error("a drilling stiffness ten thousand times as high moves nothing either: the test sees nothing")
		}
	})
}
