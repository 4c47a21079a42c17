package gather

import (
	"fmt"
	"math"

	"hushframe/core/signal/order"
	"hushframe/core/signal/recording"
)

// FindRotors follows the speeds of rotors in the axes themselves, where the job asks for it and none is recorded. What it finds
// stands in the plan and the data as if it had been recorded.
func (r *Recording) FindRotors(axes Series, timing recording.Timing, threads int) {
	if r.set.Find == 0 || len(r.Plan.Rotors) > 0 {
		return
	}
	found := make([]Series, r.set.Find)
	clear, runs := make([]float64, r.set.Find), 0.0
	for _, run := range timing.Runs {
		var channels [][]float64
		for _, v := range axes.Values {
			channels = append(channels, v[run.First:run.End])
		}
		tracks := order.FindSpeeds(channels, order.TrackSettings{
			Rate: timing.Rate, From: r.set.Speeds[0] / (2 * math.Pi), To: r.set.Speeds[1] / (2 * math.Pi), Rotors: r.set.Find, Threads: threads,
		})
		for k, t := range tracks {
			s := &found[k]
			if s.Values == nil {
				s.Values = make([][]float64, 1)
			}
			for i, at := range t.Time {
				s.Time = append(s.Time, axes.Time[run.First]+at)
				s.rows = append(s.rows, axes.RowAt(run.First+int(at*timing.Rate)))
				s.Values[0] = append(s.Values[0], t.Speed[i]*2*math.Pi)
			}
			clear[k] += t.Clear
			runs++
		}
	}
	if runs == 0 {
		r.Plan.Notes = append(r.Plan.Notes, "no stretch without a gap is long enough to follow a rotor in it")
		return
	}
	r.Found = true
	for k, s := range found {
		if len(s.Time) == 0 {
			continue
		}
		name := fmt.Sprintf("found %d", k+1)
		r.Plan.Rotors = append(r.Plan.Rotors, Channel{Name: name, Column: "in the signal", Sign: 1, Unit: "rad/s", Factor: 1, Of: RotorSpeed})
		r.Data.Rotors = append(r.Data.Rotors, s)
		r.Plan.Notes = append(r.Plan.Notes, fmt.Sprintf("rotor %s was followed in the signal, its order 1 stands %.0f dB above its surroundings; where rotors cross, it may change over",
			name, clear[k]*float64(len(found))/runs))
	}
}
