package kinds

import (
	"slices"

	"hushframe/core/pipeline/artifact"
)

// ResponseKind is what `sweep` makes of a modal basis and assumed sources.
// Elastic modes are numbered from 1 in ascending frequency.
var ResponseKind = artifact.Kind{
	Name: "response", Version: 5,
	About: "gyro rate that forces and moments at the rotors make: transfer functions, spectra, peaks and the modes that make them, lines at hover, operating shapes",
	Scalars: []artifact.Column{
		col("from", artifact.Float, "Hz", "lower end of the sweep"),
		col("to", artifact.Float, "Hz", "upper end of the sweep"),
		col("modes_to", artifact.Float, "Hz", "frequency up to which the basis holds every mode, as far as it shows"),
		col("force_density", artifact.Float, "N^2/Hz", "assumed one-sided density of each force component at each rotor"),
		col("moment_density", artifact.Float, "(N*m)^2/Hz", "assumed one-sided density of each moment component at each rotor"),
		col("residual", artifact.Truth, "", "the basis holds residual vectors and they are in use"),
		col("thrust", artifact.Float, "N", "thrust of one rotor at hover, weight over the number of rotors; NaN if the mass is not known"),
		col("blade_share", artifact.Float, "1", "assumed amplitude of the thrust at blade passing, as a share of the thrust"),
		col("spinning", artifact.Truth, "", "gyroscopic moments of the rotors are in the response"),
		col("first_mode", artifact.Float, "Hz", "natural frequency of the lowest elastic mode; below it the frame follows its loads as it would at rest"),
		col("gyro_noise", artifact.Float, "(rad/s)^2/Hz", "assumed one-sided density of the gyro's own noise on each axis, in the columns flown_ of the spectrum"),
	},
	Tables: slices.Concat([]artifact.TableSpec{
		{Name: "spectrum", About: "gyro rate under the broadband source, all rotors added as power", Columns: columns(
			col("frequency", artifact.Float, "Hz", "ascending, not evenly spaced"),
			axisCols("", "(rad/s)^2/Hz", "one-sided power spectral density"),
			axisCols("uncorrected_", "(rad/s)^2/Hz", "the same without residual vectors; NaN if the basis has none or they are off"),
			axisCols("flown_", "(rad/s)^2/Hz", "what a recorder sees of a flight: the broadband density at the speeds of the table flight, weighted by their shares, the rotors' lines spread over them, and the noise of the gyro; NaN if rotors have no speed"),
			axisCols("rigid_", "(rad/s)^2/Hz", "the broadband density of the frame taken as rigid"),
			axisCols("static_", "(rad/s)^2/Hz", "the same with every elastic mode following its load as if at rest: rigid-body motion and the give of plates and mounts under the gyro, without resonance"),
		)},
		{Name: "sources", About: "the part of each rotor in the spectrum", Columns: columns(
			col("rotor", artifact.Text, "", "name"),
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("density", artifact.FloatList, "(rad/s)^2/Hz", "at the frequencies of the spectrum"),
		)},
		{Name: "transfer", About: "gyro rate per force or moment component, time dependence e^(+iωt)", Columns: columns(
			col("rotor", artifact.Text, "", "name"),
			col("component", artifact.Int, "", "0 to 2 force along x, y, z; 3 to 5 moment about them"),
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("real", artifact.FloatList, "rad/s per N or N*m", "at the frequencies of the spectrum"),
			col("imaginary", artifact.FloatList, "rad/s per N or N*m", "at the frequencies of the spectrum"),
		)},
		{Name: "axes", About: "one row per axis: roll, pitch, yaw", Columns: columns(
			col("axis", artifact.Text, "", "name"),
			col("rms", artifact.Float, "rad/s", "root mean square within the sweep"),
			col("correction", artifact.Float, "dB", "largest change that residual vectors make to the density, signed; NaN if not computed"),
			col("correction_at", artifact.Float, "Hz", "where that is"),
			col("give_force", artifact.Float, "rad/N", "rotation of the gyro by which the frame gives at rest under a unit force, root sum of squares over all components at all hubs, rigid-body motion not counted"),
			col("give_moment", artifact.Float, "rad/(N*m)", "the same under a unit moment"),
		)},
		{Name: "peaks", About: "peaks of the spectrum, by axis and frequency", Columns: columns(
			col("axis", artifact.Text, "", "roll, pitch or yaw"),
			col("frequency", artifact.Float, "Hz", "refined between the frequencies of the spectrum"),
			col("density", artifact.Float, "(rad/s)^2/Hz", "at the peak"),
			col("prominence", artifact.Float, "1", "density over the higher of the two valleys beside it"),
			col("damping", artifact.Float, "1", "damping ratio of the leading mode, at the rotors' speed if they spin and else half its loss factor alone; NaN if none leads"),
			col("modes", artifact.IntList, "", "elastic modes that make the peak, the strongest first; with spinning rotors the natural motions followed from them"),
			col("shares", artifact.FloatList, "1", "what each adds, projected on the total; negative works against it"),
			col("rigid", artifact.Float, "1", "what the rigid-body motion adds"),
			col("residual", artifact.Float, "1", "what the residual vectors add; with spinning rotors all that is left"),
			col("uncorrected", artifact.Float, "1", "density without residual vectors over density; NaN if not computed"),
			col("rotor", artifact.Text, "", "rotor of the strongest component"),
			col("component", artifact.Int, "", "strongest component, 0 to 5"),
			col("component_share", artifact.Float, "1", "its part of the density"),
			col("mode_shares", artifact.FloatList, "1", "what every elastic mode of the table modes adds, in its order; with spinning rotors the natural motions followed from them, 0 where one could not be followed; may be empty"),
			col("rotor_shares", artifact.FloatList, "1", "what every rotor of the table rotors makes alone, in its order; adds up to 1 unless rotors are correlated; may be empty"),
			col("losses", artifact.TextList, "", "loss groups that take the power put in by it, the greatest first"),
			col("loss_shares", artifact.FloatList, "1", "the part each takes"),
		)},
		{Name: "modes", About: "elastic modes of the basis", Columns: columns(
			col("number", artifact.Int, "", "from 1"),
			col("frequency", artifact.Float, "Hz", "natural frequency without damping"),
			col("damping", artifact.Float, "1", "damping ratio, half the loss factor of the mode alone"),
		)},
		{Name: "rotors", About: "rotors and the speeds of their orders", Columns: columns(
			col("rotor", artifact.Text, "", "name"),
			col("blades", artifact.Int, "", "number of blades"),
			col("hover", artifact.Float, "rad/s", "speed at hover"),
			col("highest", artifact.Float, "rad/s", "highest service speed"),
			col("speed", artifact.Float, "rad/s", "speed in this response, with or without gyroscopic moments"),
			col("polar", artifact.Float, "kg*m^2", "moment of inertia of what spins, about the shaft"),
			col("bell", artifact.Float, "kg*m^2", "what the bell of the motor has of polar; NaN if not known"),
			col("propeller", artifact.Float, "kg*m^2", "what the propeller has of polar; NaN if not known"),
			col("tilt", artifact.Float, "kg*m^2", "moment of inertia of motor and propeller about an axis square to the shaft; NaN without a body"),
			col("equal", artifact.Float, "Hz", "frequency below which the gyroscopic moment at that speed exceeds the moment of the tilt inertia; NaN without a body"),
		)},
		{Name: "speeds", About: "rotor speeds of the table whirl, ascending from 0", Columns: columns(
			col("speed", artifact.Float, "rad/s", "speed of the first rotor; the others keep the ratio they have at hover"),
		)},
		{Name: "whirl", About: "natural motions of the damped frame over rotor speed, each followed from a mode at rest", Columns: columns(
			col("mode", artifact.Int, "", "elastic mode that it is at rest"),
			col("frequency", artifact.FloatList, "Hz", "at the speeds of the table speeds; NaN where it could not be followed"),
			col("damping", artifact.FloatList, "1", "damping ratio"),
			col("direction", artifact.FloatList, "1", "how rotors tilt: 1 round with their spin, -1 against it, 0 to and fro; NaN if none tilts"),
		)},
		{Name: "separations", About: "neighbouring natural motions at the speed of this response, by frequency", Columns: columns(
			col("lower", artifact.Int, "", "elastic mode that the lower one is at rest"),
			col("upper", artifact.Int, "", "the same of the upper one"),
			col("at", artifact.Float, "Hz", "frequency of the lower one"),
			col("gap", artifact.Float, "Hz", "distance"),
			col("bandwidths", artifact.Float, "1", "the same in half-power bandwidths, the mean of both"),
			axisCols("lower_", "(rad/s)^2/Hz", "highest density that the lower one makes alone under the broadband source"),
			axisCols("upper_", "(rad/s)^2/Hz", "the same of the upper one"),
			axisCols("amplification_", "1", "highest density of both together over the higher of those alone; NaN if neither is felt"),
		)},
		{Name: "map_speeds", About: "rotor speeds of the table map, ascending", Columns: columns(
			col("speed", artifact.Float, "rad/s", "speed of the first rotor; the others keep the ratio they have at hover"),
		)},
		{Name: "map", About: "lines over rotor speed, with the gyroscopic moments of each speed if rotors spin; rotors of one frequency added as power", Columns: columns(
			col("source", artifact.Text, "", "unbalance, blade passing, blade side force or torque ripple"),
			col("order", artifact.Float, "1", "multiple of the speed of the first rotor"),
			col("rotors", artifact.TextList, "", "whose lines they are"),
			col("roll", artifact.FloatList, "rad/s", "peak amplitude at the speeds of the table map_speeds"),
			col("pitch", artifact.FloatList, "rad/s", "the same"),
			col("yaw", artifact.FloatList, "rad/s", "the same"),
		)},
		{Name: "critical", About: "rotor speeds at which an order has the frequency of a natural motion at that very speed", Columns: columns(
			col("order", artifact.Int, "", "multiple of the rotors' speed"),
			col("rotors", artifact.TextList, "", "whose order it is"),
			col("speed", artifact.Float, "rad/s", "of these rotors"),
			col("frequency", artifact.Float, "Hz", "of the motion"),
			col("damping", artifact.Float, "1", "damping ratio"),
			col("direction", artifact.Float, "1", "as in the table whirl"),
			col("mode", artifact.Int, "", "elastic mode that it is at rest"),
		)},
		{Name: "lines", About: "gyro rate at single frequencies at hover speed", Columns: columns(
			col("source", artifact.Text, "", "unbalance, blade passing (of the thrust), blade side force (of unknown direction) or torque ripple"),
			col("rotor", artifact.Text, "", "name; \"all\" is the root sum of squares over rotors of equal frequency"),
			col("order", artifact.Float, "1", "multiple of the rotor's speed"),
			col("frequency", artifact.Float, "Hz", ""),
			col("force", artifact.Float, "N or N*m", "amplitude at one rotor, not a number for all rotors where they differ; N*m for torque ripple"),
			axisCols("", "rad/s", "peak amplitude"),
		)},
		{Name: "shapes", About: "operating shapes: motion of the mesh nodes under one unit of one component", Columns: columns(
			col("frequency", artifact.Float, "Hz", ""),
			col("axis", artifact.Text, "", "axis whose peak this is; \"\" when the frequency was asked for"),
			col("rotor", artifact.Text, "", "driven rotor"),
			col("component", artifact.Int, "", "driven component, 0 to 5"),
			col("real", artifact.FloatList, "m", "ux, uy, uz of each node in turn"),
			col("imaginary", artifact.FloatList, "m", "the same"),
		)},
	}, overTables(), motionTables(), checkTables()),
}

