package gather

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/signal/recording"
)

// Plan says which columns are read and what they mean.
type Plan struct {
	Time     string // "" for none
	TimeUnit string // "" if it is to be guessed from the steps
	Second   float64
	// ClockUnits are the units of further time columns, "" where none is stated.
	ClockUnits map[string]string
	Axes       []Channel
	Apart      []Channel // accelerations that do not share the rows of the axes
	Rotors     []Channel
	Throttle   *Channel // nil for none
	Force      *Channel // nil unless the settings ask for it
	// SetPoints are those of axes that are read, each called by its axis.
	SetPoints []Channel
	Notes     []string // what was found or assumed
	Assumed   []string // what was assumed with little ground, worth a warning
	Findings  []recording.Finding
}

// Channel is a column with its meaning.
type Channel struct {
	Name   string // axis or rotor
	Column string
	Sign   float64
	Unit   string
	Factor float64 // to SI, with the sign
	Of     string  // dimension
	Clock  string  // time column of its own, "" for that of the plan
}

// Shown is the column with its sign.
func (c Channel) Shown() string {
	if c.Sign < 0 {
		return "-" + c.Column
	}
	return c.Column
}

var rateAxes, accelerationAxes = []string{"roll", "pitch", "yaw"}, []string{"x", "y", "z"}

// assign chooses the columns.
func assign(h recording.Header, set Settings) (Plan, error) {
	p := Plan{Second: 1}
	roles := slices.Concat([]string{"time"}, rateAxes, accelerationAxes)
	if set.Force {
		roles = append(roles, "force")
	}
	for _, role := range sorted(set.Columns) {
		if !slices.Contains(roles, role) {
			remedy := "the roles are " + strings.Join(roles, ", ")
			if near := nearest.Name(role, roles); near != "" {
				remedy = fmt.Sprintf("did you mean %q? %s", near, remedy)
			}
			return p, fault.New(fault.Input, "there is no role %q", role).Of("columns").Do("%s", remedy)
		}
	}
	var err error
	if set.Units, err = unitsByColumn(h, set.Units); err != nil {
		return p, err
	}
	for _, choose := range []func(recording.Header, Settings) error{p.chooseTime, p.chooseAxes, p.chooseForce, p.chooseRotors, p.chooseThrottle, p.chooseSetPoints, p.chooseClocks} {
		if err := choose(h, set); err != nil {
			return p, err
		}
	}
	return p, p.mounted(set)
}

func (p *Plan) chooseTime(h recording.Header, set Settings) error {
	given := set.Columns["time"]
	switch {
	case given != "" && set.Rate > 0:
		return fault.New(fault.Input, "both a time column and a rate are given").Of("rate").
			Do("leave out the rate, or the time column if its times cannot be trusted")
	case set.Rate > 0:
		p.Notes = append(p.Notes, fmt.Sprintf("the rate of %g Hz is that of the job; no time column is used", set.Rate))
		return nil
	case h.Timed && given == "":
		return nil
	case given != "":
		i, err := Find(h.Names(), given)
		if err != nil {
			return err
		}
		p.Time = h.Columns[i].Name
	default:
		found := matching(h, func(w []string) string {
			if isTime(w) {
				return "time"
			}
			return ""
		})["time"]
		if len(found) > 1 {
			return several("time", h, found)
		}
		if len(found) == 0 && h.Rate > 0 {
			p.Notes = append(p.Notes, fmt.Sprintf("the rate of %g Hz is that of the recording", h.Rate))
			return nil
		}
		if len(found) == 0 {
			return &recording.Error{Text: "no column is a time by its name",
				Remedy: `name it in columns, such as { time = "t" }, or state the rate, such as rate = "2 kHz"; ` + list(h)}
		}
		p.Time = h.Columns[found[0]].Name
		p.Notes = append(p.Notes, fmt.Sprintf("time is column %q by its name", p.Time))
	}
	i := slices.Index(h.Names(), p.Time)
	unit, _ := unitOf(h.Columns[i], "time", set)
	if unit != "" {
		var err error
		if p.Second, err = factor(unit, "time", p.Time); err != nil {
			return err
		}
		p.TimeUnit = unit
	}
	return nil
}

