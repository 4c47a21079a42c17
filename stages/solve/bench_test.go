package solve_test

import (
	"context"
	"strings"
	"testing"
	"time"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/stages/solve"
)

// BenchmarkDemo times the demo frame from mesh to modal basis, with the seconds of each phase.
func BenchmarkDemo(b *testing.B) {
	g, p, _ := imported(b, "../../jobs/sandpiper", "airframe.hcl")
	m, err := mesh.Build(context.Background(), g, mesh.Options{Size: 0.005, Element: "quadratic-triangle", Threads: 2})
	if err != nil {
		b.Fatal(err)
	}
	f, err := assembly.FromAirframe(m, p, func(string) element.Type { return shell.QuadraticTriangle() })
	if err != nil {
		b.Fatal(err)
	}
	sites, err := solve.Places(f, p)
	if err != nil {
		b.Fatal(err)
	}
	var unknowns, vectors int
	for b.Loop() {
		var phase string
		last := time.Now()
		seconds := map[string]float64{}
		step := func(name string) {
			seconds[phase] += time.Since(last).Seconds()
			phase, last = name, time.Now()
		}
		step("assemble")
		s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
		if err != nil {
			b.Fatal(err)
		}
		st, err := modal.Build(context.Background(), s, sites, modal.Options{UpTo: 750, Threads: 2, Progress: func(name string, _ float64) { step(name) }})
		if err != nil {
			b.Fatal(err)
		}
		step("")
		for name, v := range seconds {
			if name != "" {
				b.ReportMetric(v, strings.ReplaceAll(name, " ", "-")+"-s")
			}
		}
		unknowns, vectors = s.N, len(st.Basis.Kinds)
	}
	b.ReportMetric(float64(unknowns), "unknowns")
	b.ReportMetric(float64(vectors), "vectors")
}
