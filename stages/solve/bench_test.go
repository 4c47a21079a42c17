package solve_test

import (
	"context"
	"math"
	"os"
	"runtime/debug"
	"strconv"
	"strings"
	"testing"
	"time"

	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/numeric/sparse"
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

// BenchmarkBeforeTheSolver sets meshing, numbering and assembly beside one numeric factorisation of K-σM, for the demo on
// its usual mesh, on one of half the size, and with every element of the usual one cut in four: the fastest of the
// laps of each phase, and its ratio to the factorisation. The whole factorisation is that with ordering and analysis, as
// libraries that are handed a matrix do it.
func BenchmarkBeforeTheSolver(b *testing.B) {
	g, p, _ := imported(b, "../../jobs/sandpiper", "airframe.hcl")
	for _, c := range []struct {
		name   string
		size   float64
		refine bool
	}{{"5mm", 0.005, false}, {"2.5mm", 0.0025, false}, {"5mm-cut-in-four", 0.005, true}} {
		b.Run(c.name, func(b *testing.B) {
			least := map[string]float64{}
			lap := func(name string, work func()) {
				began := time.Now()
				work()
				if t := time.Since(began).Seconds(); least[name] == 0 || t < least[name] {
					least[name] = t
				}
			}
			must := func(err error) {
				if err != nil {
					b.Fatal(err)
				}
			}
			var s *assembly.System
			for b.Loop() {
				var m *mesh.Mesh
				var f *assembly.Frame
				var err error
				lap("mesh", func() {
					m, err = mesh.Build(b.Context(), g, mesh.Options{Size: c.size, Element: "quadratic-triangle", Threads: 2})
					must(err)
					if c.refine {
						m = assembly.Refine(m)
					}
				})
				lap("number", func() {
					f, err = assembly.FromAirframe(m, p, func(string) element.Type { return shell.QuadraticTriangle() })
					must(err)
				})
				lap("assemble", func() {
					s, err = assembly.Assemble(b.Context(), &f.Problem, 2)
					must(err)
				})
				var order sparse.Ordering
				lap("order", func() { order = s.Ordering() })
				w := 2 * math.Pi * 75
				a := sparse.Combine(1, s.K, w*w, s.M)
				var an *sparse.Analysis
				lap("analyse", func() {
					an, err = sparse.Analyse(a.Pattern(), order)
					must(err)
				})
				lap("factor", func() {
					_, err := an.Factorise(b.Context(), a, 2)
					must(err)
				})
			}
			for name, t := range least {
				b.ReportMetric(t, name+"-s")
			}
			b.ReportMetric(least["mesh"]/least["factor"], "mesh/factor")
			b.ReportMetric(least["assemble"]/least["factor"], "assemble/factor")
			b.ReportMetric(least["assemble"]/(least["order"]+least["analyse"]+least["factor"]), "assemble/whole-factor")
			b.ReportMetric(float64(s.N), "unknowns")
		})
	}
}

// BenchmarkErrorEstimate times what the estimate of the mesh error adds: every element of the demo's usual mesh cut in four,
// numbered, assembled and solved for its modes alone.
func BenchmarkErrorEstimate(b *testing.B) {
	g, p, _ := imported(b, "../../jobs/sandpiper", "airframe.hcl")
	m, err := mesh.Build(b.Context(), g, mesh.Options{Size: 0.005, Element: "quadratic-triangle", Threads: 2})
	if err != nil {
		b.Fatal(err)
	}
	unknowns := 0
	for b.Loop() {
		f, err := assembly.FromAirframe(assembly.Refine(m), p, func(string) element.Type { return shell.QuadraticTriangle() })
		if err != nil {
			b.Fatal(err)
		}
		sites, err := solve.Places(f, p)
		if err != nil {
			b.Fatal(err)
		}
		s, err := assembly.Assemble(b.Context(), &f.Problem, 2)
		if err != nil {
			b.Fatal(err)
		}
		if _, err := modal.Build(b.Context(), s, sites, modal.Options{UpTo: 750, Threads: 2, Bare: true}); err != nil {
			b.Fatal(err)
		}
		unknowns = s.N
	}
	b.ReportMetric(float64(unknowns), "unknowns")
}

// BenchmarkMemory sets the memory that assembly and solution of the demo hold at most beside what the stage expects
// beforehand, where the system tells.
func BenchmarkMemory(b *testing.B) {
	g, p, _ := imported(b, "../../jobs/sandpiper", "airframe.hcl")
	for _, size := range []float64{0.005, 0.0025} {
		b.Run(strconv.FormatFloat(1e3*size, 'g', -1, 64)+"mm", func(b *testing.B) {
			m, err := mesh.Build(b.Context(), g, mesh.Options{Size: size, Element: "quadratic-triangle", Threads: 2})
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
			expected, peak := solve.Expected(&f.Problem), int64(0)
			for b.Loop() {
				debug.FreeOSMemory()
				_ = os.WriteFile("/proc/self/clear_refs", []byte("5"), 0) // forgets the peak
				held := memory(b, "VmRSS:")
				s, err := assembly.Assemble(b.Context(), &f.Problem, 2)
				if err != nil {
					b.Fatal(err)
				}
				if _, err := modal.Build(b.Context(), s, sites, modal.Options{UpTo: 1125, Threads: 2}); err != nil {
					b.Fatal(err)
				}
				peak = max(peak, memory(b, "VmHWM:")-held)
			}
			b.ReportMetric(float64(peak)/1e6, "peak-MB")
			b.ReportMetric(float64(expected)/1e6, "expected-MB")
		})
	}
}

// memory reads a line of the memory status of this process, in bytes.
func memory(b *testing.B, key string) int64 {
	text, err := os.ReadFile("/proc/self/status")
	if err != nil {
		b.Skip("this system does not tell what a process holds")
	}
	_, after, _ := strings.Cut(string(text), key)
	kb, err := strconv.ParseInt(strings.Fields(after + " 0")[0], 10, 64)
	if err != nil {
		b.Skip("this system does not tell what a process holds")
	}
	return kb * 1024
}
