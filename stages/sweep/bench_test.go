package sweep

import (
	"context"
	"testing"
	"time"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/importgeom"
	"hushframe/stages/kinds"
)

// demo gives the mesh and the properties of the demo frame.
func demo(b *testing.B) (*mesh.Mesh, *airframe.Properties) {
	b.Helper()
	c := &stage.Call{Arguments: stage.Arguments{"airframe": "airframe.hcl"}, Outputs: map[string]string{"geometry": b.TempDir(), "properties": b.TempDir()},
		Files: stage.NewFiles("../../jobs/sandpiper"), Threads: 2, Report: silent{}}
	if _, err := (importgeom.Stage{}).Run(context.Background(), c); err != nil {
		b.Fatal(err)
	}
	open := func(name string) *artifact.Artifact {
		a, err := artifact.Open(c.Outputs[name], kinds.Registry())
		if err != nil {
			b.Fatal(err)
		}
		return a
	}
	g, err := kinds.DecodeGeometry(open("geometry"))
	if err != nil {
		b.Fatal(err)
	}
	p, err := kinds.DecodeProperties(open("properties"))
	if err != nil {
		b.Fatal(err)
	}
	m, err := mesh.Build(context.Background(), g, mesh.Options{Size: 0.005, Element: "quadratic-triangle", Threads: 2})
	if err != nil {
		b.Fatal(err)
	}
	return m, p
}

// BenchmarkDemo sets the response of the demo frame against its mode solve: the
// sweep of six components at four rotors to the gyro and ten points, 100 to 500 Hz, no
// step above 0.5 Hz, and the map over 200 rotor speeds. It prints seconds and ratios.
func BenchmarkDemo(b *testing.B) {
	m, p := demo(b)
	problem, err := assembly.FromAirframe(m, p, builtin)
	if err != nil {
		b.Fatal(err)
	}
	body := map[string]int{}
	var places []modal.Place
	for i, x := range p.Bodies {
		body[x.Name] = problem.BodyOf[i]
		if x.Kind == "lump" {
			places = append(places, modal.Place{Name: x.Name, Kind: "body", Body: problem.BodyOf[i], Point: x.Centre})
		}
	}
	for _, r := range p.Rotors {
		places = append(places, modal.Place{Name: r.Name, Kind: "rotor", Body: body[r.Body], Point: r.Hub})
	}
	places = append(places, modal.Place{Name: p.Gyro.Body, Kind: "gyro", Body: body[p.Gyro.Body], Point: p.Gyro.At})
	const threads = 2
	ctx := context.Background()
	var modes, sweep, over time.Duration
	var frequencies, vectors int
	for b.Loop() {
		began := time.Now()
		lap := func(d *time.Duration) {
			*d += time.Since(began)
			began = time.Now()
		}
		system, err := assembly.Assemble(ctx, &problem.Problem, threads)
		if err != nil {
			b.Fatal(err)
		}
		st, err := modal.Build(ctx, system, places, modal.Options{UpTo: 750, Threads: threads})
		if err != nil {
			b.Fatal(err)
		}
		lap(&modes)
		st.Basis.Dampen(problem.Loss, problem.Laws, p.Floor)
		set, err := read(call(b, &kinds.Modes{Basis: st.Basis, Survey: &modal.Survey{}}, p, nil).Arguments)
		if err != nil {
			b.Fatal(err)
		}
		set.mapSpeeds = 200
		fleet, err := newFleet(st.Basis, p, nil, set)
		if err != nil {
			b.Fatal(err)
		}
		began = time.Now()
		sys, err := forced.New(st.Basis, fleet.options(set, true))
		if err != nil {
			b.Fatal(err)
		}
		rest, err := sys.Rest(ctx, forced.Grid(set.from, set.to, set.step, sys.Resonances()), threads)
		if err != nil {
			b.Fatal(err)
		}
		tr, err := rest.Transfer(sys.Momenta())
		if err != nil {
			b.Fatal(err)
		}
		r := &kinds.Response{From: set.from, To: set.to, Frequency: rest.Frequency, Density: tr.Broadband(set.source).Density}
		list, err := probes(st.Basis, sys, given{}, set)
		if err != nil {
			b.Fatal(err)
		}
		if err := points(ctx, r, list[:min(11, len(list))], fleet, sys, set, threads); err != nil {
			b.Fatal(err)
		}
		lap(&sweep)
		for k := range set.mapSpeeds {
			r.MapSpeeds = append(r.MapSpeeds, fleet.highest()*float64(k+1)/float64(set.mapSpeeds))
		}
		if err := fleet.speedMap(ctx, r, sys, rest, set, threads); err != nil {
			b.Fatal(err)
		}
		lap(&over)
		frequencies, vectors = len(r.Frequency), len(sys.Vectors())
	}
	n := float64(b.N)
	b.ReportMetric(modes.Seconds()/n, "modes-s")
	b.ReportMetric(sweep.Seconds()/n, "sweep-s")
	b.ReportMetric(over.Seconds()/n, "map-s")
	b.ReportMetric(sweep.Seconds()/modes.Seconds(), "sweep/modes")
	b.ReportMetric(over.Seconds()/modes.Seconds(), "map/modes")
	b.ReportMetric(float64(frequencies), "frequencies")
	b.ReportMetric(float64(vectors), "vectors")
}
