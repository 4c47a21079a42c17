// Package sweep is the stage that drives the modes of a frame at its rotors and
// finds what the gyro feels.
package sweep

import (
	"context"
	"errors"
	"fmt"
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// Stage is the stage "sweep".
type Stage struct{}

var _ stage.Stage = Stage{}

// Describe implements stage.Stage.
func (Stage) Describe() stage.Description {
	frequency := stage.Type{Kind: stage.Amount, Dimension: "frequency", Unit: "Hz"}
	zero := 0.0
	one, less, many := 1.0, -1.0, 1000.0
	steadiest := 1e-3 // the grid does not resolve narrower lines
	d := stage.Description{
		Name:  "sweep",
		About: "predict the gyro rate that the rotors cause, over frequency",
		Doc: `Drives the modes with every force and moment component at every rotor hub and
reads the rotation rate of the gyro. Damping is hysteretic, by part, joint and
mount, and couples the modes; a mount with a law is taken as it is at each
frequency; the rigid-body motion is in the sum. Residual vectors stand in for the
modes left out, and what they change is shown. Frequencies are added around every
mode by its own damping, so that no peak is missed however light that is.

A broadband source of constant density acts at every rotor, the same along each
component, and is added over rotors as power unless correlation is declared. Its
densities are assumptions: the shape of the spectrum and where its peaks lie say
more than its level, unless the densities were measured.

Spinning rotors add their gyroscopic moments, at hover speed if not told
otherwise. Natural frequencies, damping and direction of whirl are followed from
rest to the highest speed, and critical speeds of orders 1, 2, blade passing and
twice that found with the gyroscopic moments at that very speed; mounts with a law
are then taken as they are in the middle of the sweep. A propeller is taken
as a disc: with two blades its tilt inertia changes as it turns, and blades that bend
carry less of the gyroscopic moment; neither is in the model.

Lines come from unbalance (what the balance grade of each rotor permits, or a
given one: a force at the hub that turns with the rotor), from thrust and side
force that vary at blade passing, and from torque ripple; all grow with the
square of speed. They are given at the speed of the rotors, over all speeds,
and spread over the speeds of a flight: what a recorder would see of it, the noise
of the gyro included. A recording can tell the speeds, or the job: as speeds with
their shares of the flight, or as throttles with the speed that each makes.

Besides the rate of the gyro the response holds its rotation, the displacement and
acceleration of named points, operating motions with their phase, what every mode
and every rotor makes of each peak, and the spectrum over rotor speed. With
check_at the full damped equations of every unknown are solved at some
frequencies, and the difference is shown.`,
		Arguments: []stage.Argument{
			{Name: "modes", About: "modal basis from solve", Type: artifactOf("modes"), Required: true},
			{Name: "properties", About: "properties from import", Type: artifactOf("properties"), Required: true},
			{Name: "from", About: "lower end of the sweep", Type: frequency, Default: hertz(100), Example: `"100 Hz"`, Above: &zero},
			{Name: "to", About: "upper end of the sweep", Type: frequency, Default: hertz(500), Example: `"500 Hz"`, Above: &zero},
			{Name: "resolution", About: "largest step; near modes it is finer by itself", Type: frequency, Default: hertz(0.5), Example: `"0.5 Hz"`, Above: &zero},
			{Name: "force_density", About: "assumed one-sided density of each force component at each rotor",
				Type:    stage.Type{Kind: stage.Amount, Dimension: "force density", Unit: "N2/Hz"},
				Default: stage.Quantity{SI: 1e-6, Dimension: "force density"}, Example: `"1e-6 N2/Hz"`, Min: &zero},
			{Name: "moment_density", About: "assumed one-sided density of each moment component at each rotor",
				Type:    stage.Type{Kind: stage.Amount, Dimension: "moment density", Unit: "(N*m)2/Hz"},
				Default: stage.Quantity{SI: 1e-9, Dimension: "moment density"}, Example: `"1e-9 (N*m)2/Hz"`, Min: &zero},
			{Name: "blade_share", About: "assumed amplitude of the thrust at blade passing, as a share of the thrust at hover",
				Type: stage.Type{Kind: stage.Number}, Default: 0.01, Example: "0.01", Min: &zero, Max: &one},
			{Name: "side_share", About: "assumed amplitude of the side force at blade passing, as a share of the thrust at hover",
				Type: stage.Type{Kind: stage.Number}, Default: 0.0, Example: "0.005", Min: &zero, Max: &one},
			{Name: "unbalance", About: "unbalance of every rotor; left out, what its balance grade permits",
				Type: stage.Type{Kind: stage.Amount, Dimension: "unbalance", Unit: "g*mm"}, Example: `"0.3 g*mm"`, Min: &zero},
			{Name: "torque_ripple", About: "assumed amplitude of the motor's torque ripple at hover",
				Type: stage.Type{Kind: stage.Amount, Dimension: "moment", Unit: "N*m"}, Default: stage.Quantity{SI: 0, Dimension: "moment"}, Example: `"0.001 N*m"`, Min: &zero},
			{Name: "ripple_order", About: "order of the torque ripple: a brushless motor has it at multiples of its poles and slots",
				Type: stage.Type{Kind: stage.Number}, Default: 6.0, Example: "6", Above: &zero},
			{Name: "correlation", About: "bands in which the broadband force of the rotors is correlated, by a coefficient from -1 to 1; elsewhere it is not",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Object, Fields: []stage.Argument{
					{Name: "from", About: "lower end of the band", Type: frequency, Default: hertz(0), Example: `"0 Hz"`, Min: &zero},
					{Name: "to", About: "upper end of the band; left out, none", Type: frequency, Example: `"80 Hz"`, Above: &zero},
					{Name: "coefficient", About: "1 in step, 0 unrelated, negative against each other", Type: stage.Type{Kind: stage.Number}, Required: true, Example: "0.5", Min: &less, Max: &one},
				}}}, Example: `[{ from = "0 Hz", to = "80 Hz", coefficient = 0.8 }]`},
			{Name: "speed_spread", About: "assumed standard deviation of rotor speed over a flight, as a share of the speed",
				Type: stage.Type{Kind: stage.Number}, Default: 0.03, Example: "0.03", Min: &steadiest, Max: &one},
			{Name: "speeds_flown", About: "speeds of the first rotor over a flight with the share of each; left out, that of this response",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Object, Fields: []stage.Argument{
					{Name: "speed", About: "speed of the first rotor", Type: stage.Type{Kind: stage.Amount, Dimension: "rotational speed", Unit: "rpm"}, Required: true, Example: `"16000 rpm"`, Above: &zero},
					{Name: "share", About: "part of the flight, any unit", Type: stage.Type{Kind: stage.Number}, Required: true, Example: "0.7", Above: &zero},
				}}}, Example: `[{ speed = "15000 rpm", share = 0.7 }, { speed = "19000 rpm", share = 0.3 }]`},
			{Name: "throttle_flown", About: "throttles over a flight with the share of each, where speeds are not known; takes speed_at_throttle",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Object, Fields: []stage.Argument{
					{Name: "throttle", About: "throttle, from 0 to 1", Type: stage.Type{Kind: stage.Number}, Required: true, Example: "0.35", Min: &zero, Max: &one},
					{Name: "share", About: "part of the flight, any unit", Type: stage.Type{Kind: stage.Number}, Required: true, Example: "0.7", Above: &zero},
				}}}, Example: `[{ throttle = 0.35, share = 0.7 }, { throttle = 0.6, share = 0.3 }]`},
			{Name: "speed_at_throttle", About: "speed of the first rotor at some throttles, straight between them, for throttle_flown or for a recording that has throttle and no rotor speeds",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Object, Fields: []stage.Argument{
					{Name: "throttle", About: "throttle, from 0 to 1", Type: stage.Type{Kind: stage.Number}, Required: true, Example: "0.2", Min: &zero, Max: &one},
					{Name: "speed", About: "speed of the first rotor there", Type: stage.Type{Kind: stage.Amount, Dimension: "rotational speed", Unit: "rpm"}, Required: true, Example: `"9500 rpm"`, Above: &zero},
				}}}, Example: `[{ throttle = 0.2, speed = "9500 rpm" }, { throttle = 0.7, speed = "24000 rpm" }]`},
			{Name: "map_speeds", About: "number of even rotor speeds, up to the highest, of the maps over rotor speed",
				Type: stage.Type{Kind: stage.Whole}, Default: 200.0, Example: "200", Min: &one, Max: &many},
			{Name: "recording", About: "spectra from record, whose rotor speeds then say how a flight is spread over speeds; its throttle does, where speed_at_throttle is given",
				Type: artifactOf("spectra")},
			{Name: "gyro_noise", About: "assumed one-sided density of the gyro's own noise on each axis, in what a recorder sees of a flight",
				Type:    stage.Type{Kind: stage.Amount, Dimension: "angular rate density", Unit: "(deg/s)2/Hz"},
				Default: stage.Quantity{SI: 2.5e-5 * degree * degree, Dimension: "angular rate density"}, Example: `"2.5e-5 (deg/s)2/Hz"`, Min: &zero},
			{Name: "points", About: "further named points: the node of a part of the mesh nearest to a place; bodies, rotors and the gyro are points anyway",
				Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Object, Fields: []stage.Argument{
					{Name: "name", About: "name of the point", Type: stage.Type{Kind: stage.Text}, Required: true, Example: `"nose"`},
					{Name: "at", About: "place in airframe axes: x forward, y left, z up", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Amount, Dimension: "length", Unit: "mm"}}, Required: true, Example: `["70 mm", "0 mm", "25 mm"]`},
					{Name: "part", About: "plate or standoff it lies on; left out, any", Type: stage.Type{Kind: stage.Text}, Example: `"top"`},
				}}}, Example: `[{ name = "nose", at = ["70 mm", "0 mm", "25 mm"], part = "top" }]`},
			{Name: "mesh", About: "mesh from mesh, for points and check_at", Type: artifactOf("mesh")},
			{Name: "check_at", About: "frequencies at which the full damped equations are solved as well, to hold the modal response against; takes mesh, and about as long as the modes for every ten",
				Type: stage.Type{Kind: stage.List, Element: &frequency}, Example: `["121 Hz", "290 Hz"]`},
			{Name: "rotor_speed", About: "speed of the spinning rotors: hover, none (no gyroscopic moments), or that of the first rotor, the others in the ratio of their hover speeds",
				Type: stage.Type{Kind: stage.Text}, Default: "hover", Example: `"16000 rpm"`},
			{Name: "residual", About: "correct for the modes left out, by residual vectors", Type: stage.Type{Kind: stage.Truth}, Default: true, Example: "true"},
			{Name: "prominence", About: "how far a peak stands above the valleys beside it, in dB, to be listed",
				Type: stage.Type{Kind: stage.Number}, Default: 1.0, Example: "1", Above: &zero},
			{Name: "shapes_at", About: "frequencies whose operating shapes are kept; left out, the strongest peak of each axis",
				Type: stage.Type{Kind: stage.List, Element: &frequency}, Example: `["212 Hz", "340 Hz"]`},
		},
		Outputs: []stage.Output{{Name: "response", Kind: "response", About: "transfer functions, spectra, peaks, lines, named points, operating motions, and all this over rotor speed"}},
	}
	for _, axis := range kinds.AxisNames {
		d.Figures = append(d.Figures,
			stage.Figure{Name: "peak_" + axis, About: "frequency of the strongest peak on " + axis + ", not a number if there is none", Type: frequency},
			stage.Figure{Name: "peak_level_" + axis, About: "density of that peak", Type: stage.Type{Kind: stage.Amount, Dimension: "angular rate density", Unit: "(deg/s)2/Hz"}},
			stage.Figure{Name: "rms_" + axis, About: "root mean square gyro rate within the sweep on " + axis, Type: stage.Type{Kind: stage.Amount, Dimension: "angular rate", Unit: "deg/s"}},
		)
	}
	d.Figures = append(d.Figures,
		stage.Figure{Name: "direct_error", About: "greatest difference of the modal response from the direct solve at the frequencies of check_at, relative; not a number without", Type: stage.Type{Kind: stage.Number}},
		stage.Figure{Name: "points", About: "named points as objects with name, kind, displacement and acceleration, root mean square over x, y and z together", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Any}}},
		stage.Figure{Name: "peaks", About: "peaks as objects with axis, frequency, level, damping and modes", Type: stage.Type{Kind: stage.List, Element: &stage.Type{Kind: stage.Any}}})
	return d
}

