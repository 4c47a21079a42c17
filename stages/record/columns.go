package record

import (
	"fmt"
	"slices"
	"sort"
	"strings"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/nearest"
	"hushframe/core/signal/recording"
	"hushframe/stages/record/delimited"
)

// plan says which columns are read and what they mean.
type plan struct {
	time     string // "" for none
	timeUnit string // "" if it is to be guessed from the steps
	second   float64
	axes     []channel
	rotors   []channel
	notes    []string // what was found or assumed
	assumed  []string // what was assumed with little ground, worth a warning
}

// channel is a column with its meaning.
type channel struct {
	name   string // axis or rotor
	column string
	sign   float64
	unit   string
	factor float64 // to SI, with the sign
	of     string  // dimension
}

// shown is the column with its sign.
func (c channel) shown() string {
	if c.sign < 0 {
		return "-" + c.column
	}
	return c.column
}

var rateAxes, accelerationAxes = []string{"roll", "pitch", "yaw"}, []string{"x", "y", "z"}

// assign chooses the columns.
func assign(h recording.Header, set settings) (plan, error) {
	p := plan{second: 1}
	roles := append(append([]string{"time"}, rateAxes...), accelerationAxes...)
	for _, role := range sorted(set.columns) {
		if !slices.Contains(roles, role) {
			remedy := "the roles are " + strings.Join(roles, ", ")
			if near := nearest.Name(role, roles); near != "" {
				remedy = fmt.Sprintf("did you mean %q? %s", near, remedy)
			}
			return p, fault.New(fault.Input, "there is no role %q", role).In("record", "").Of("columns").Do("%s", remedy)
		}
	}
	for _, column := range sorted(set.units) {
		if _, err := delimited.Find(h.Names(), column); err != nil {
			return p, err
		}
	}
	if err := p.chooseTime(h, set); err != nil {
		return p, err
	}
	if err := p.chooseAxes(h, set); err != nil {
		return p, err
	}
	return p, p.chooseRotors(h, set)
}

func (p *plan) chooseTime(h recording.Header, set settings) error {
	given := set.columns["time"]
	switch {
	case given != "" && set.rate > 0:
		return fault.New(fault.Input, "both a time column and a rate are given").In("record", "").Of("rate").
			Do("leave out the rate, or the time column if its times cannot be trusted")
	case set.rate > 0:
		p.notes = append(p.notes, fmt.Sprintf("the rate of %g Hz is that of the job; no time column is used", set.rate))
		return nil
	case h.Timed && given == "":
		return nil
	case given != "":
		i, err := delimited.Find(h.Names(), given)
		if err != nil {
			return err
		}
		p.time = h.Columns[i].Name
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
			p.notes = append(p.notes, fmt.Sprintf("the rate of %g Hz is that of the recording", h.Rate))
			return nil
		}
		if len(found) == 0 {
			return &recording.Error{Text: "no column is a time by its name",
				Remedy: `name it in columns, such as { time = "t" }, or state the rate, such as rate = "2 kHz"; ` + list(h)}
		}
		p.time = h.Columns[found[0]].Name
		p.notes = append(p.notes, fmt.Sprintf("time is column %q by its name", p.time))
	}
	i := slices.Index(h.Names(), p.time)
	unit, _ := unitOf(h.Columns[i], "time", set)
	if unit != "" {
		var err error
		if p.second, err = factor(unit, "time", p.time); err != nil {
			return err
		}
		p.timeUnit = unit
	}
	return nil
}

func (p *plan) chooseAxes(h recording.Header, set settings) error {
	for _, group := range []struct {
		axes []string
		of   string
	}{{rateAxes, angularRate}, {accelerationAxes, acceleration}} {
		for _, axis := range group.axes {
			if column := set.columns[axis]; column != "" {
				c, err := p.stated(h, axis, column, group.of, set)
				if err != nil {
					return err
				}
				p.axes = append(p.axes, c)
			}
		}
	}
	if len(p.axes) > 0 {
		return nil
	}
	for _, group := range []struct {
		axes []string
		of   string
		find func([]string) string
	}{{rateAxes, angularRate, rateAxis}, {accelerationAxes, acceleration, accelerationAxis}} {
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
				p.axes = append(p.axes, c)
				p.notes = append(p.notes, fmt.Sprintf("%s is column %q by its name, in %s", axis, c.column, c.unit))
			}
		}
		if len(p.axes) > 0 {
			p.notes = append(p.notes, "columns found by name are taken to point along the airframe's axes; a turned sign changes no spectrum")
			return nil
		}
	}
	return &recording.Error{Text: "no column is an angular rate or an acceleration by its name",
		Remedy: `name them in columns, such as { roll = "gx", pitch = "-gy", yaw = "-gz" }; ` + list(h)}
}

func (p *plan) chooseRotors(h recording.Header, set settings) error {
	for _, name := range sorted(set.rotors) {
		c, err := p.stated(h, name, set.rotors[name], rotorSpeed, set)
		if err != nil {
			return err
		}
		p.rotors = append(p.rotors, c)
	}
	if len(set.rotors) > 0 {
		return nil
	}
	names := map[string]bool{}
	for _, column := range h.Columns {
		name, ok := rotorName(words(column.Name))
		if !ok || column.Text {
			continue
		}
		if name == "" || names[name] {
			name = column.Name
		}
		names[name] = true
		c, err := p.stated(h, name, column.Name, rotorSpeed, set)
		if err != nil {
			return err
		}
		p.rotors = append(p.rotors, c)
		p.notes = append(p.notes, fmt.Sprintf("the speed of rotor %s is column %q by its name, in %s", name, c.column, c.unit))
	}
	return nil
}

// stated makes a channel of a column as the job writes it, with an optional sign. A column whose own name begins with a
// sign wins over a sign.
func (p *plan) stated(h recording.Header, name, written, of string, set settings) (channel, error) {
	c := channel{name: name, sign: 1, of: of}
	i, err := delimited.Find(h.Names(), written)
	if err != nil {
		rest, minus := strings.CutPrefix(written, "-")
		if !minus {
			rest = strings.TrimPrefix(written, "+")
		}
		if rest == written {
			return c, err
		}
		if minus {
			c.sign = -1
		}
		if i, err = delimited.Find(h.Names(), strings.TrimSpace(rest)); err != nil {
			return c, err
		}
	}
	c.column = h.Columns[i].Name
	var ok bool
	if c.unit, ok = unitOf(h.Columns[i], of, set); !ok {
		c.unit = map[string]string{angularRate: "deg/s", acceleration: "m/s2", rotorSpeed: "rpm"}[of]
		p.assumed = append(p.assumed, fmt.Sprintf("column %q states no unit and is taken in %s", c.column, c.unit))
	}
	f, err := factor(c.unit, of, c.column)
	c.factor = f * c.sign
	return c, err
}

// unitOf returns the unit of a column: from the job, from the recording, from its name.
func unitOf(c recording.Column, dimension string, set settings) (string, bool) {
	for _, column := range sorted(set.units) {
		if i, err := delimited.Find([]string{c.Name}, column); err == nil && i == 0 {
			return set.units[column], true
		}
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
func list(h recording.Header) string {
	const most = 20
	names := h.Names()
	out := "the columns are "
	for i, n := range names[:min(len(names), most)] {
		if i > 0 {
			out += ", "
		}
		out += fmt.Sprintf("%q", n)
	}
	if more := len(names) - most; more > 0 {
		out += fmt.Sprintf(" and %d more", more)
	}
	return out
}

func sorted(m map[string]string) []string {
	var out []string
	for k := range m {
		out = append(out, k)
	}
	sort.Strings(out)
	return out
}
