package kinds

import (
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/artifact"
)

// ResponseMotion is an operating motion of the frame in its modal basis.
type ResponseMotion struct {
	Source, Rotor, Axis string
	Frequency           float64
	Real, Imaginary     []float64 // one per vector of the basis
}

// ResponsePoint is a named point of the airframe.
type ResponsePoint struct {
	Name, Kind, Part string
	At               airframe.Vec
}

// ResponsePointSpectrum is one quantity at a point along one axis.
type ResponsePointSpectrum struct {
	Point, Quantity, Axis string
	Density               []float64 // at the frequencies of the spectrum
	RMS, Loudest          float64
}

// ResponsePointLine is the motion of a point at one line of the rotors.
type ResponsePointLine struct {
	Point, Source              string
	Order, Frequency           float64
	Displacement, Acceleration [3]float64
}

// BroadbandSource names the broadband source in the table motions.
const BroadbandSource = "broadband"

// Quantities of the table point_spectra.
const (
	Displacement = "displacement"
	Acceleration = "acceleration"
	Rotation     = "rotation"
	Rate         = "rate"
)

// motionTables describe how the frame and its named points move.
func motionTables() []artifact.TableSpec {
	return []artifact.TableSpec{
		{Name: "motions", About: "operating motions as complex modal amplitudes q, time dependence e^(+iωt): the motion of a mesh node is the sum over the vectors of the modes artifact of " +
			"q times shape, that of a site the sum of q times motion. Real and imaginary part turn into one another over a quarter of a period, so that motion that travels is seen to travel", Columns: columns(
			col("source", artifact.Text, "", "broadband, or a source of the table lines"),
			col("rotor", artifact.Text, "", "rotor that makes it; \"all\" for all of them together"),
			col("axis", artifact.Text, "", "broadband: the axis of the gyro with whose rate the motion is in step: it is the part of the motion that this rate tells of, its rotation about the axis has a rate "+
				"of real amplitude, the root of the density; \"\" for lines"),
			col("frequency", artifact.Float, "Hz", "ascending within one source, rotor and axis"),
			col("real", artifact.FloatList, "kg^(1/2)*m/Hz^(1/2), for lines kg^(1/2)*m", "one per row of the table vectors of the modes artifact; 0 for those not in use"),
			col("imaginary", artifact.FloatList, "kg^(1/2)*m/Hz^(1/2), for lines kg^(1/2)*m", "the same"),
		)},
		{Name: "points", About: "named points of the airframe", Columns: columns(
			col("name", artifact.Text, "", "name"),
			col("kind", artifact.Text, "", "gyro, rotor or body, or node for a node of the mesh"),
			col("part", artifact.Text, "", "part that a node lies on; \"\" for others"),
			vecCols("at", "m", "place"),
		)},
		{Name: "point_spectra", About: "motion of named points under the broadband source, all rotors", Columns: columns(
			col("point", artifact.Text, "", "name"),
			col("quantity", artifact.Text, "", "displacement (m), acceleration (m/s^2), rotation (rad) or rate (rad/s); rotations of the gyro only"),
			col("axis", artifact.Text, "", "x, y or z; for rotation and rate roll, pitch or yaw"),
			col("density", artifact.FloatList, "m^2/Hz, (m/s^2)^2/Hz, rad^2/Hz or (rad/s)^2/Hz", "one-sided, at the frequencies of the spectrum"),
			col("rms", artifact.Float, "m, m/s^2, rad or rad/s", "root mean square within the sweep"),
			col("loudest", artifact.Float, "Hz", "frequency of the highest density"),
		)},
		{Name: "point_lines", About: "motion of named points at the lines of the rotors at their speed, rotors of one frequency added as power; peak amplitudes", Columns: columns(
			col("point", artifact.Text, "", "name"),
			col("source", artifact.Text, "", "as in the table lines"),
			col("order", artifact.Float, "1", "multiple of the rotor's speed"),
			col("frequency", artifact.Float, "Hz", ""),
			vecCols("displacement", "m", "peak amplitude"),
			vecCols("acceleration", "m/s^2", "peak amplitude"),
		)},
	}
}