func artifactOf(kind string) stage.Type {
	return stage.Type{Kind: stage.Artifact, Kinds: []string{kind}}
}

func hertz(f float64) stage.Quantity { return stage.Quantity{SI: f, Dimension: "frequency"} }

// settings are the arguments in SI units.
type settings struct {
	from, to, step float64
	source         forced.Broadband
	bladeShare     float64
	residual       bool
	prominence     float64 // power ratio
	shapesAt       []float64
	spinning       bool
	speed          float64 // of the first rotor, rad/s; NaN at hover
	unbalance      float64 // kg·m; NaN for the grade
	sideShare      float64
	ripple         float64 // N·m
	rippleOrder    float64
	spread         float64
	flown          []flight
	throttles      []throttled // over a flight, as told or recorded
	curve          curve
	noise          float64 // of the gyro, (rad/s)²/Hz
	points         []pointAt
	checkAt        []float64
	mapSpeeds      int // number
}

// mostFrequencies bounds the size of a response.
const mostFrequencies = 50_000

func read(a stage.Arguments) (settings, error) {
	s := settings{
		from: a.SI("from"), to: a.SI("to"), step: a.SI("resolution"),
		source:     forced.Broadband{Force: a.SI("force_density"), Moment: a.SI("moment_density")},
		bladeShare: a.Number("blade_share"), residual: a.Truth("residual"),
		prominence: math.Pow(10, a.Number("prominence")/10), shapesAt: a.SIs("shapes_at"), checkAt: a.SIs("check_at"), mapSpeeds: a.Whole("map_speeds"),
	}
	s.sideShare, s.ripple, s.rippleOrder, s.spread = a.Number("side_share"), a.SI("torque_ripple"), a.Number("ripple_order"), a.Number("speed_spread")
	s.unbalance = math.NaN()
	if a.Has("unbalance") {
		s.unbalance = a.SI("unbalance")
	}
	s.flown, s.noise = readFlown(a.List("speeds_flown")), a.SI("gyro_noise")
	s.throttles = readThrottles(a.List("throttle_flown"))
	var err error
	if s.curve, err = readCurve(a.List("speed_at_throttle")); err != nil {
		return s, err
	}
	if s.points, err = readPoints(a.List("points")); err != nil {
		return s, err
	}
	if s.source.Together, err = readTogether(a.List("correlation")); err != nil {
		return s, err
	}
	if s.spinning, s.speed, err = readSpeed(a.Text("rotor_speed")); err != nil {
		return s, err
	}
	switch {
	case !(s.to > s.from):
		return s, fault.New(fault.Input, "the sweep ends at %g Hz, where it has not begun", s.to).In("sweep", "").Of("to").
			Do("make it higher than from, which is %g Hz", s.from)
	case (s.to-s.from)/s.step > mostFrequencies:
		return s, fault.New(fault.Input, "%g Hz in steps of %g Hz are more than %d frequencies", s.to-s.from, s.step, mostFrequencies).
			In("sweep", "").Of("resolution").Do("choose a larger step; near modes it is finer by itself")
	case s.source.Force == 0 && s.source.Moment == 0:
		return s, fault.New(fault.Input, "both densities are zero, so nothing drives the frame").In("sweep", "").Of("force_density").
			Do("give at least one of force_density and moment_density")
	}
	for _, f := range s.checkAt {
		if !(f > 0) {
			return s, fault.New(fault.Input, "a free frame has no response at %g Hz", f).In("sweep", "").Of("check_at").Do("name frequencies above 0 Hz")
		}
	}
	for _, f := range s.shapesAt {
		if !(f > 0) {
			return s, fault.New(fault.Input, "a free frame has no operating shape at %g Hz", f).In("sweep", "").Of("shapes_at").
				Do("name frequencies above 0 Hz")
		}
	}
	return s, nil
}

