package report

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// modesSection shows what the elastic modes are, and how they look.
func modesSection(c *content) *section {
	m := c.modes
	if m == nil {
		return nil
	}
	s := &section{ID: "modes", Title: "Modes"}
	proof := "a count of eigenvalues proves that none below that is missing"
	if !m.Proved {
		proof = "no count of eigenvalues confirms that none below that is missing"
	}
	s.text(fmt.Sprintf("%s up to %.4g Hz, of the frame free in space with %d unknowns; %s.",
		joinCount(below(m, m.UpTo), "elastic mode", "elastic modes"), m.UpTo, m.Unknowns, proof))
	s.table(modeTable(m))
	shapesOfModes(s, c)
	s.bars(energyBars(m))
	s.table(gapTable(m))
	s.table(meetingTable(m))
	s.table(strainTable(m))
	s.table(shareTable(m))
	return s
}

// shapesOfModes draws the modes if it can, and says why if it cannot.
func shapesOfModes(s *section, c *content) {
	m := c.modes
	if c.mesh == nil {
		s.aside("Pictures of the shapes need the mesh among the included artifacts.")
		return
	}
	if len(m.Basis.Shapes) > 0 && len(m.Basis.Shapes[0]) != 3*len(c.mesh.Nodes) {
		s.aside("The mesh included is not the one that the modes were computed on, so their shapes are not drawn.")
		return
	}
	gallery(s, c)
}

// below counts elastic modes up to a frequency.
func below(m *kinds.Modes, limit float64) int {
	n := 0
	for _, x := range m.Survey.Modes {
		if x.Frequency <= limit {
			n++
		}
	}
	return n
}

