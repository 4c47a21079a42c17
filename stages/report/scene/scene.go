package scene

import (
	"encoding/json"
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
	"hushframe/stages/report/pack"
)

// Sources are the artifacts of a report; whatever was not included is nil.
type Sources struct {
	Properties *airframe.Properties
	Mesh       *mesh.Mesh
	Modes      *kinds.Modes
	Response   *kinds.Response
}

// Scene is all that moves on a page; what is nil is not shown.
type Scene struct {
	Light     []string      `json:"light"` // steps of the colour scale on light and dark paper
	Dark      []string      `json:"dark"`
	Frame     *Frame        `json:"frame,omitempty"`
	Shapes    *Shapes       `json:"shapes,omitempty"`
	Modes     []Mode        `json:"modes,omitempty"`
	Charts    []*draw.Chart `json:"charts,omitempty"`
	Operating []Operating   `json:"operating,omitempty"`
	Density   *Density      `json:"density,omitempty"`
}

// Mode is one elastic mode.
type Mode struct {
	Number    int            `json:"number"`
	Vector    int            `json:"vector"`
	Frequency float64        `json:"frequency"` // Hz
	Damping   float64        `json:"damping"`   // ratio
	About     string         `json:"about"`
	Rotation  [3]pack.Number `json:"rotation"` // of the gyro per unit modal coordinate, rad
	Strength  [3]pack.Number `json:"strength"` // (deg/s)/N
	Strain    []Share        `json:"strain"`   // by part, joint and mount, greatest first
	Kinds     []Share        `json:"kinds"`    // by kind of strain, greatest first
	Kinetic   []Share        `json:"kinetic"`  // by what carries mass, greatest first
}

// Share is a named share of a whole.
type Share struct {
	Name  string  `json:"name"`
	Share float64 `json:"share"`
}

// Operating is how the driven frame moves over frequency, in step with one axis of the gyro: complex weights of the
// vectors, frequency after frequency.
type Operating struct {
	Axis      string      `json:"axis"`
	Frequency pack.Floats `json:"frequency"`
	Step      pack.Floats `json:"step"` // worth of one step at each frequency, kg^(1/2)·m/Hz^(1/2)
	Real      pack.Steps  `json:"real"`
	Imaginary pack.Steps  `json:"imaginary"`
}

const degree = math.Pi / 180

// New packs what there is. describe puts a mode in words.
func New(s Sources, describe func(number int) string) *Scene {
	x := &Scene{}
	x.Light, x.Dark = draw.Scales()
	if s.Mesh != nil {
		x.Frame, x.Shapes, x.Density = newFrame(s.Mesh, s.Properties, s.Modes)
	}
	if s.Modes != nil {
		for _, m := range s.Modes.Survey.Modes {
			mode := Mode{Number: m.Number, Vector: m.Vector, Frequency: m.Frequency, Damping: m.Loss / 2, About: describe(m.Number),
				Strain: shares(s.Modes.Survey.Groups, m.ByGroup), Kinds: shares(s.Modes.Survey.Kinds, m.ByKind), Kinetic: shares(s.Modes.Survey.Carriers, m.ByCarrier)}
			for axis := range 3 {
				mode.Rotation[axis], mode.Strength[axis] = pack.Number(m.Rotation[axis]), pack.Number(m.Strength[axis]/degree)
			}
			x.Modes = append(x.Modes, mode)
		}
	}
	if s.Response != nil && x.Shapes != nil {
		x.Operating = operating(s.Response, len(x.Shapes.Kinds))
	}
	return x
}

// operating gathers the motions of the broadband source under all rotors; those of another basis are left out.
func operating(r *kinds.Response, vectors int) []Operating {
	var out []Operating
	for _, axis := range kinds.AxisNames {
		o := Operating{Axis: axis}
		for _, m := range r.Motions {
			if m.Source != kinds.BroadbandSource || m.Rotor != "all" || m.Axis != axis || len(m.Real) != vectors {
				continue
			}
			o.Frequency = append(o.Frequency, m.Frequency)
			steps, step := pack.Stepped(append(append([]float64{}, m.Real...), m.Imaginary...))
			o.Step, o.Real, o.Imaginary = append(o.Step, step), append(o.Real, steps[:vectors]...), append(o.Imaginary, steps[vectors:]...)
		}
		if len(o.Frequency) > 1 {
			out = append(out, o)
		}
	}
	return out
}

// leastShare is a share too small to be drawn.
const leastShare = 0.005

func shares(names []string, values []float64) []Share {
	out := []Share{}
	for i, v := range values {
		if v >= leastShare {
			out = append(out, Share{names[i], v})
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].Share > out[j].Share })
	return out
}

// JSON gives the scene as text that may stand inside a script element: no "<", ">" or "&" is in it.
func (x *Scene) JSON() ([]byte, error) { return json.Marshal(x) }
