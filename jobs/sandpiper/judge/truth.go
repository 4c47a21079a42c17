package main

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
)

// truth is what fly wrote beside a recording.
type truth struct {
	Modes  []trueMode `json:"modes_at_hover_speed"`
	Rotors []struct {
		Speed float64 `json:"mean_hover_rpm"`
	} `json:"rotors"`
	Recorder  map[string]float64 `json:"recorder_si"`
	BestAfter float64            `json:"best_errors_after_s"`
}

// trueMode is one mode of the frame that was flown.
type trueMode struct {
	Frequency float64    `json:"frequency_hz"`
	Damping   float64    `json:"damping_ratio"`
	Direction [3]float64 `json:"gyro_direction_roll_pitch_yaw"`
	// Strength is the peak gyro rate of the mode alone in deg/s, root sum of squares over unit forces at all hubs.
	Strength float64 `json:"gyro_strength_deg_s_per_n"`
	// BestFrequency and BestDamping are the least standard errors, Hz and of the damping ratio, that a recording of best_errors_after_s seconds allows
	// who knows none of the modes that it shows; zero if that was not computed.
	BestFrequency float64 `json:"best_frequency_error_hz"`
	BestDamping   float64 `json:"best_damping_error"`
}

// best returns the least relative errors of frequency and damping that a recording of so many seconds allows; not a number where they are not told.
func (t *truth) best(m trueMode, seconds float64) (frequency, damping float64) {
	if !(m.BestFrequency > 0) || !(t.BestAfter > 0) {
		return math.NaN(), math.NaN()
	}
	by := math.Sqrt(t.BestAfter / seconds)
	return by * m.BestFrequency / m.Frequency, by * m.BestDamping / m.Damping
}

func readTruth(path string) (*truth, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	out := &truth{}
	if err := json.Unmarshal(data, out); err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	if len(out.Modes) == 0 {
		return nil, fmt.Errorf("%s has no modes", path)
	}
	return out, nil
}

// share tells how much of the density of the gyro rate at its own frequency and along its own direction a mode makes, 0 to 1: each mode
// is taken as driven alone by force of even density, and the densities are added.
func (t *truth) share(i int) float64 {
	own, all := t.Modes[i], 0.0
	for _, m := range t.Modes {
		r := own.Frequency / m.Frequency
		along := 0.0
		for d := range 3 {
			along += own.Direction[d] * m.Direction[d]
		}
		// Rate of one degree of freedom over that at its resonance.
		level := 2 * m.Damping * r / math.Hypot(1-r*r, 2*m.Damping*r)
		all += math.Pow(m.Strength*along*level, 2)
	}
	return own.Strength * own.Strength / all
}

// seenShare is the share from which on the gyro is said to see a mode: more than all the others there.
const seenShare = 0.5
