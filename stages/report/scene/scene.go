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
}

// Scene is all that moves on a page; what is nil is not shown.
type Scene struct {
	Light  []string      `json:"light"` // steps of the colour scale on light and dark paper
	Dark   []string      `json:"dark"`
	Frame  *Frame        `json:"frame,omitempty"`
	Shapes *Shapes       `json:"shapes,omitempty"`
	Modes  []Mode        `json:"modes,omitempty"`
	Charts []*draw.Chart `json:"charts,omitempty"`
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

// Units of the page in SI.
const (
	degree = math.Pi / 180
	square = degree * degree
	rpm    = 2 * math.Pi / 60
)

// New packs what there is. describe puts a mode in words.
func New(s Sources, describe func(number int) string) *Scene {
	x := &Scene{}
	x.Light, x.Dark = draw.Scales()
	if s.Mesh != nil {
		x.Frame, x.Shapes = newFrame(s.Mesh, s.Properties, s.Modes)
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
	return x
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