// Run implements stage.Stage.
func (Stage) Run(ctx context.Context, call *stage.Call) (*stage.Outcome, error) {
	set, err := read(call.Arguments)
	if err != nil {
		return nil, err
	}
	call.Report.Progress("read", -1)
	basis, reach, err := readBasis(call)
	if err != nil {
		return nil, err
	}
	props, err := readInput(call, "properties", kinds.DecodeProperties)
	if err != nil {
		return nil, err
	}
	if err := agree(set, props, reach); err != nil {
		return nil, err
	}
	given, err := readGiven(call, set)
	if err != nil {
		return nil, err
	}
	if err := set.steer(given.recorded); err != nil {
		return nil, err
	}
	r, err := respond(ctx, basis, props, given, set, call.Threads, call.Report)
	if err != nil {
		return nil, explain(err)
	}
	r.ModesTo = reach
	r.Practice = practice(r)
	call.Report.Progress("write", -1)
	if _, err := artifact.Write(call.Outputs["response"], kinds.EncodeResponse(r)); err != nil {
		return nil, err
	}
	return outcome(r, given, set), nil
}

// agree checks the arguments against the modes and the rotors.
func agree(set settings, p *airframe.Properties, reach float64) error {
	if set.to > reach*(1+1e-9) {
		lower := ""
		if end := math.Floor(reach / 1.5); end > set.from {
			lower = fmt.Sprintf(", or end the sweep at %.4g Hz", end)
		}
		return fault.New(fault.Input, "the sweep goes to %g Hz, the modes only to %g Hz, so that modes within the sweep are missing", set.to, reach).In("sweep", "").Of("to").
			Do("raise up_to of solve to %.4g Hz, 1.5 times as high as the sweep%s", math.Ceil(1.5*set.to), lower)
	}
	for _, f := range set.shapesAt {
		if f > reach*(1+1e-9) {
			return fault.New(fault.Input, "an operating shape is asked for at %g Hz, the modes only go to %g Hz", f, reach).In("sweep", "").Of("shapes_at").
				Do("raise up_to of solve to %.4g Hz, 1.5 times as high", math.Ceil(1.5*f))
		}
	}
	if len(p.Rotors) == 0 {
		return fault.New(fault.Input, "the airframe has no rotor, so nothing drives it").In("sweep", "").Of("properties").
			Do("add a rotor block to the airframe file; modes can be had without")
	}
	for _, r := range p.Rotors {
		if r.Blades < 1 {
			return fault.New(fault.Input, "a rotor of %d blades passes nothing", r.Blades).In("sweep", "rotor "+r.Name).Of("properties").
				Do("give its blades in the airframe file; a bare motor that only weighs is a lump")
		}
	}
	return correlated(set, len(p.Rotors))
}

