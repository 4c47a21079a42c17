package eigen_test

import (
	"fmt"
	"testing"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

func BenchmarkLowest(b *testing.B) {
	for _, s := range []struct {
		name  string
		sheet trial.Sheet
	}{
		{"square-50k", trial.Sheet{Nx: 45, Ny: 45, Cell: 3e-3, Thick: 2e-3}},
		{"cross-50k", trial.Sheet{Nx: 90, Ny: 90, Cell: 3e-3, Thick: 2e-3, Keep: trial.Cross(90, 4)}},
	} {
		l := s.sheet.Lattice()
		order := sparse.Order(l.K.Pattern(), l.NodeOf, l.Coords)
		for threads := 1; threads <= 2; threads++ {
			b.Run(fmt.Sprintf("%s/modes=40/threads=%d", s.name, threads), func(b *testing.B) {
				var res *eigen.Result
				for b.Loop() {
					var err error
					res, err = eigen.Lowest(b.Context(), l.K, l.M, order, eigen.Options{Modes: 40, Threads: threads})
					if err != nil || !res.Status.Proved {
						b.Fatal(err, res)
					}
				}
				st := res.Stats
				b.ReportMetric(float64(st.Unknowns), "unknowns")
				b.ReportMetric(float64(st.Factor.Entries), "entries")
				b.ReportMetric(st.Factor.Flops/1e9, "GFLOP")
				b.ReportMetric(float64(st.Factorisations-1)*st.Factor.Flops/st.FactorSeconds/1e9, "factor-GFLOP/s")
				b.ReportMetric(4*float64(st.Solves)*float64(st.Factor.Entries)/st.SolveSeconds/1e9, "solve-GFLOP/s")
				b.ReportMetric(float64(st.Solves), "solves")
				b.ReportMetric(st.FactorSeconds, "s-factor")
				b.ReportMetric(st.SolveSeconds, "s-solve")
				b.ReportMetric(st.OrthogonalSeconds, "s-orthogonal")
				b.ReportMetric(st.RitzSeconds, "s-ritz")
				b.ReportMetric(st.CountSeconds, "s-count")
			})
		}
	}
}