func modeTable(m *kinds.Modes) *table {
	t := &table{Name: "modes", Title: "Elastic modes",
		About: "Gyro strength: peak rate of that mode alone at its own damping, root sum of squares over unit forces at all rotor hubs. In bold the strongest of each axis; 0 is below a thousandth of it.",
		Columns: []column{{"mode", "", true}, {"frequency", "Hz", true}, {"damping ratio", "%", true}, {"most strain", "", false},
			{"roll", "(deg/s)/N", true}, {"pitch", "(deg/s)/N", true}, {"yaw", "(deg/s)/N", true}, {"to the mode below", "Hz", true}, {"above", "Hz", true}}}
	estimated := len(m.Survey.MeshErrors) > 0
	if estimated {
		t.Columns = append(t.Columns, column{"mesh error", "%", true})
		t.About += " The mesh error is what the mesh is thought to put the frequency off, from a second mesh; a dash where the mode was not found on it."
	}
	var best kinds.Strongest
	for _, x := range m.Survey.Modes {
		best.Add(x.Strength)
	}
	for _, x := range m.Survey.Modes {
		row := []cell{count(x.Number), number(x.Frequency, 1), percent(x.Loss/2, 2), words(strained(m, x))}
		for axis := range best {
			strength := unless(best.Negligible(axis, x.Strength[axis]), x.Strength[axis]/degree)
			strength.Strong = x.Strength[axis] > 0 && x.Strength[axis] == best[axis]
			row = append(row, strength)
		}
		row = append(row, distance(x.Below), distance(x.Above))
		if e, ok := m.Survey.MeshError(x.Number); ok {
			row = append(row, percent(e.Error/x.Frequency, 2))
		} else if estimated {
			row = append(row, missing())
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

func distance(d float64) cell {
	if math.IsInf(d, 0) {
		return missing()
	}
	return number(d, 1)
}

func gapTable(m *kinds.Modes) *table {
	s := m.Survey
	t := &table{Name: "gaps", Title: "Neighbours that the gyro feels together",
		About:   fmt.Sprintf("Between modes from %.4g to %.4g Hz with at least a tenth of the strongest strength on that axis.", s.From, s.To),
		Columns: []column{{"axis", "", false}, {"lower mode", "", true}, {"upper mode", "", true}, {"apart", "Hz", true}}}
	for axis, name := range kinds.AxisNames {
		least := math.Inf(1)
		for _, g := range s.Gaps[axis] {
			least = math.Min(least, g.Width)
		}
		for _, g := range s.Gaps[axis] {
			width := number(g.Width, 1)
			width.Strong = g.Width == least
			t.Rows = append(t.Rows, []cell{words(name), count(g.Lower), count(g.Upper), width})
		}
	}
	return t
}

// meetingTable has a row per mode; rotors that differ in blades or range make
// several entries in a cell, with their names.
func meetingTable(m *kinds.Modes) *table {
	t := &table{Name: "orders-met", Title: "Rotor speeds at which orders meet modes",
		About:   fmt.Sprintf("Speeds that the rotors reach; in bold those within %.0f %% of hover.", 100*modal.HoverBand),
		Columns: []column{{"mode", "", true}, {"frequency", "Hz", true}}}
	orders := [3]string{"order 1", "order 2", "blade passing"}
	for _, order := range orders {
		t.Columns = append(t.Columns, column{order, "rpm", true})
	}
	t.Columns = append(t.Columns, column{"near hover", "", false})
	for _, mode := range m.Survey.Modes {
		cells := [3]cell{missing(), missing(), missing()}
		for _, x := range mode.Meetings {
			if !x.Service {
				continue
			}
			k := 2
			if !x.Blade {
				k = x.Order - 1
			}
			c := number(x.Speed/rpm, 0)
			if len(x.Rotors) < len(m.Survey.Rotors) {
				var names []string
				for _, r := range x.Rotors {
					names = append(names, m.Survey.Rotors[r])
				}
				c = words(c.Text + " (" + strings.Join(names, ", ") + ")")
			}
			if before := cells[k]; before.Raw != "" {
				c = words(before.Text + "; " + c.Text)
				c.Strong = before.Strong
			}
			c.Strong = c.Strong || x.Hover
			cells[k] = c
		}
		row := []cell{count(mode.Number), number(mode.Frequency, 1)}
		var near []string
		for k, c := range cells {
			row = append(row, c)
			if c.Strong {
				near = append(near, orders[k])
			}
		}
		t.Rows = append(t.Rows, append(row, words(strings.Join(near, ", "))))
	}
	return t
}

// strainTable says where each mode stores its energy.
func strainTable(m *kinds.Modes) *table {
	t := &table{Name: "strain-energy", Title: "Where the energy is",
		About:   "The four groups with most strain energy, the kinds of strain, and what moves most by kinetic energy.",
		Columns: []column{{"mode", "", true}, {"frequency", "Hz", true}, {"strain energy in", "", false}, {"as", "", false}, {"kinetic energy in", "", false}}}
	for _, x := range m.Survey.Modes {
		t.Rows = append(t.Rows, []cell{count(x.Number), number(x.Frequency, 1), words(largest(m.Survey.Groups, x.ByGroup, 4)),
			words(largest(m.Survey.Kinds, x.ByKind, 3)), words(largest(m.Survey.Carriers, x.ByCarrier, 3))})
	}
	return t
}

// largest names the n greatest shares of at least two per cent.
func largest(names []string, shares []float64, n int) string {
	order := make([]int, len(names))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return shares[order[a]] > shares[order[b]] })
	var out []string
	for _, i := range order {
		if len(out) == n || shares[i] < 0.02 {
			break
		}
		out = append(out, share(names[i], shares[i]))
	}
	return strings.Join(out, ", ")
}

// shareTable says which rotor drives which mode.
func shareTable(m *kinds.Modes) *table {
	t := &table{Name: "rotor-shares", Title: "Which rotors drive which mode",
		About:   "Part of each rotor in the square of the gyro strength for unit forces, and strengths for unit moments; 0 is below a thousandth of the strongest on the axis.",
		Columns: []column{{"mode", "", true}, {"frequency", "Hz", true}}}
	for _, r := range m.Survey.Rotors {
		t.Columns = append(t.Columns, column{r, "%", true})
	}
	for _, axis := range kinds.AxisNames {
		t.Columns = append(t.Columns, column{axis + " by moments", "(deg/s)/(N·m)", true})
	}
	var best kinds.Strongest
	for _, x := range m.Survey.Modes {
		best.Add(x.MomentStrength)
	}
	for _, x := range m.Survey.Modes {
		row := []cell{count(x.Number), number(x.Frequency, 1)}
		for _, share := range x.RotorShare {
			row = append(row, percent(share, 0))
		}
		for axis, strength := range x.MomentStrength {
			row = append(row, unless(best.Negligible(axis, strength), strength/degree))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// mostPictures bounds the gallery, and with it the page.
const mostPictures = 36

// gallery draws the elastic modes in the band.
func gallery(s *section, c *content) {
	m := c.modes
	surface, view := c.drawing()
	limit := m.UpTo
	var pictures []figure
	for _, x := range m.Survey.Modes {
		if x.Frequency > limit || len(pictures) == mostPictures {
			break
		}
		pictures = append(pictures, figure{
			Title:   fmt.Sprintf("Mode %d at %.1f\u00a0Hz", x.Number, x.Frequency),
			Picture: trusted(view.Shape(surface, restName, c.modeMotion(x))),
			Caption: modeCaption(m, x),
			Mode:    x.Number,
		})
	}
	if len(pictures) == 0 {
		return
	}
	s.heading("Shapes")
	s.text("Each picture shows the frame deformed over its outline at rest, seen from behind and above, enlarged to the same largest displacement. " +
		"Colour is the displacement as a share of the largest; bodies are boxes, rotors rings on a stem. The arrow is the axis about which the gyro turns; the curved arrow runs the way round that the right hand gives.")
	steps := make([]int, draw.Levels)
	for k := range steps {
		steps[k] = k
	}
	s.Blocks = append(s.Blocks, block{Scale: &scaleBar{steps}}, block{Gallery: pictures})
	if n := below(m, limit); n > len(pictures) {
		s.aside(fmt.Sprintf("The first %d of %d modes are drawn.", len(pictures), n))
	}
}

// modeMotion is the motion of a mode, with the sign that moves the gyro, or
// else the frame, mostly the positive way.
func (c *content) modeMotion(x modal.Mode) draw.Motion {
	m := c.modes
	shape := m.Basis.Shapes[x.Vector]
	sign := 1.0
	if main, _ := mainAxis(x); x.Rotation[main] < 0 {
		sign = -1
	}
	motion := draw.Motion{
		About: fmt.Sprintf("Shape of mode %d at %.1f Hz. %s", x.Number, x.Frequency, modeCaption(m, x)),
		Node: func(n int32) airframe.Vec {
			u := shape[3*n : 3*n+3]
			return airframe.Vec{sign * u[0], sign * u[1], sign * u[2]}
		},
	}
	for _, site := range m.Basis.Sites {
		q := site.Motion[x.Vector]
		h := draw.Hub{At: site.Point, Move: airframe.Vec{sign * q[0], sign * q[1], sign * q[2]}, Turn: airframe.Vec{sign * q[3], sign * q[4], sign * q[5]}}
		switch site.Kind {
		case "rotor":
			motion.Hubs = append(motion.Hubs, h)
		case "gyro":
			motion.Gyro = &h
		}
		if half := c.half(site.Name); half != (airframe.Vec{}) {
			motion.Boxes = append(motion.Boxes, draw.Box{Hub: h, Half: half})
		}
	}
	return motion
}

// mainAxis is the axis about which the gyro turns most, with the share of it
// in the square of the rotation.
func mainAxis(x modal.Mode) (axis int, share float64) {
	sum := 0.0
	for k, r := range x.Rotation {
		sum += r * r
		if math.Abs(r) > math.Abs(x.Rotation[axis]) {
			axis = k
		}
	}
	if sum == 0 {
		return 0, 0
	}
	return axis, x.Rotation[axis] * x.Rotation[axis] / sum
}

func modeCaption(m *kinds.Modes, x modal.Mode) string {
	axis, share := mainAxis(x)
	gyro := "the gyro hardly turns"
	switch {
	case share > 0.9:
		gyro = "the gyro turns in " + kinds.AxisNames[axis]
	case share > 0:
		gyro = fmt.Sprintf("the gyro turns mostly in %s (%.0f\u00a0%%)", kinds.AxisNames[axis], 100*share)
	}
	return fmt.Sprintf("Most strain: %s; %s.", strained(m, x), gyro)
}

// strained says where and how a mode stores most energy: "bending of arm_fl,
// arm_fr", with all groups that store about as much as the first.
func strained(m *kinds.Modes, x modal.Mode) string {
	return x.Motion + " of " + strings.Join(x.Leading(m.Basis.Groups), ", ")
}
