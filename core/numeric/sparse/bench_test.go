package sparse_test

import (
	"fmt"
	"testing"

	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

// sheets are the sizes benchmarks run at; the cross has the shape of a frame.
var sheets = []struct {
	name  string
	sheet trial.Sheet
}{
	{"square-50k", trial.Sheet{Nx: 45, Ny: 45, Cell: 3e-3, Thick: 2e-3}},
	{"cross-50k", trial.Sheet{Nx: 90, Ny: 90, Cell: 3e-3, Thick: 2e-3, Keep: trial.Cross(90, 4)}},
	{"square-200k", trial.Sheet{Nx: 90, Ny: 90, Cell: 3e-3, Thick: 2e-3}},
}

func report(b *testing.B, a *sparse.Symmetric, an *sparse.Analysis) {
	b.ReportMetric(float64(a.N), "unknowns")
	b.ReportMetric(float64(an.Entries), "entries")
	b.ReportMetric(an.Flops/1e9, "GFLOP")
}

func BenchmarkOrder(b *testing.B) {
	for _, s := range sheets {
		l := s.sheet.Lattice()
		p := l.K.Pattern()
		for name, order := range map[string]func() sparse.Ordering{
			"degree":     func() sparse.Ordering { return sparse.MinimumDegree(p) },
			"dissection": func() sparse.Ordering { return sparse.NestedDissection(p, l.NodeOf, l.Coords) },
		} {
			b.Run(s.name+"/"+name, func(b *testing.B) {
				var o sparse.Ordering
				for b.Loop() {
					o = order()
				}
				an, err := sparse.Analyse(p, o)
				if err != nil {
					b.Fatal(err)
				}
				report(b, l.K, an)
			})
		}
	}
}

func BenchmarkAnalyse(b *testing.B) {
	for _, s := range sheets {
		l := s.sheet.Lattice()
		p := l.K.Pattern()
		o := sparse.Order(p, l.NodeOf, l.Coords)
		b.Run(s.name, func(b *testing.B) {
			for b.Loop() {
				if _, err := sparse.Analyse(p, o); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkFactorise(b *testing.B) {
	for _, s := range sheets {
		l := s.sheet.Lattice()
		p := l.K.Pattern()
		an, err := sparse.Analyse(p, sparse.Order(p, l.NodeOf, l.Coords))
		if err != nil {
			b.Fatal(err)
		}
		for shift, a := range map[string]*sparse.Symmetric{
			"below":  sparse.Combine(1, l.K, 1e5, l.M),
			"inside": sparse.Combine(1, l.K, -1e8, l.M),
		} {
			for threads := 1; threads <= 2; threads++ {
				b.Run(fmt.Sprintf("%s/%s/threads=%d", s.name, shift, threads), func(b *testing.B) {
					for b.Loop() {
						if _, err := an.Factorise(b.Context(), a, threads); err != nil {
							b.Fatal(err)
						}
					}
					report(b, a, an)
					b.ReportMetric(an.Flops*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
				})
			}
		}
	}
}

func BenchmarkSolve(b *testing.B) {
	const nrhs = 8
	for _, s := range sheets {
		l := s.sheet.Lattice()
		p := l.K.Pattern()
		an, err := sparse.Analyse(p, sparse.Order(p, l.NodeOf, l.Coords))
		if err != nil {
			b.Fatal(err)
		}
		f, err := an.Factorise(b.Context(), sparse.Combine(1, l.K, 1e5, l.M), 2)
		if err != nil {
			b.Fatal(err)
		}
		x := make([]float64, nrhs*l.K.N)
		for i := range x {
			x[i] = 1
		}
		for threads := 1; threads <= 2; threads++ {
			b.Run(fmt.Sprintf("%s/threads=%d", s.name, threads), func(b *testing.B) {
				for b.Loop() {
					f.SolveThreads(x, nrhs, threads)
				}
				b.ReportMetric(float64(l.K.N), "unknowns")
				b.ReportMetric(4*nrhs*float64(an.Entries)*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
			})
		}
	}
}

func BenchmarkMultiply(b *testing.B) {
	const nvec = 8
	l := sheets[0].sheet.Lattice()
	x, y := make([]float64, nvec*l.K.N), make([]float64, nvec*l.K.N)
	for b.Loop() {
		l.K.MulBlock(y, x, nvec)
	}
	b.ReportMetric(4*nvec*float64(len(l.K.Val))*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
}

func BenchmarkAssemble(b *testing.B) {
	l := sheets[0].sheet.Lattice()
	packed := make([]float64, 36*37/2)
	b.Run("pattern", func(b *testing.B) {
		for b.Loop() {
			sparse.NewAssembler(l.K.N, l.Elements)
		}
	})
	a := sparse.NewAssembler(l.K.N, l.Elements)
	b.Run("add", func(b *testing.B) {
		for b.Loop() {
			for e := range l.Elements {
				a.Add(e, packed)
			}
		}
		b.ReportMetric(float64(len(l.Elements)), "elements")
	})
}