// AxisNames are the axes of the gyro in order of their index.
var AxisNames = [3]string{"roll", "pitch", "yaw"}

// ComponentNames are the force and moment components in order of their index.
var ComponentNames = [6]string{"force x", "force y", "force z", "moment x", "moment y", "moment z"}

// Response is the content of a response artifact; the descriptions of ResponseKind hold.
type Response struct {
	From, To, ModesTo  float64
	Force, Moment      float64
	Residual           bool
	Thrust, BladeShare float64
	Spinning           bool

	Frequency   []float64
	Density     [3][]float64
	Uncorrected [3][]float64 // NaN when not computed
	Sources     []ResponseSource
	Transfer    []ResponseTransfer
	Axes        []ResponseAxis
	Peaks       []ResponsePeak
	Modes       []ResponseMode
	Rotors      []ResponseRotor
	Lines       []ResponseLine
	Shapes      []ResponseShape

	Speeds   []float64
	Whirl    []ResponseWhirl
	Critical []ResponseCritical

	Separations []ResponseSeparation

	MapSpeeds []float64
	Orders    []ResponseOrder
	Flown     [3][]float64 // nil when rotors have no speed

	FirstMode, GyroNoise float64
	// Rigid and Static are the spectrum of the frame taken as rigid, and as rigid but for its static give.
	Rigid, Static [3][]float64

	Map    ResponseMap
	Flight []ResponseFlight

	Motions      []ResponseMotion
	Points       []ResponsePoint
	PointSpectra []ResponsePointSpectrum
	PointLines   []ResponsePointLine

	Direct       []ResponseDirect
	DirectErrors []ResponseDirectError
	Practice     []ResponsePractice
}