func setMotion(a *artifact.Artifact, r *Response) {
	a.Table("motions").
		Set("source", list(r.Motions, func(x ResponseMotion) string { return x.Source })).
		Set("rotor", list(r.Motions, func(x ResponseMotion) string { return x.Rotor })).
		Set("axis", list(r.Motions, func(x ResponseMotion) string { return x.Axis })).
		Set("frequency", list(r.Motions, func(x ResponseMotion) float64 { return x.Frequency })).
		Set("real", list(r.Motions, func(x ResponseMotion) []float64 { return x.Real })).
		Set("imaginary", list(r.Motions, func(x ResponseMotion) []float64 { return x.Imaginary }))
	t := a.Table("points").
		Set("name", list(r.Points, func(x ResponsePoint) string { return x.Name })).
		Set("kind", list(r.Points, func(x ResponsePoint) string { return x.Kind })).
		Set("part", list(r.Points, func(x ResponsePoint) string { return x.Part }))
	setVecs(t, "at", len(r.Points), func(i int) airframe.Vec { return r.Points[i].At })
	a.Table("point_spectra").
		Set("point", list(r.PointSpectra, func(x ResponsePointSpectrum) string { return x.Point })).
		Set("quantity", list(r.PointSpectra, func(x ResponsePointSpectrum) string { return x.Quantity })).
		Set("axis", list(r.PointSpectra, func(x ResponsePointSpectrum) string { return x.Axis })).
		Set("density", list(r.PointSpectra, func(x ResponsePointSpectrum) []float64 { return x.Density })).
		Set("rms", list(r.PointSpectra, func(x ResponsePointSpectrum) float64 { return x.RMS })).
		Set("loudest", list(r.PointSpectra, func(x ResponsePointSpectrum) float64 { return x.Loudest }))
	t = a.Table("point_lines").
		Set("point", list(r.PointLines, func(x ResponsePointLine) string { return x.Point })).
		Set("source", list(r.PointLines, func(x ResponsePointLine) string { return x.Source })).
		Set("order", list(r.PointLines, func(x ResponsePointLine) float64 { return x.Order })).
		Set("frequency", list(r.PointLines, func(x ResponsePointLine) float64 { return x.Frequency }))
	setVecs(t, "displacement", len(r.PointLines), func(i int) airframe.Vec { return r.PointLines[i].Displacement })
	setVecs(t, "acceleration", len(r.PointLines), func(i int) airframe.Vec { return r.PointLines[i].Acceleration })
}

func getMotion(a *artifact.Artifact, r *Response) error {
	t := a.Table("motions")
	for i := range t.Rows() {
		x := ResponseMotion{t.Texts("source")[i], t.Texts("rotor")[i], t.Texts("axis")[i], t.Floats("frequency")[i], t.FloatLists("real")[i], t.FloatLists("imaginary")[i]}
		if len(x.Real) != len(x.Imaginary) || i > 0 && len(x.Real) != len(r.Motions[0].Real) {
			return malformed("response", "the motion at %g Hz has %d real and %d imaginary amplitudes", x.Frequency, len(x.Real), len(x.Imaginary))
		}
		r.Motions = append(r.Motions, x)
	}
	t = a.Table("points")
	known := map[string]bool{}
	for i := range t.Rows() {
		x := ResponsePoint{t.Texts("name")[i], t.Texts("kind")[i], t.Texts("part")[i], getVec(t, "at", i)}
		known[x.Name] = true
		r.Points = append(r.Points, x)
	}
	t = a.Table("point_spectra")
	for i := range t.Rows() {
		x := ResponsePointSpectrum{t.Texts("point")[i], t.Texts("quantity")[i], t.Texts("axis")[i], t.FloatLists("density")[i], t.Floats("rms")[i], t.Floats("loudest")[i]}
		if !known[x.Point] {
			return malformed("response", "a spectrum is of point %q, which is not listed", x.Point)
		}
		if len(x.Density) != len(r.Frequency) {
			return malformed("response", "the %s of point %s has %d values over %d frequencies", x.Quantity, x.Point, len(x.Density), len(r.Frequency))
		}
		r.PointSpectra = append(r.PointSpectra, x)
	}
	t = a.Table("point_lines")
	for i := range t.Rows() {
		r.PointLines = append(r.PointLines, ResponsePointLine{t.Texts("point")[i], t.Texts("source")[i], t.Floats("order")[i], t.Floats("frequency")[i],
			getVec(t, "displacement", i), getVec(t, "acceleration", i)})
	}
	return nil
}

// Shaken sums the spectra of a named point over x, y and z: root mean square of displacement (m) and acceleration (m/s²), and the
// frequency at which the component with most acceleration is loudest (Hz).
func (r *Response) Shaken(point string) (move, shake, at float64) {
	most := 0.0
	for _, x := range r.PointSpectra {
		switch {
		case x.Point != point:
		case x.Quantity == Displacement:
			move = math.Hypot(move, x.RMS)
		case x.Quantity == Acceleration:
			shake = math.Hypot(shake, x.RMS)
			if x.RMS > most {
				most, at = x.RMS, x.Loudest
			}
		}
	}
	return move, shake, at
}

// ShakenByLine gives the root sum of squares over x, y and z of the peak amplitudes that the lines of a source make at a named point:
// displacement (m) and acceleration (m/s²), 0 where there are none.
func (r *Response) ShakenByLine(point, source string) (move, shake float64) {
	for _, x := range r.PointLines {
		if x.Point == point && x.Source == source {
			for c := range 3 {
				move, shake = math.Hypot(move, x.Displacement[c]), math.Hypot(shake, x.Acceleration[c])
			}
		}
	}
	return move, shake
}
