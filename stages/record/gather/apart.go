package gather

import (
	"fmt"
	"math"
)

// shared is the share of the rows of either sensor that must hold both for them to be one: fewer are not hurt rows any more.
const shared = 0.95

// part makes the accelerations a second sensor if they have a clock of their own, or rows of their own: taken turn by turn, or at
// another rate. Neither is resampled to the other.
func (p *Plan) part(passes map[string]*raw) {
	var rates, accelerations []Channel
	for _, c := range p.Axes {
		if c.Of == AngularRate {
			rates = append(rates, c)
		} else {
			accelerations = append(accelerations, c)
		}
	}
	if len(rates) == 0 || len(accelerations) == 0 {
		return
	}
	if rates[0].Clock == accelerations[0].Clock {
		r := passes[rates[0].Clock]
		first, second, both := 0, 0, 0
		for i := range r.rows {
			a, b := r.holds(rates, i), r.holds(accelerations, i)
			if a {
				first++
			}
			if b {
				second++
			}
			if a && b {
				both++
			}
		}
		if first == 0 || second == 0 || float64(both) >= shared*float64(max(first, second)) {
			return
		}
	}
	p.Axes, p.Apart = rates, accelerations
	p.Notes = append(p.Notes, fmt.Sprintf("the accelerations do not share the rows of the angular rates: they are a sensor of their own, described with its own rate beside the gyro, from column %q on", accelerations[0].Column))
}

// holds tells whether a row has a sample of every channel.
func (r *raw) holds(channels []Channel, row int) bool {
	for _, c := range channels {
		if math.IsNaN(r.values[c.Column][row]) {
			return false
		}
	}
	return true
}

// Second is the recording as its second sensor has it, nil if it has one sensor alone. Rotors, throttle and window are the same; notes and
// findings of the recording stay with the first.
func (r *Recording) Second() *Recording {
	if len(r.Plan.Apart) == 0 {
		return nil
	}
	plan, data := r.Plan, *r.Data
	plan.Axes, plan.Apart, plan.SetPoints = r.Plan.Apart, nil, nil
	plan.Notes, plan.Assumed, plan.Findings = nil, nil, nil
	data.Axes, data.Partial, data.Rows = r.Data.Apart, r.Data.ApartPartial, r.Data.ApartRows
	data.Apart, data.SetPoints, data.Notes, data.Assumed, data.Findings = Series{}, nil, nil, nil, nil
	data.Epoch = false
	out := &Recording{Header: r.Header, Plan: plan, Data: &data, Found: r.Found, Sharp: r.Sharp, set: r.set}
	out.Header.Notes, out.Header.Rate = nil, 0
	return out
}
