package rotor

import (
	"fmt"
	"math"
	"math/cmplx"
	"regexp"
	"strconv"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
)

func TestGradeGivesUnbalanceAndForce(t *testing.T) {
	for _, row := range known.Rows(t, "G_unbalance.json", "G-UNBALANCE") {
		var s struct {
			Mass   float64 `json:"rotor_mass_kg"`
			Speed  float64 `json:"speed_rpm"`
			Grade  string
			Radius float64 `json:"correction_radius_m"`
		}
		row.Decode(t, &s)
		var grade float64
		if _, err := fmt.Sscanf(s.Grade, "G%g", &grade); err != nil {
			t.Fatal(err)
		}
		speed := s.Speed * 2 * math.Pi / 60
		u := Unbalance(s.Mass, grade*1e-3, speed)
		row.Check(t, 1, u/s.Mass, u, u/s.Radius, Force(u, speed))
	}
}

func TestForceAndFrequencyAgainstSpeed(t *testing.T) {
	row := known.One(t, "G_unbalance.json", "G-FORCE-8e-09")
	var s struct {
		U      float64 `json:"unbalance_kg_m"`
		Blades float64
	}
	row.Decode(t, &s)
	var got []float64
	for _, l := range row.Labels {
		kind, speed := label(t, l)
		got = append(got, map[string]float64{
			"force": Force(s.U, speed), "rotation": Frequency(1, speed), "blade passing": Frequency(s.Blades, speed),
		}[kind])
	}
	row.Check(t, 1, got...)
}

// label reads what a value is of and at which speed in rad/s.
func label(t *testing.T, text string) (kind string, speed float64) {
	t.Helper()
	m := regexp.MustCompile(`(force|rotation|blade passing) (\d+) rpm`).FindStringSubmatch(text)
	rpm, err := strconv.ParseFloat(m[2], 64)
	if err != nil {
		t.Fatal(err)
	}
	return m[1], rpm * 2 * math.Pi / 60
}

func TestWhirlTurnsWithTheSpin(t *testing.T) {
	for _, axis := range []airframe.Vec{{0, 0, 1}, {0, 0, -1}, {0.6, 0, 0.8}, {1, 0, 0}, {0.48, 0.6, 0.64}} {
		for _, spin := range []int{1, -1} {
			f := Whirl(axis, spin)
			at := func(turn float64) airframe.Vec {
				var v airframe.Vec
				for c := range v {
					v[c] = real(f[c] * cmplx.Exp(complex(0, turn)))
				}
				return v
			}
			for _, turn := range []float64{0, 0.3, 2, 4.5} {
				a, b := at(turn), at(turn+0.1)
				if n := math.Sqrt(dot(a, a)); math.Abs(n-1) > 1e-12 || math.Abs(dot(a, axis)) > 1e-12 {
					t.Errorf("axis %v: the force at %g is %v", axis, turn, a)
				}
				if got, want := dot(cross(a, b), axis), float64(spin)*math.Sin(0.1); math.Abs(got-want) > 1e-12 {
					t.Errorf("axis %v, spin %d: turns by sine %g, want %g", axis, spin, got, want)
				}
			}
		}
	}
}
