package sweep

import (
	"context"
	"math"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/forced"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/mechanics/modal"
	"hushframe/core/mechanics/rotor"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
)

// pointAt is a place whose nearest node is a named point.
type pointAt struct {
	name, part string
	at         airframe.Vec
}

func readPoints(list []any) ([]pointAt, error) {
	var out []pointAt
	seen := map[string]bool{}
	for _, x := range list {
		m := x.(map[string]any)
		p := pointAt{name: m["name"].(string)}
		p.part, _ = m["part"].(string)
		at := m["at"].([]any)
		if len(at) != 3 {
			return nil, fault.New(fault.Input, "a place has x, y and z, not %d numbers", len(at)).In("sweep", "point "+p.name).Of("points").
				Do(`write at = ["70 mm", "0 mm", "25 mm"]`)
		}
		for c, y := range at {
			p.at[c] = y.(stage.Quantity).SI
		}
		if p.name == "" || seen[p.name] {
			return nil, fault.New(fault.Input, "two points are called %q", p.name).In("sweep", "point "+p.name).Of("points").Do("give each a name of its own")
		}
		seen[p.name] = true
		out = append(out, p)
	}
	return out, nil
}

// probe is a named point with the rows of its displacement, and of its rotation if it is the gyro.
type probe struct {
	point      kinds.ResponsePoint
	move, turn [][]float64
}

// probes lists the sites and the points asked for.
func probes(basis *modal.Basis, sys *forced.System, g given, set settings) ([]probe, error) {
	var out []probe
	kindOf := map[string]string{}
	for k := range basis.Sites {
		s := &basis.Sites[k]
		p := probe{point: kinds.ResponsePoint{Name: s.Name, Kind: s.Kind, At: s.Point}}
		kindOf[s.Name] = s.Kind
		for c := range 3 {
			p.move = append(p.move, sys.SiteRow(s, c))
			if s.Kind == "gyro" {
				p.turn = append(p.turn, sys.SiteRow(s, 3+c))
			}
		}
		out = append(out, p)
	}
	for _, x := range set.points {
		if kind, taken := kindOf[x.name]; taken {
			return nil, fault.New(fault.Input, "a %s is called %q, and is a point already", kind, x.name).In("sweep", "point "+x.name).Of("points").
				Do("leave the point out, or give it another name")
		}
		node, part, err := nearest(g.mesh, x)
		if err != nil {
			return nil, err
		}
		if len(basis.Shapes) == 0 || 3*len(g.mesh.Nodes) != len(basis.Shapes[0]) {
			return nil, fault.New(fault.Input, "the modes are not of this mesh: they have %d nodes, the mesh %d", len(basis.Shapes[0])/3, len(g.mesh.Nodes)).
				In("sweep", "").Of("mesh").Do("give the mesh that solve was given")
		}
		p := probe{point: kinds.ResponsePoint{Name: x.name, Kind: "node", Part: part, At: g.mesh.Nodes[node]}}
		for c := range 3 {
			p.move = append(p.move, sys.NodeRow(node, c))
		}
		out = append(out, p)
	}
	return out, nil
}

// farthest is how far from a node a point may be asked for, m.
const farthest = 0.01

// nearest finds the node of a part nearest to a place.
func nearest(m *mesh.Mesh, x pointAt) (node int, part string, err error) {
	best := math.Inf(1)
	look := func(part32 int32, nodes []int32) {
		name := m.Parts[part32].Name
		if x.part != "" && name != x.part {
			return
		}
		for _, v := range nodes {
			n := m.Nodes[v]
			if d := math.Hypot(math.Hypot(n[0]-x.at[0], n[1]-x.at[1]), n[2]-x.at[2]); d < best {
				best, node, part = d, int(v), name
			}
		}
	}
	for e := range m.Triangles {
		look(m.TrianglePart[e], m.Triangles[e][:])
	}
	for e := range m.Beams {
		look(m.BeamPart[e], m.Beams[e][:])
	}
	var names []string
	for _, p := range m.Parts {
		names = append(names, p.Name)
	}
	switch {
	case math.IsInf(best, 1):
		return 0, "", fault.New(fault.Input, "no part is called %q", x.part).In("sweep", "point "+x.name).Of("points").Do("name one of %s", strings.Join(names, ", "))
	case best > farthest:
		return 0, "", fault.New(fault.Input, "the nearest node is %.1f mm away, on %s", 1e3*best, part).In("sweep", "point "+x.name).Of("points").
			Do("give a place on a plate or standoff; z counts from the airframe's origin upward")
	}
	return node, part, nil
}