// ResponseSeparation is a pair of neighbours.
type ResponseSeparation struct {
	Lower, Upper           int
	At, Gap, Bandwidths    float64
	LowerAlone, UpperAlone [3]float64
	Amplification          [3]float64
}

// ResponseOrder is one line over the speeds of the map.
type ResponseOrder struct {
	Source string
	Order  float64
	Rotors []string
	Rate   [3][]float64
}

// ResponseWhirl is one natural motion over the rotor speeds.
type ResponseWhirl struct {
	Mode                          int
	Frequency, Damping, Direction []float64
}

// ResponseCritical is one critical speed.
type ResponseCritical struct {
	Order                                int
	Rotors                               []string
	Speed, Frequency, Damping, Direction float64
	Mode                                 int
}

// ResponseSource is the part of one rotor in the spectrum of one axis.
type ResponseSource struct {
	Rotor, Axis string
	Density     []float64
}

// ResponseTransfer is one transfer function over the frequencies of the spectrum.
type ResponseTransfer struct {
	Rotor           string
	Component       int
	Axis            string
	Real, Imaginary []float64
}

// ResponseAxis sums up one axis.
type ResponseAxis struct {
	Axis                          string
	RMS, Correction, CorrectionAt float64
	GiveForce, GiveMoment         float64
}

