package kinds

import "hushframe/core/pipeline/artifact"

// What a map lies against.
const (
	MapTime       = "time"
	MapThrottle   = "throttle"
	MapRotorSpeed = "rotor speed" // mean of all rotors
)

var (
	piecesTable = artifact.TableSpec{Name: "pieces", About: "pieces of the recording, by time: those the spectra come from, and those left out", Columns: []artifact.Column{
		{Name: "from", Type: artifact.Float, Unit: "s", About: "first time, on the time column"},
		{Name: "to", Type: artifact.Float, Unit: "s", About: "last time"},
		{Name: "samples", Type: artifact.Int, About: "samples per axis"},
		{Name: "level", Type: artifact.Float, Unit: "SI", About: "mean of what the pieces were chosen by: rotor speed in rad/s or throttle from 0 to 1; NaN without"},
		{Name: "used", Type: artifact.Truth, About: "the spectra come from it"},
		{Name: "why", Type: artifact.Text, About: "steady, window, all; ground, take-off, landing, unsteady or short where it is left out"},
	}}
	crossTable = artifact.TableSpec{Name: "cross", About: "cross spectra of the axes, one row per pair", Columns: []artifact.Column{
		{Name: "a", Type: artifact.Int, About: "row of the table axes"},
		{Name: "b", Type: artifact.Int, About: "row of the table axes"},
		{Name: "real", Type: artifact.FloatList, Unit: "SI^2/Hz", About: "real part of mean(conj(A)·B), one-sided density per bin; a positive phase means that b leads"},
		{Name: "imaginary", Type: artifact.FloatList, Unit: "SI^2/Hz", About: "imaginary part"},
		{Name: "coherence", Type: artifact.FloatList, Unit: "1", About: "square of the cross density over both densities, 0 to 1"},
	}}
	setPointsTable = artifact.TableSpec{Name: "set_points", About: "recorded set-points, one row per axis that has one", Columns: []artifact.Column{
		{Name: "axis", Type: artifact.Int, About: "row of the table axes"},
		{Name: "column", Type: artifact.Text, About: "column of the recording, with its sign"},
		{Name: "deviation", Type: artifact.Float, Unit: "rad/s", About: "standard deviation of the set-point"},
		{Name: "coherence", Type: artifact.FloatList, Unit: "1", About: "coherence of the set-point with the axis per bin, 0 to 1: near 1 where the loop acts"},
	}}
	mapsTable = artifact.TableSpec{Name: "maps", About: "spectra against time, throttle and rotor speed, one row per axis and cell, by axis, against and centre", Columns: []artifact.Column{
		{Name: "axis", Type: artifact.Int, About: "row of the table axes"},
		{Name: "against", Type: artifact.Text, About: "time, throttle or rotor speed (mean of all rotors)"},
		{Name: "unit", Type: artifact.Text, About: "SI unit of centre, low and high: s, 1 or rad/s"},
		{Name: "centre", Type: artifact.Float, Unit: "SI", About: "mean over the segments of the cell"},
		{Name: "low", Type: artifact.Float, Unit: "SI", About: "lower end of the cell"},
		{Name: "high", Type: artifact.Float, Unit: "SI", About: "upper end of the cell"},
		{Name: "segments", Type: artifact.Int, About: "segments averaged"},
		{Name: "step", Type: artifact.Float, Unit: "Hz", About: "width of a bin; bin k lies at k times this"},
		{Name: "density", Type: artifact.FloatList, Unit: "SI^2/Hz", About: "one-sided power spectral density per bin, from 0 Hz"},
	}}
)

// SpectraPiece is a piece of a recording, used or left out.
type SpectraPiece struct {
	From, To float64
	Samples  int
	Level    float64
	Used     bool
	Why      string
}

// SpectraCross is the cross spectrum of the axes A and B, by their rows.
type SpectraCross struct {
	A, B                       int
	Real, Imaginary, Coherence []float64
}

// SpectraSetPoint is the set-point of an axis and its coherence with it.
type SpectraSetPoint struct {
	Axis      int
	Column    string
	Deviation float64
	Coherence []float64
}

// SpectraMapRow is one cell of a map: the spectrum of an axis over a stretch of time, throttle or rotor speed.
type SpectraMapRow struct {
	Axis              int
	Against, Unit     string
	Centre, Low, High float64
	Segments          int
	Step              float64
	Density           []float64
}

// MapOf gives the cells of one map by rising centre.
func (s *Spectra) MapOf(axis int, against string) []SpectraMapRow {
	var out []SpectraMapRow
	for _, r := range s.Maps {
		if r.Axis == axis && r.Against == against {
			out = append(out, r)
		}
	}
	return out
}