// rows are those of all points, one after another: displacement, then rotation.
func rows(list []probe) [][]float64 {
	var out [][]float64
	for _, p := range list {
		out = append(append(out, p.move...), p.turn...)
	}
	return out
}

// points fills in the motion of the named points: their spectra under the
// broadband source, and their amplitudes at the lines of the rotors. rest holds their rows.
func points(ctx context.Context, r *kinds.Response, list []probe, f *fleet, sys *forced.System, rest *forced.Rest, set settings, threads int) error {
	density := make([][]float64, 0, 3*len(list))
	for _, p := range list {
		r.Points = append(r.Points, p.point)
		for range len(p.move) + len(p.turn) {
			density = append(density, make([]float64, len(r.Frequency)))
		}
	}
	err := rest.Probe(ctx, sys.Momenta(), threads, func(k int, motion [][]complex128) {
		for i := range density {
			density[i][k] = set.source.Density(r.Frequency[k], sys.Inputs(), motion[i])
		}
	})
	if err != nil {
		return err
	}
	next := 0
	spectrum := func(p probe, quantity, axis string, square []float64, power float64) {
		x := kinds.ResponsePointSpectrum{Point: p.point.Name, Quantity: quantity, Axis: axis, Loudest: r.Frequency[0]}
		most := math.Inf(-1)
		for k, y := range square { // of a displacement or rotation
			y *= math.Pow(2*math.Pi*r.Frequency[k], 2*power)
			if y > most {
				most, x.Loudest = y, r.Frequency[k]
			}
			x.Density = append(x.Density, y)
		}
		x.RMS = math.Sqrt(forced.MeanSquare(r.Frequency, x.Density))
		r.PointSpectra = append(r.PointSpectra, x)
	}
	for _, p := range list {
		for c, axis := range []string{"x", "y", "z"} {
			spectrum(p, kinds.Displacement, axis, density[next+c], 0)
			spectrum(p, kinds.Acceleration, axis, density[next+c], 2)
		}
		next += len(p.move)
		for c := range p.turn {
			spectrum(p, kinds.Rotation, kinds.AxisNames[c], density[next+c], 0)
			spectrum(p, kinds.Rate, kinds.AxisNames[c], density[next+c], 1)
		}
		next += len(p.turn)
	}
	return f.pointLines(ctx, r, list, sys, set, threads)
}

// pointLines fills in how the points move at the lines of the rotors. Rotors
// of one frequency are added as power.
func (f *fleet) pointLines(ctx context.Context, r *kinds.Response, list []probe, sys *forced.System, set settings, threads int) error {
	e := set.excitation(r.Thrust)
	var rows [][]float64
	for _, p := range list {
		rows = append(rows, p.move...)
	}
	for _, source := range rotor.ToneNames {
		left := f.voices(e, source)
		for len(left) > 0 {
			var now, later []voice
			for _, v := range left {
				if f.frequency(v) == f.frequency(left[0]) {
					now = append(now, v)
				} else {
					later = append(later, v)
				}
			}
			at := f.frequency(left[0])
			left = later
			if !(at > 0) {
				continue
			}
			err := sys.Probe(ctx, []float64{at}, rows, threads, func(_ int, motion [][]complex128) {
				for i, p := range list {
					x := kinds.ResponsePointLine{Point: p.point.Name, Source: source, Order: now[0].tone.Order, Frequency: at}
					for c := range 3 {
						for _, v := range now {
							x.Displacement[c] = math.Hypot(x.Displacement[c], under(sys.Inputs(), motion[3*i+c], f.rotors[v.rotor].Name, v.tone, f.speeds[v.rotor]))
						}
						x.Acceleration[c] = x.Displacement[c] * math.Pow(2*math.Pi*at, 2)
					}
					r.PointLines = append(r.PointLines, x)
				}
			})
			if err != nil {
				return err
			}
		}
	}
	return nil
}

// frequency is that of a voice at the speed of this response, Hz.
func (f *fleet) frequency(v voice) float64 { return rotor.Frequency(v.tone.Order, f.speeds[v.rotor]) }