// ResponsePeak is one peak of one axis.
type ResponsePeak struct {
	Axis                           string
	Frequency, Density, Prominence float64
	Damping                        float64
	Modes                          []int
	Shares                         []float64
	Rigid, Residual, Uncorrected   float64
	Rotor                          string
	Component                      int
	ComponentShare                 float64
	Losses                         []string
	LossShares                     []float64
	ModeShares, RotorShares        []float64
}

// ResponseMode is one elastic mode of the basis.
type ResponseMode struct {
	Number             int
	Frequency, Damping float64
}

// ResponseRotor is one rotor.
type ResponseRotor struct {
	Rotor          string
	Blades         int
	Hover, Highest float64
	Speed          float64
	// Polar and Tilt are moments of inertia; Tilt and Equal are NaN without a body.
	Polar, Tilt, Equal float64
	// Bell and Propeller are what Polar consists of; NaN when not known.
	Bell, Propeller float64
}

// ResponseLine is the answer to one rotor order at hover.
type ResponseLine struct {
	Source, Rotor           string
	Order, Frequency, Force float64
	Rate                    [3]float64
}

// ResponseShape is the motion of all nodes at one frequency.
type ResponseShape struct {
	Frequency       float64
	Axis, Rotor     string
	Component       int
	Real, Imaginary []float64
}
