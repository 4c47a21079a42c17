package gather

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

// Plan says which columns are read and what they mean.
type Plan struct {
	Time     string // "" for none
	TimeUnit string // "" if it is to be guessed from the steps
	Second   float64
	Axes     []Channel
	Rotors   []Channel
	Notes    []string // what was found or assumed
	Assumed  []string // what was assumed with little ground, worth a warning
}

// Channel is a column with its meaning.
type Channel struct {
	Name   string // axis or rotor
	Column string
	Sign   float64
	Unit   string
	Factor float64 // to SI, with the sign
	Of     string  // dimension
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
	roles := append(append([]string{"time"}, rateAxes...), accelerationAxes...)
	for _, role := range sorted(set.Columns) {
		if !slices.Contains(roles, role) {
			remedy := "the roles are " + strings.Join(roles, ", ")
			if near := nearest.Name(role, roles); near != "" {
				remedy = fmt.Sprintf("did you mean %q? %s", near, remedy)
			}
			return p, fault.New(fault.Input, "there is no role %q", role).Of("columns").Do("%s", remedy)
		}
	}
	for _, column := range sorted(set.Units) {
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
		i, err := delimited.Find(h.Names(), given)
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
			p.Notes = append(p.Notes, "columns found by name are taken to point along the airframe's axes; a turned sign changes no spectrum")
			return nil
		}
	}
	return &recording.Error{Text: "no column is an angular rate or an Acceleration by its name",
		Remedy: `name them in columns, such as { roll = "gx", pitch = "-gy", yaw = "-gz" }; ` + list(h)}
}

func (p *Plan) chooseRotors(h recording.Header, set Settings) error {
	for _, name := range sorted(set.Rotors) {
		c, err := p.stated(h, name, set.Rotors[name], RotorSpeed, set)
		if err != nil {
			return err
		}
		p.Rotors = append(p.Rotors, c)
	}
	if len(set.Rotors) > 0 {
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
		c, err := p.stated(h, name, column.Name, RotorSpeed, set)
		if err != nil {
			return err
		}
		p.Rotors = append(p.Rotors, c)
		p.Notes = append(p.Notes, fmt.Sprintf("the speed of rotor %s is column %q by its name, in %s", name, c.Column, c.Unit))
	}
	return nil
}

// stated makes a Channel of a column as the job writes it, with an optional sign. A column whose own name begins with a
// sign wins over a sign.
func (p *Plan) stated(h recording.Header, name, written, of string, set Settings) (Channel, error) {
	c := Channel{Name: name, Sign: 1, Of: of}
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
			c.Sign = -1
		}
		if i, err = delimited.Find(h.Names(), strings.TrimSpace(rest)); err != nil {
			return c, err
		}
	}
	c.Column = h.Columns[i].Name
	var ok bool
	if c.Unit, ok = unitOf(h.Columns[i], of, set); !ok {
		c.Unit = map[string]string{AngularRate: "deg/s", Acceleration: "m/s2", RotorSpeed: "rpm"}[of]
		p.Assumed = append(p.Assumed, fmt.Sprintf("column %q states no unit and is taken in %s", c.Column, c.Unit))
	}
	f, err := factor(c.Unit, of, c.Column)
	c.Factor = f * c.Sign
	return c, err
}

// unitOf returns the unit of a column: from the job, from the recording, from its name.
func unitOf(c recording.Column, dimension string, set Settings) (string, bool) {
	for _, column := range sorted(set.Units) {
		if i, err := delimited.Find([]string{c.Name}, column); err == nil && i == 0 {
			return set.Units[column], true
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
