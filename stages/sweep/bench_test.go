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

// demoProblem takes the demo frame over for assembly, with the places whose motion is kept.
func demoProblem(b *testing.B, m *mesh.Mesh, p *airframe.Properties) (*assembly.Frame, []modal.Place) {
	b.Helper()
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
	return problem, places
}

// demoModes assembles the demo frame and solves its modes: the mode solve that the times of the response are set
// against. That is assembly, the modes with their count, and the residual vectors and sites.
func demoModes(b *testing.B, p *airframe.Properties, problem *assembly.Frame, places []modal.Place) *modal.Basis {
	b.Helper()
	system, err := assembly.Assemble(context.Background(), &problem.Problem, threads)
	if err != nil {
		b.Fatal(err)
	}
	st, err := modal.Build(context.Background(), system, places, modal.Options{UpTo: 750, Threads: threads})
	if err != nil {
		b.Fatal(err)
	}
	st.Basis.Dampen(problem.Loss, problem.Laws, p.Floor)
	return st.Basis
}

const threads = 2

// demoSweep is the response of the demo frame as far as the rotors at one speed go.
type demoSweep struct {
	set   settings
	fleet *fleet
	sys   *forced.System
	rest  *forced.Rest
	r     *kinds.Response
}

// newDemo reads the arguments; it does no work of the sweep.
func newDemo(b *testing.B, basis *modal.Basis, p *airframe.Properties) *demoSweep {
	b.Helper()
	set, err := read(call(b, &kinds.Modes{Basis: basis, Survey: &modal.Survey{}}, p, nil).Arguments)
	if err != nil {
		b.Fatal(err)
	}
	set.mapSpeeds = 200
	fleet, err := newFleet(basis, p, nil, set)
	if err != nil {
		b.Fatal(err)
	}
	return &demoSweep{set: set, fleet: fleet}
}

// sweep answers six components at four rotors at the gyro and ten more points.
func (d *demoSweep) sweep(b *testing.B, basis *modal.Basis) {
	b.Helper()
	ctx, set := context.Background(), d.set
	var err error
	if d.sys, err = forced.New(basis, d.fleet.options(set, true)); err != nil {
		b.Fatal(err)
	}
	list, err := probes(basis, d.sys, given{}, set)
	if err != nil {
		b.Fatal(err)
	}
	list = list[:min(11, len(list))]
	if d.rest, err = d.sys.Rest(ctx, forced.Grid(set.from, set.to, set.step, d.sys.Resonances(threads)), rows(list), threads); err != nil {
		b.Fatal(err)
	}
	tr, err := d.rest.Transfer(d.sys.Momenta())
	if err != nil {
		b.Fatal(err)
	}
	d.r = &kinds.Response{From: set.from, To: set.to, Frequency: d.rest.Frequency, Density: tr.Broadband(set.source).Density}
	if err := points(ctx, d.r, list, d.fleet, d.sys, d.rest, set, threads); err != nil {
		b.Fatal(err)
	}
}

// overSpeed makes the map over 200 rotor speeds.
func (d *demoSweep) overSpeed(b *testing.B) {
	b.Helper()
	for k := range d.set.mapSpeeds {
		d.r.MapSpeeds = append(d.r.MapSpeeds, d.fleet.highest()*float64(k+1)/float64(d.set.mapSpeeds))
	}
	if err := d.fleet.speedMap(context.Background(), d.r, d.sys, d.rest, d.set, threads); err != nil {
		b.Fatal(err)
	}
}

// BenchmarkDemo sets the response of the demo frame against its mode solve: the
// sweep of six components at four rotors to the gyro and ten points, 100 to 500 Hz, no
// step above 0.5 Hz, and the map over 200 rotor speeds. It prints seconds and ratios.
func BenchmarkDemo(b *testing.B) {
	m, p := demo(b)
	problem, places := demoProblem(b, m, p)
	var modes, sweep, over time.Duration
	var d *demoSweep
	for b.Loop() {
		began := time.Now()
		lap := func(to *time.Duration) {
			*to += time.Since(began)
			began = time.Now()
		}
		basis := demoModes(b, p, problem, places)
		lap(&modes)
		d = newDemo(b, basis, p)
		began = time.Now()
		d.sweep(b, basis)
		lap(&sweep)
		d.overSpeed(b)
		lap(&over)
	}
	n := float64(b.N)
	b.ReportMetric(modes.Seconds()/n, "modes-s")
	b.ReportMetric(sweep.Seconds()/n, "sweep-s")
	b.ReportMetric(over.Seconds()/n, "map-s")
	b.ReportMetric(sweep.Seconds()/modes.Seconds(), "sweep/modes")
	b.ReportMetric(over.Seconds()/modes.Seconds(), "map/modes")
	b.ReportMetric(float64(len(d.r.Frequency)), "frequencies")
	b.ReportMetric(float64(len(d.sys.Vectors())), "vectors")
}

// BenchmarkSweep times the sweep of BenchmarkDemo alone, over modes solved once.
func BenchmarkSweep(b *testing.B) {
	m, p := demo(b)
	problem, places := demoProblem(b, m, p)
	basis := demoModes(b, p, problem, places)
	d := newDemo(b, basis, p)
	for b.Loop() {
		d.sweep(b, basis)
	}
}
