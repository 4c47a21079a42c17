package assembly_test

import (
	"context"
	"fmt"
	"math"
	"testing"
	"time"

	"hushframe/core/known"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/laminate"
	"hushframe/core/numeric/eigen"
)

func TestTry(t *testing.T) {
	g := known.Rectangle(1, 1, 20, 20, 0)
	var p assembly.Problem
	for _, x := range g.Points {
		p.Nodes = append(p.Nodes, assembly.Vec{x[0], x[1], 0})
	}
	sec, _ := laminate.Homogeneous(laminate.Isotropic(1e9, 0.3, 1000), 0.005, 0)
	p.Groups = []assembly.Group{{Name: "plate", Kind: "part"}}
	p.Plates = []assembly.PlatePart{{Type: shell.QuadraticTriangle(), Axes: assembly.Global, Section: sec, Elements: g.Triangles}}
	t0 := time.Now()
	s, err := assembly.Assemble(context.Background(), &p, 2)
	if err != nil {
		t.Fatal(err)
	}
	fmt.Println(s.N, time.Since(t0), s.Mass)
	t0 = time.Now()
	_ = s.Rigid
	res, err := eigen.Lowest(context.Background(), s.K, s.M, s.Ordering(), eigen.Options{Modes: 20})
	if err != nil {
		t.Fatal(err)
	}
	fmt.Println(time.Since(t0), res.Status)
	d := sec.D[0][0]
	for _, v := range res.Values {
		fmt.Print(math.Sqrt(v*sec.Mass/d), " ")
	}
	fmt.Println()
}