func (p *Plan) chooseAxes(h recording.Header, set Settings) error {
	for _, group := range []struct {
		axes []string
		of   string
	}{{rateAxes, AngularRate}, {accelerationAxes, Acceleration}} {
		for _, axis := range group.axes {
			if column := set.Columns[axis]; column != "" {
				c, err := p.stated(h, axis, column, group.of, set)
				if err != nil {
					return err
				}
				for _, other := range p.Axes {
					if other.Column == c.Column {
						return fault.New(fault.Input, "column %q is given for %s and for %s", c.Column, other.Name, axis).Of("columns").Do("name another column for one of them, or leave it out")
					}
				}
				p.Axes = append(p.Axes, c)
			}
		}
	}
	if len(p.Axes) > 0 {
		return nil
	}
	for _, group := range []struct {
		axes []string
		of   string
		find func([]string) string
	}{{rateAxes, AngularRate, rateAxis}, {accelerationAxes, Acceleration, accelerationAxis}} {
		found := matching(h, group.find)
		for _, axis := range group.axes {
			switch at := found[axis]; {
			case len(at) > 1:
				return several(axis, h, at)
			case len(at) == 1:
				c, err := p.stated(h, axis, h.Columns[at[0]].Name, group.of, set)
				if err != nil {
					return err
				}
				p.Axes = append(p.Axes, c)
				p.Notes = append(p.Notes, fmt.Sprintf("%s is column %q by its name, in %s", axis, c.Column, c.Unit))
			}
		}
		if len(p.Axes) > 0 {
			for _, c := range h.Columns {
				if axis := group.find(words(c.Name)); axis != "" && c.Text && len(found[axis]) == 0 {
					p.leftOut(c, axis)
				}
			}
			p.Notes = append(p.Notes, "columns found by name are taken to point along the airframe's axes; a turned sign changes no spectrum")
			return nil
		}
	}
	return &recording.Error{Text: "no column is an angular rate or an acceleration by its name",
		Remedy: `name them in columns, such as { roll = "gx", pitch = "-gy", yaw = "-gz" }; ` + list(h)}
}

func (p *Plan) chooseForce(h recording.Header, set Settings) error {
	if !set.Force {
		return nil
	}
	written := set.Columns["force"]
	if written == "" {
		at := matching(h, func(w []string) string {
			if has(w, "force", "hammer", "load") {
				return Force
			}
			return ""
		})[Force]
		switch len(at) {
		case 0:
			return &recording.Error{Text: "no column is a force by its name", Remedy: `name it in columns, such as { force = "hammer" }; ` + list(h)}
		case 1:
			written = h.Columns[at[0]].Name
			p.Notes = append(p.Notes, fmt.Sprintf("the force is column %q by its name", written))
		default:
			return several("force", h, at)
		}
	}
	c, err := p.stated(h, Force, written, Force, set)
	p.Force = &c
	return err
}

func (p *Plan) chooseRotors(h recording.Header, set Settings) error {
	for _, name := range sorted(set.Rotors) {
		if err := p.addRotor(h, name, set.Rotors[name], set); err != nil {
			return err
		}
	}
	if len(set.Rotors) > 0 {
		return nil
	}
	names := map[string]bool{}
	for _, column := range h.Columns {
		name, ok := rotorName(words(column.Name))
		if ok && column.Text {
			p.leftOut(column, "the speed of rotor "+cmp.Or(name, column.Name))
		}
		if !ok || column.Text {
			continue
		}
		if name == "" || names[name] {
			name = column.Name
		}
		names[name] = true
		if err := p.addRotor(h, name, column.Name, set); err != nil {
			return err
		}
		c := p.Rotors[len(p.Rotors)-1]
		p.Notes = append(p.Notes, fmt.Sprintf("the speed of rotor %s is column %q by its name, in %s", name, c.Column, c.Unit))
	}
	return nil
}

// leftOut tells of a column that would have a role by its name, but holds no numbers.
func (p *Plan) leftOut(c recording.Column, role string) {
	p.Findings = append(p.Findings, recording.Finding{What: "no numbers", Where: c.Name,
		Extent: fmt.Sprintf("it would be %s by its name, but most of its fields are not numbers", role), Consequence: "it was left out"})
}

