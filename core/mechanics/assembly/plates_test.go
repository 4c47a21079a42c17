package assembly_test

import (
	"context"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/numeric/eigen"
)

const plates = "B_plates.json"

// plate is a problem of one flat plate.
type plate struct {
	assembly.Problem
	grid  *known.Grid
	nodes int // per element
}

func newPlate(grid *known.Grid, kind element.Type, section laminate.Section) *plate {
	p := &plate{grid: grid, nodes: kind.Describe().Nodes}
	for _, x := range grid.Points {
		p.Nodes = append(p.Nodes, assembly.Vec{x[0], x[1], 0})
	}
	p.Groups = []assembly.Group{{Name: "plate", Kind: assembly.PartGroup}}
	p.Plates = []assembly.PlatePart{{Type: kind, Axes: assembly.Global, Section: section, Elements: grid.Triangles}}
	return p
}

func components(text string) (c [6]bool) {
	for _, r := range text {
		if r >= 'x' {
			c[r-'x'] = true
		} else {
			c[r-'X'+3] = true
		}
	}
	return c
}

// everywhere holds components of all nodes: "xyZ" leaves bending, "zXY" motion in the plane.
func (p *plate) everywhere(text string) {
	for v := range p.Nodes {
		p.Supports = append(p.Supports, assembly.Support{Node: int32(v), Fixed: components(text)})
	}
}

// support holds an edge as its word or letter says: clamped, simply supported (hard: deflection and
// tangential rotation zero) or free. tangential is the letter of the rotation about the normal of the
// edge.
func (p *plate) support(t *testing.T, edge, how, tangential string) {
	t.Helper()
	var held string
	switch how[:1] {
	case "c", "C":
		held = "xyzXYZ"
	case "s", "S":
		held = "z" + tangential
	case "f", "F":
		return
	default:
		t.Fatalf("edge %s: %q", edge, how)
	}
	for _, v := range p.grid.Sets[edge] {
		p.Supports = append(p.Supports, assembly.Support{Node: v, Fixed: components(held)})
	}
}

// edges holds the four sides of a rectangle: a map by side, or a text of one letter per side.
func (p *plate) edges(t *testing.T, raw json.RawMessage) {
	t.Helper()
	sides := []string{"x=0", "y=0", "x=a", "y=b"}
	how := map[string]string{}
	var text string
	if json.Unmarshal(raw, &how) != nil {
		if err := json.Unmarshal(raw, &text); err != nil {
			t.Fatal(err)
		}
		if strings.HasPrefix(text, "all simply") {
			text = "SSSS"
		}
		for i, s := range sides {
			how[s] = text[i : i+1]
		}
	}
	for i, s := range sides {
		p.support(t, s, how[s], string("XY"[i%2]))
	}
}

// elastic returns the count lowest frequencies (rad/s) after those of rigid motions.
func elastic(t *testing.T, p *assembly.Problem, count, rigid int) []float64 {
	t.Helper()
	s := assemble(t, p)
	res, err := eigen.Lowest(context.Background(), s.K, s.M, s.Ordering(), eigen.Options{Modes: rigid + count, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	if !res.Status.Converged || !res.Status.Proved {
		t.Fatalf("the eigensolver ended with %+v", res.Status)
	}
	for _, v := range res.Values[:rigid] {
		if math.Abs(v) > 1e-6*res.Values[rigid] {
			t.Errorf("a rigid motion has %g of the first elastic eigenvalue", v/res.Values[rigid])
		}
	}
	var omega []float64
	for _, v := range res.Values[rigid : rigid+count] {
		omega = append(omega, math.Sqrt(v))
	}
	return omega
}

func scaled(values []float64, c float64) []float64 {
	out := make([]float64, len(values))
	for i, v := range values {
		out[i] = c * v
	}
	return out
}

// free tells how many rigid motions are left when only bending, or only motion in the plane, is.
func free(raw json.RawMessage) int {
	if strings.ContainsAny(strings.ToLower(strings.ReplaceAll(string(raw), "free", "f")), "cs") {
		return 0
	}
	return 3
}

func byName(t *testing.T, name string) element.Type {
	t.Helper()
	for _, kind := range shell.Types() {
		if kind.Describe().Name == name {
			return kind
		}
	}
	t.Fatalf("no element type %s", name)
	return nil
}
