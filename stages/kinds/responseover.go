package kinds

import (
	"hushframe/core/pipeline/artifact"
)

// ResponseMap is the spectrum under the broadband source over rotor speed.
type ResponseMap struct {
	Frequency []float64 // middle of each band, Hz
	Width     float64   // of every band, Hz
	Rows      []ResponseMapRow
}

// ResponseMapRow is one speed of the map.
type ResponseMapRow struct {
	Speed   float64      // of the first rotor, rad/s
	Density [3][]float64 // per band, (rad/s)²/Hz
}

// ResponseFlight is a part of a flight at one rotor speed.
type ResponseFlight struct{ Speed, Share float64 }

// overTables describe what changes with rotor speed.
func overTables() []artifact.TableSpec {
	return []artifact.TableSpec{
		{Name: "speed_map_bands", About: "even bands of frequency of the table speed_map, ascending", Columns: columns(
			col("frequency", artifact.Float, "Hz", "middle of the band"),
			col("width", artifact.Float, "Hz", "width of the band, the same for all"),
		)},
		{Name: "speed_map", About: "gyro rate under the broadband source over rotor speed, one row per speed, ascending; lines of the rotors are in the table map", Columns: columns(
			col("speed", artifact.Float, "rad/s", "speed of the first rotor; the others keep the ratio they have at hover"),
			col("roll", artifact.FloatList, "(rad/s)^2/Hz", "mean one-sided density within each band of speed_map_bands, so that no narrow peak is lost"),
			col("pitch", artifact.FloatList, "(rad/s)^2/Hz", "the same"),
			col("yaw", artifact.FloatList, "(rad/s)^2/Hz", "the same"),
		)},
		{Name: "flight", About: "rotor speeds of a flight that weight the columns flown_ of the spectrum, ascending", Columns: columns(
			col("speed", artifact.Float, "rad/s", "speed of the first rotor"),
			col("share", artifact.Float, "1", "part of the flight about this speed; the parts add up to 1"),
		)},
	}
}

func setOver(a *artifact.Artifact, r *Response) {
	m := r.Map
	a.Table("speed_map_bands").
		Set("frequency", append([]float64{}, m.Frequency...)).
		Set("width", each(len(m.Frequency), func(int) float64 { return m.Width }))
	t := a.Table("speed_map").Set("speed", list(m.Rows, func(x ResponseMapRow) float64 { return x.Speed }))
	for axis, name := range AxisNames {
		t.Set(name, list(m.Rows, func(x ResponseMapRow) []float64 { return x.Density[axis] }))
	}
	a.Table("flight").
		Set("speed", list(r.Flight, func(x ResponseFlight) float64 { return x.Speed })).
		Set("share", list(r.Flight, func(x ResponseFlight) float64 { return x.Share }))
}

func getOver(a *artifact.Artifact, r *Response) error {
	t := a.Table("speed_map_bands")
	if t.Rows() > 0 {
		r.Map.Frequency, r.Map.Width = t.Floats("frequency"), t.Floats("width")[0]
	}
	t = a.Table("speed_map")
	for i := range t.Rows() {
		x := ResponseMapRow{Speed: t.Floats("speed")[i]}
		for axis, name := range AxisNames {
			x.Density[axis] = t.FloatLists(name)[i]
			if len(x.Density[axis]) != len(r.Map.Frequency) {
				return malformed("response", "the map at %g rad/s has %d values over %d bands", x.Speed, len(x.Density[axis]), len(r.Map.Frequency))
			}
		}
		if i > 0 && !(x.Speed > r.Map.Rows[i-1].Speed) {
			return malformed("response", "the speeds of the map do not ascend at row %d", i)
		}
		r.Map.Rows = append(r.Map.Rows, x)
	}
	t = a.Table("flight")
	for i := range t.Rows() {
		r.Flight = append(r.Flight, ResponseFlight{t.Floats("speed")[i], t.Floats("share")[i]})
	}
	return nil
}