// given are the inputs that a sweep may do without.
type given struct {
	mesh     *mesh.Mesh
	recorded *kinds.Spectra
}

func readGiven(call *stage.Call, set settings) (given, error) {
	var g given
	var err error
	if len(call.Inputs["mesh"]) > 0 {
		if g.mesh, err = readInput(call, "mesh", kinds.DecodeMesh); err != nil {
			return g, err
		}
	}
	if len(call.Inputs["recording"]) > 0 {
		if len(set.flown) > 0 {
			return g, fault.New(fault.Input, "both the recording and speeds_flown say how a flight is spread over speeds").In("sweep", "").Of("speeds_flown").Do("leave one of them out")
		}
		if g.recorded, err = readInput(call, "recording", kinds.DecodeSpectra); err != nil {
			return g, err
		}
	}
	if g.mesh == nil && len(set.points) > 0 {
		return g, fault.New(fault.Input, "a point at a place is found on the mesh, which is not given").In("sweep", "point "+set.points[0].name).Of("points").
			Do("add mesh = stage.shells.mesh, after the name of your mesh stage, to the sweep")
	}
	if g.mesh == nil && len(set.checkAt) > 0 {
		return g, fault.New(fault.Input, "the full equations are assembled from the mesh, which is not given").In("sweep", "").Of("check_at").
			Do("add mesh = stage.shells.mesh, after the name of your mesh stage, to the sweep")
	}
	return g, nil
}

func readInput[T any](call *stage.Call, name string, decode func(*artifact.Artifact) (T, error)) (T, error) {
	a, err := artifact.Open(call.Inputs[name][0].Folder, kinds.Registry())
	if err != nil {
		var none T
		return none, err
	}
	return decode(a)
}

// explain turns what the kernel says into a fault.
func explain(err error) error {
	var said *fault.Error
	if errors.As(err, &said) {
		return said
	}
	var unbounded *forced.Unbounded
	if errors.As(err, &unbounded) {
		return fault.New(fault.Numeric, "%v", err).In("sweep", fmt.Sprintf("%g Hz", unbounded.Frequency)).
			Do("give the materials, joints and mounts a loss factor, or the airframe a floor")
	}
	if errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return fault.From(err)
	}
	return fault.New(fault.Input, "%v", err).In("sweep", "modes").Of("modes")
}

// readBasis gives the modal basis and the frequency below which it is complete.
func readBasis(call *stage.Call) (*modal.Basis, float64, error) {
	m, err := readInput(call, "modes", kinds.DecodeModes)
	if err != nil {
		return nil, 0, err
	}
	return m.Basis, m.UpTo, nil
}
