package gather

import (
	"fmt"
	"math"

	"hushframe/core/signal/order"
	"hushframe/core/signal/recording"
)

// Sharpness tells how well a speed that was followed in the signal is known.
type Sharpness struct {
	SpeedError float64 // standard error, rad/s
	PhaseError float64 // standard error of the angle against its orders, rad
	Sure       bool    // orders can be taken out by its angle
}

// FindRotors follows the speeds of rotors in the axes themselves, where the job asks for it and none is recorded. What it finds
// stands in the plan and the data as if it had been recorded. With orders, speeds are sharpened by their phases over spans of that many
// seconds.
func (r *Recording) FindRotors(axes Series, timing recording.Timing, orders []float64, span float64, threads int) {
	if r.set.Find == 0 || len(r.Plan.Rotors) > 0 {
		return
	}
	found, sharp := make([]Series, r.set.Find), make([]Sharpness, r.set.Find)
	clear, runs, length, sharpened := make([]float64, r.set.Find), 0.0, 0.0, len(orders) > 0
	for _, run := range timing.Runs {
		var channels [][]float64
		for _, v := range axes.Values {
			channels = append(channels, v[run.First:run.End])
		}
		tracks := order.FindSpeeds(channels, order.TrackSettings{
			Rate: timing.Rate, From: r.set.Speeds[0] / (2 * math.Pi), To: r.set.Speeds[1] / (2 * math.Pi), Rotors: r.set.Find, Threads: threads,
		})
		if len(tracks) == 0 {
			sharpened = false // its orders have no angle to be taken out by
			continue
		}
		add := func(k int, time, speed []float64) {
			s := &found[k]
			if s.Values == nil {
				s.Values = make([][]float64, 1)
			}
			for i, at := range time {
				s.Time = append(s.Time, axes.Time[run.First]+at)
				s.rows = append(s.rows, axes.RowAt(min(run.End-1, run.First+int(at*timing.Rate))))
				s.Values[0] = append(s.Values[0], speed[i]*2*math.Pi)
			}
		}
		fine, ok := order.Sharp{}, false
		if len(orders) > 0 {
			fine, ok = order.Sharpen(channels, tracks, order.SharpenSettings{Rate: timing.Rate, Orders: orders, Span: span, Threads: threads})
		}
		sharpened = sharpened && ok
		for k, t := range tracks {
			if ok {
				add(k, fine.Time, fine.Speeds[k])
				weight := float64(run.Len())
				sharp[k].SpeedError += weight * math.Pow(2*math.Pi*fine.SpeedError[k], 2)
				sharp[k].PhaseError += weight * math.Pow(fine.PhaseError[k], 2)
				sharp[k].Sure = (runs == 0 || sharp[k].Sure) && fine.Sure(k)
			} else {
				add(k, t.Time, t.Speed)
			}
			clear[k] += t.Clear
		}
		runs++
		length += float64(run.Len())
	}
	if runs == 0 {
		r.Plan.Notes = append(r.Plan.Notes, "no stretch without a gap is long enough to follow a rotor in it")
		return
	}
	r.Found = true
	for k, s := range found {
		name := fmt.Sprintf("found %d", k+1)
		r.Plan.Rotors = append(r.Plan.Rotors, Channel{Name: name, Column: "in the signal", Sign: 1, Unit: "rad/s", Factor: 1, Of: RotorSpeed})
		r.Data.Rotors = append(r.Data.Rotors, s)
		if !sharpened {
			r.Plan.Notes = append(r.Plan.Notes, fmt.Sprintf("rotor %s was followed in the signal, its order 1 stands %.0f dB above its surroundings; where rotors cross, it may change over",
				name, clear[k]/runs))
			continue
		}
		x := Sharpness{math.Sqrt(sharp[k].SpeedError / length), math.Sqrt(sharp[k].PhaseError / length), sharp[k].Sure}
		r.Sharp = append(r.Sharp, x)
		r.Plan.Notes = append(r.Plan.Notes, fmt.Sprintf("rotor %s was followed in the signal, and sharpened by the phase of its orders to ±%.2g rpm, its angle to ±%.2g rad (standard errors); where rotors cross, it may change over",
			name, x.SpeedError*30/math.Pi, x.PhaseError))
		if !x.Sure {
			r.Plan.Notes = append(r.Plan.Notes, fmt.Sprintf("the angle of rotor %s is not sure enough: its orders are told apart, not taken out", name))
		}
	}
	if len(orders) > 0 && !sharpened {
		r.Plan.Notes = append(r.Plan.Notes, "the speeds that were followed could not be sharpened: a stretch without a gap is shorter than 6 s, or nothing moves in it; orders are told apart, not taken out")
	}
}