// addRotor adds the speed of a rotor; that of the field in the motor is divided by the pole pairs.
func (p *Plan) addRotor(h recording.Header, name, column string, set Settings) error {
	c, err := p.stated(h, name, column, RotorSpeed, set)
	if err != nil {
		return err
	}
	switch {
	case set.PolePairs > 0:
		c.Factor /= float64(set.PolePairs)
		c.Unit += fmt.Sprintf(" electrical, over %d pole pairs", set.PolePairs)
	case isElectrical(words(c.Column)):
		return fault.New(fault.Input, "column %q is an electrical speed by its name", c.Column).Of("pole_pairs").
			Do("give the pole pairs of the motor (half its magnets), such as pole_pairs = 7; or name the column in rotors of a recording that has the speed of the shaft")
	}
	p.Rotors = append(p.Rotors, c)
	return nil
}

func (p *Plan) chooseThrottle(h recording.Header, set Settings) error {
	written, found := set.Throttle, false
	if written == "" {
		at := matching(h, func(w []string) string {
			if isThrottle(w) && !isSetPoint(w) {
				return Throttle
			}
			return ""
		})[Throttle]
		if len(at) > 1 {
			p.Notes = append(p.Notes, fmt.Sprintf("%d columns could be the throttle by their names; none is used", len(at)))
		}
		if len(at) != 1 {
			return nil
		}
		written, found = h.Columns[at[0]].Name, true
	}
	i, sign, err := findSigned(h, written)
	if err != nil {
		return err
	}
	c := Channel{Name: Throttle, Column: h.Columns[i].Name, Sign: sign, Of: Throttle}
	c.Unit, _ = unitOf(h.Columns[i], Throttle, set)
	if c.Factor, err = factor(c.Unit, Throttle, c.Column); err != nil {
		return err
	}
	c.Factor *= sign
	p.Throttle = &c
	if found {
		p.Notes = append(p.Notes, fmt.Sprintf("the throttle is column %q by its name", c.Column))
	}
	return nil
}

// chooseSetPoints takes the set-points of the axes that are read.
func (p *Plan) chooseSetPoints(h recording.Header, set Settings) error {
	for _, role := range sorted(set.SetPoints) {
		if !slices.Contains(rateAxes, role) {
			return fault.New(fault.Input, "there is no set-point of %q", role).Of("set_points").Do("give those of roll, pitch and yaw")
		}
	}
	found := matching(h, setPointAxis)
	for _, axis := range p.Axes {
		if axis.Of != AngularRate {
			continue
		}
		written := set.SetPoints[axis.Name]
		byName := written == "" && len(set.SetPoints) == 0 && len(found[axis.Name]) == 1
		if byName {
			written = h.Columns[found[axis.Name][0]].Name
		}
		if written == "" {
			continue
		}
		i, sign, err := findSigned(h, written)
		if err != nil {
			return err
		}
		c := Channel{Name: axis.Name, Column: h.Columns[i].Name, Sign: sign, Of: AngularRate}
		var ok bool
		if c.Unit, ok = unitOf(h.Columns[i], AngularRate, set); !ok {
			c.Unit = axis.Unit // its coherence does not depend on it
		}
		f, err := factor(c.Unit, AngularRate, c.Column)
		if err != nil {
			return err
		}
		c.Factor = f * sign
		p.SetPoints = append(p.SetPoints, c)
		if byName {
			p.Notes = append(p.Notes, fmt.Sprintf("the set-point of %s is column %q by its name", c.Name, c.Column))
		}
	}
	return nil
}

