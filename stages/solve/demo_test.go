package solve_test

import (
	"context"
	"math"
	"testing"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/element/shell"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/numeric/eigen"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/importgeom"
	"hushframe/stages/kinds"
)

// imported runs the import stage on a frame of the repository.
func imported(t testing.TB, folder, file string) (*airframe.Geometry, *airframe.Properties, *stage.Outcome) {
	t.Helper()
	call := &stage.Call{
		Arguments: stage.Arguments{"airframe": file}, Outputs: map[string]string{"geometry": t.TempDir(), "properties": t.TempDir()},
		Files: stage.NewFiles(folder), Threads: 2, Report: quiet{t},
	}
	o, err := (importgeom.Stage{}).Run(context.Background(), call)
	if err != nil {
		t.Fatal(err)
	}
	open := func(name string) *artifact.Artifact {
		a, err := artifact.Open(call.Outputs[name], kinds.Registry())
		if err != nil {
			t.Fatal(err)
		}
		return a
	}
	g, err := kinds.DecodeGeometry(open("geometry"))
	if err != nil {
		t.Fatal(err)
	}
	p, err := kinds.DecodeProperties(open("properties"))
	if err != nil {
		t.Fatal(err)
	}
	return g, p, o
}

// below returns the elastic frequencies (Hz) below a limit on a mesh, and the assembled system.
func below(t *testing.T, m *mesh.Mesh, p *airframe.Properties, limit float64) ([]float64, *assembly.System) {
	t.Helper()
	f, err := assembly.FromAirframe(m, p, func(string) element.Type { return shell.QuadraticTriangle() })
	if err != nil {
		t.Fatal(err)
	}
	s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
	if err != nil {
		t.Fatal(err)
	}
	w := 2 * math.Pi * limit
	res, err := eigen.Lowest(context.Background(), s.K, s.M, s.Ordering(), eigen.Options{Limit: w * w, Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	if !res.Status.Converged || !res.Status.Proved {
		t.Fatalf("the eigensolver ended with %+v", res.Status)
	}
	const rigid = 6
	if r := math.Sqrt(math.Abs(res.Values[rigid-1]) / res.Values[rigid]); !(r < 1e-3) {
		t.Errorf("the sixth rigid-body frequency is %.2g of the first elastic one", r)
	}
	var got []float64
	for _, v := range res.Values[rigid:] {
		if hz := math.Sqrt(v) / (2 * math.Pi); hz <= limit {
			got = append(got, hz)
		}
	}
	return got, s
}

// The demo frame on the mesh of its job and with every element of that cut in four, as for an error estimate: the same
// modes, each by Richardson's extrapolation within 1 %, all moved down, and the mass of the import stage, which sums
// areas and bodies by itself.
func TestDemoDoesNotDependOnTheMesh(t *testing.T) {
	g, p, o := imported(t, "../../jobs/sandpiper", "airframe.hcl")
	const limit = 750
	m, err := mesh.Build(context.Background(), g, mesh.Options{Size: 0.005, Element: "quadratic-triangle", Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	usual, s := below(t, m, p, limit)
	fine, _ := below(t, assembly.Refine(m), p, limit)
	t.Logf("%d unknowns; modes below %d Hz: %.4g", s.N, limit, usual)
	if len(usual) < 8 || len(usual) != len(fine) {
		t.Fatalf("%d modes, %d on the finer mesh", len(usual), len(fine))
	}
	worst := 0.0
	for i := range usual {
		if !(fine[i] < usual[i]) {
			t.Errorf("mode %d at %g Hz rises to %g on the finer mesh", i+1, usual[i], fine[i])
		}
		worst = max(worst, (usual[i]-fine[i])/3*4/usual[i]) // the error falls at least with the square of the size
	}
	t.Logf("the mesh puts modes off by %.2g %% at most", 100*worst)
	if worst > 0.01 {
		t.Errorf("the mesh puts a mode off by %.2g", worst)
	}
	if want := o.Figures["total_mass"].(stage.Quantity).SI; math.Abs(s.Mass-want) > 1e-4 {
		t.Errorf("the model weighs %.6f kg, the import stage says %.6f", s.Mass, want)
	}
	if s.N > 60000 {
		t.Errorf("%d unknowns are more than the demo should need", s.N)
	}
}
