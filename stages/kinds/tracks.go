package kinds

import "hushframe/core/pipeline/artifact"

// setTracks writes the tables of an identified artifact that tell of rotor orders; readTracks reads them.
func setTracks(a *artifact.Artifact, x *Identified) {
	a.Table("densities").
		Set("axis", list(x.Densities, func(d IdentifiedDensity) string { return d.Axis })).
		Set("before", list(x.Densities, func(d IdentifiedDensity) []float64 { return d.Before })).
		Set("after", list(x.Densities, func(d IdentifiedDensity) []float64 { return d.After }))
	a.Table("tracks").
		Set("rotor", list(x.Tracks, func(t RotorTrack) string { return t.Rotor })).
		Set("source", list(x.Tracks, func(t RotorTrack) string { return t.Source })).
		Set("time", list(x.Tracks, func(t RotorTrack) []float64 { return t.Time })).
		Set("speed", list(x.Tracks, func(t RotorTrack) []float64 { return t.Speed })).
		Set("speed_error", list(x.Tracks, func(t RotorTrack) float64 { return t.SpeedError }))
	a.Table("crossings").
		Set("mode", list(x.Crossings, func(c OrderCrossing) int64 { return int64(c.Mode) })).
		Set("rotor", list(x.Crossings, func(c OrderCrossing) string { return c.Rotor })).
		Set("order", list(x.Crossings, func(c OrderCrossing) float64 { return c.Order })).
		Set("folded", list(x.Crossings, func(c OrderCrossing) bool { return c.Folded })).
		Set("speed", list(x.Crossings, func(c OrderCrossing) float64 { return c.Speed })).
		Set("share", list(x.Crossings, func(c OrderCrossing) float64 { return c.Share }))
}

func readTracks(a *artifact.Artifact, x *Identified) error {
	t := a.Table("densities")
	for i := range t.Rows() {
		d := IdentifiedDensity{t.Texts("axis")[i], t.FloatLists("before")[i], t.FloatLists("after")[i]}
		if len(d.Before) != len(d.After) {
			return malformed("identified", "the densities of %s differ in bins", d.Axis)
		}
		x.Densities = append(x.Densities, d)
	}
	t = a.Table("tracks")
	for i := range t.Rows() {
		r := RotorTrack{t.Texts("rotor")[i], t.Texts("source")[i], t.FloatLists("time")[i], t.FloatLists("speed")[i], t.Floats("speed_error")[i]}
		if len(r.Time) != len(r.Speed) {
			return malformed("identified", "the track of rotor %s has %d times and %d speeds", r.Rotor, len(r.Time), len(r.Speed))
		}
		x.Tracks = append(x.Tracks, r)
	}
	t = a.Table("crossings")
	for i := range t.Rows() {
		c := OrderCrossing{int(t.Ints("mode")[i]), t.Texts("rotor")[i], t.Floats("order")[i], t.Truths("folded")[i], t.Floats("speed")[i], t.Floats("share")[i]}
		if c.Mode < 0 || c.Mode >= len(x.Modes) {
			return malformed("identified", "an order meets mode %d of %d", c.Mode, len(x.Modes))
		}
		x.Crossings = append(x.Crossings, c)
	}
	return nil
}