// chooseClocks gives channels the time columns that the job states for them.
func (p *Plan) chooseClocks(h recording.Header, set Settings) error {
	clocks := map[string]string{}
	for _, written := range sorted(set.Clocks) {
		i, err := Find(h.Names(), written)
		if err != nil {
			return err
		}
		k, err := Find(h.Names(), set.Clocks[written])
		if err != nil {
			return err
		}
		clocks[h.Columns[i].Name] = h.Columns[k].Name
		if p.ClockUnits == nil {
			p.ClockUnits = map[string]string{}
		}
		unit, stated := unitOf(h.Columns[k], "time", set)
		if !stated {
			unit = p.TimeUnit
		}
		p.ClockUnits[h.Columns[k].Name] = unit
	}
	used := map[string]bool{}
	give := func(c *Channel) {
		if clock, ok := clocks[c.Column]; ok {
			used[c.Column] = true
			if clock != p.Time {
				c.Clock = clock
			}
		}
	}
	for _, list := range [][]Channel{p.Axes, p.Rotors, p.SetPoints} {
		for i := range list {
			give(&list[i])
		}
	}
	if p.Throttle != nil {
		give(p.Throttle)
	}
	for _, written := range sorted(set.Clocks) {
		i, _ := Find(h.Names(), written)
		if !used[h.Columns[i].Name] {
			return fault.New(fault.Input, "column %q has a clock and is not read", h.Columns[i].Name).Of("clocks").Do("leave it out, or give the column a role")
		}
	}
	for i, c := range p.Axes {
		if i > 0 && c.Clock != p.Axes[i-1].Clock && !(set.Apart && c.Of != p.Axes[i-1].Of) {
			return fault.New(fault.Input, "the axes %s and %s have different clocks", p.Axes[i-1].Name, c.Name).Of("clocks").
				Do("give all axes of a sensor one clock; gyro and accelerometer may differ in a step \"record\", and take a step each elsewhere")
		}
	}
	return nil
}

// mounted checks that all axes of a sensor that is turned are there.
func (p *Plan) mounted(set Settings) error {
	if len(set.Mounting) == 0 {
		return nil
	}
	count := map[string]int{}
	for _, c := range p.Axes {
		count[c.Of]++
	}
	for _, of := range []string{AngularRate, Acceleration} {
		if count[of]%3 != 0 {
			return fault.New(fault.Input, "a turned sensor needs all three axes, and the recording gives %d of %s", count[of], of).Of("mounting").
				Do("name the other columns, or leave the mounting out")
		}
	}
	p.Notes = append(p.Notes, fmt.Sprintf("the sensor is turned by %.4g, %.4g and %.4g deg about x, y and z; its axes are turned back to those of the airframe",
		set.Mounting[0]*180/math.Pi, set.Mounting[1]*180/math.Pi, set.Mounting[2]*180/math.Pi))
	return nil
}

// stated makes a Channel of a column as the job writes it, with an optional sign.
func (p *Plan) stated(h recording.Header, name, written, of string, set Settings) (Channel, error) {
	c := Channel{Name: name, Of: of}
	i, sign, err := findSigned(h, written)
	if err != nil {
		return c, err
	}
	c.Sign, c.Column = sign, h.Columns[i].Name
	var ok bool
	if c.Unit, ok = unitOf(h.Columns[i], of, set); !ok {
		c.Unit = map[string]string{AngularRate: "deg/s", Acceleration: "m/s2", RotorSpeed: "rpm", Force: "N"}[of]
		p.Assumed = append(p.Assumed, fmt.Sprintf("column %q states no unit and is taken in %s", c.Column, c.Unit))
	}
	f, err := factor(c.Unit, of, c.Column)
	c.Factor = f * c.Sign
	return c, err
}

// unitOf returns the unit of a column: from the job, from the recording, from its name.
func unitOf(c recording.Column, dimension string, set Settings) (string, bool) {
	if unit, ok := set.Units[c.Name]; ok {
		return unit, true
	}
	if c.Unit != "" {
		return c.Unit, true
	}
	unit := unitInName(words(c.Name), dimension)
	return unit, unit != ""
}

// matching sorts the columns that hold numbers by what find calls them.
func matching(h recording.Header, find func([]string) string) map[string][]int {
	out := map[string][]int{}
	for i, c := range h.Columns {
		if name := find(words(c.Name)); name != "" && !c.Text {
			out[name] = append(out[name], i)
		}
	}
	return out
}

func several(role string, h recording.Header, at []int) error {
	var names []string
	for _, i := range at {
		names = append(names, fmt.Sprintf("%q", h.Columns[i].Name))
	}
	return &recording.Error{Text: fmt.Sprintf("%d columns could be %s by their names: %s", len(at), role, strings.Join(names, ", ")),
		Remedy: fmt.Sprintf("choose one in columns, such as { %s = %s }", role, names[0])}
}

// list names the columns of the recording.
func list(h recording.Header) string { return "the columns are " + quoted(h.Names()) }

func sorted(m map[string]string) []string {
	var out []string
	for k := range m {
		out = append(out, k)
	}
	sort.Strings(out)
	return out
}