// setDetail fills the tables of pieces, cross spectra, set-points and maps.
func setDetail(a *artifact.Artifact, s *Spectra) {
	a.Table("pieces").
		Set("from", list(s.Pieces, func(x SpectraPiece) float64 { return x.From })).
		Set("to", list(s.Pieces, func(x SpectraPiece) float64 { return x.To })).
		Set("samples", list(s.Pieces, func(x SpectraPiece) int64 { return int64(x.Samples) })).
		Set("level", list(s.Pieces, func(x SpectraPiece) float64 { return x.Level })).
		Set("used", list(s.Pieces, func(x SpectraPiece) bool { return x.Used })).
		Set("why", list(s.Pieces, func(x SpectraPiece) string { return x.Why }))
	a.Table("cross").
		Set("a", list(s.Cross, func(x SpectraCross) int64 { return int64(x.A) })).
		Set("b", list(s.Cross, func(x SpectraCross) int64 { return int64(x.B) })).
		Set("real", list(s.Cross, func(x SpectraCross) []float64 { return x.Real })).
		Set("imaginary", list(s.Cross, func(x SpectraCross) []float64 { return x.Imaginary })).
		Set("coherence", list(s.Cross, func(x SpectraCross) []float64 { return x.Coherence }))
	a.Table("set_points").
		Set("axis", list(s.SetPoints, func(x SpectraSetPoint) int64 { return int64(x.Axis) })).
		Set("column", list(s.SetPoints, func(x SpectraSetPoint) string { return x.Column })).
		Set("deviation", list(s.SetPoints, func(x SpectraSetPoint) float64 { return x.Deviation })).
		Set("coherence", list(s.SetPoints, func(x SpectraSetPoint) []float64 { return x.Coherence }))
	a.Table("maps").
		Set("axis", list(s.Maps, func(x SpectraMapRow) int64 { return int64(x.Axis) })).
		Set("against", list(s.Maps, func(x SpectraMapRow) string { return x.Against })).
		Set("unit", list(s.Maps, func(x SpectraMapRow) string { return x.Unit })).
		Set("centre", list(s.Maps, func(x SpectraMapRow) float64 { return x.Centre })).
		Set("low", list(s.Maps, func(x SpectraMapRow) float64 { return x.Low })).
		Set("high", list(s.Maps, func(x SpectraMapRow) float64 { return x.High })).
		Set("segments", list(s.Maps, func(x SpectraMapRow) int64 { return int64(x.Segments) })).
		Set("step", list(s.Maps, func(x SpectraMapRow) float64 { return x.Step })).
		Set("density", list(s.Maps, func(x SpectraMapRow) []float64 { return x.Density }))
}

// detail reads those tables.
func (s *Spectra) detail(a *artifact.Artifact) error {
	axis := func(what string, row int, v int64) (int, error) {
		if v < 0 || v >= int64(len(s.Axes)) {
			return 0, malformed("spectra", "%s %d names axis %d of %d", what, row, v, len(s.Axes))
		}
		return int(v), nil
	}
	bins := func(what string, row int, lists ...[]float64) error {
		for _, l := range lists {
			if len(l) != s.Segment/2+1 {
				return malformed("spectra", "%s %d has %d bins, %d samples a segment make %d", what, row, len(l), s.Segment, s.Segment/2+1)
			}
		}
		return nil
	}
	t := a.Table("pieces")
	for i := range t.Rows() {
		s.Pieces = append(s.Pieces, SpectraPiece{From: t.Floats("from")[i], To: t.Floats("to")[i], Samples: int(t.Ints("samples")[i]),
			Level: t.Floats("level")[i], Used: t.Truths("used")[i], Why: t.Texts("why")[i]})
	}
	t = a.Table("cross")
	for i := range t.Rows() {
		x := SpectraCross{Real: t.FloatLists("real")[i], Imaginary: t.FloatLists("imaginary")[i], Coherence: t.FloatLists("coherence")[i]}
		var err error
		if x.A, err = axis("cross spectrum", i, t.Ints("a")[i]); err != nil {
			return err
		}
		if x.B, err = axis("cross spectrum", i, t.Ints("b")[i]); err != nil {
			return err
		}
		if err := bins("cross spectrum", i, x.Real, x.Imaginary, x.Coherence); err != nil {
			return err
		}
		s.Cross = append(s.Cross, x)
	}
	t = a.Table("set_points")
	for i := range t.Rows() {
		x := SpectraSetPoint{Column: t.Texts("column")[i], Deviation: t.Floats("deviation")[i], Coherence: t.FloatLists("coherence")[i]}
		var err error
		if x.Axis, err = axis("set-point", i, t.Ints("axis")[i]); err != nil {
			return err
		}
		if err := bins("set-point", i, x.Coherence); err != nil {
			return err
		}
		s.SetPoints = append(s.SetPoints, x)
	}
	t = a.Table("maps")
	for i := range t.Rows() {
		x := SpectraMapRow{Against: t.Texts("against")[i], Unit: t.Texts("unit")[i], Centre: t.Floats("centre")[i], Low: t.Floats("low")[i],
			High: t.Floats("high")[i], Segments: int(t.Ints("segments")[i]), Step: t.Floats("step")[i], Density: t.FloatLists("density")[i]}
		var err error
		if x.Axis, err = axis("map row", i, t.Ints("axis")[i]); err != nil {
			return err
		}
		if !(x.Step > 0) {
			return malformed("spectra", "the bins of map row %d have no width", i)
		}
		s.Maps = append(s.Maps, x)
	}
	return nil
}
