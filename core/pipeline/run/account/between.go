package account

import (
	"math"
	"sort"
)

// Change is what differs between the accounts of two runs, before and after.
type Change struct {
	// Settings, Figures, Files and Programs list what is not the same; an entry without a text on a side is not there.
	Settings, Figures, Files, Programs []Pair
	// Verdicts lists every requirement of either run, in the order of the run after, then what only the other has.
	Verdicts []VerdictPair
}

// Pair is one thing of both runs.
type Pair struct {
	Name          string
	Before, After string
}

// States of a requirement.
const (
	Holds    = "holds"
	Broken   = "broken"
	Unjudged = "not judged"
	Absent   = "absent"
)

// VerdictPair is one requirement in both runs.
type VerdictPair struct {
	Name            string
	State           [2]string
	Value, Bound    [2]string
	Margin, Because [2]string
}

// Changed reports whether the state differs.
func (v VerdictPair) Changed() bool { return v.State[0] != v.State[1] }

// Worse reports whether a requirement held before and does not after.
func (v VerdictPair) Worse() bool {
	return v.State[0] == Holds && (v.State[1] == Broken || v.State[1] == Unjudged)
}

// rounding is the SI value below which a figure counts as 0: a centre of gravity on the middle line is 1e-18 m off.
const rounding = 1e-15

// Between lists what differs between two accounts. Files are named by the step and the path, texts of the job by their name.
func Between(before, after *Account) *Change {
	sides := [2]*Account{before, after}
	c := &Change{}
	c.Settings = differ(sides, func(a *Account, set func(name, text string)) {
		for _, x := range a.Settings {
			set(x.Name, x.Value)
		}
	})
	c.Figures = differ(sides, func(a *Account, set func(name, text string)) {
		for _, x := range a.Figures {
			if math.Abs(x.Number) < rounding {
				x.Text = "0"
			}
			set(x.Step+"."+x.Name, x.Text)
		}
	})
	c.Files = differ(sides, func(a *Account, set func(name, text string)) {
		for _, x := range a.Sources {
			set(x.Name, x.SHA256)
		}
		for _, x := range a.Files {
			set(x.Step+": "+x.Path, x.SHA256)
		}
	})
	c.Programs = differ(sides, func(a *Account, set func(name, text string)) {
		for _, x := range a.Executables {
			set(x.Name, x.SHA256)
		}
	})
	at := map[string]int{}
	for k := len(sides) - 1; k >= 0; k-- {
		for _, v := range sides[k].Verdicts {
			i, ok := at[v.Name]
			if !ok {
				i = len(c.Verdicts)
				at[v.Name] = i
				c.Verdicts = append(c.Verdicts, VerdictPair{Name: v.Name, State: [2]string{Absent, Absent}})
			}
			x := &c.Verdicts[i]
			x.Value[k], x.Bound[k], x.Margin[k], x.Because[k] = v.Value, v.Bound, v.Margin, v.Because
			switch {
			case v.Holds:
				x.State[k] = Holds
			case v.Judged:
				x.State[k] = Broken
			default:
				x.State[k] = Unjudged
			}
		}
	}
	return c
}

// differ lists names whose text is not the same on both sides, sorted.
func differ(sides [2]*Account, read func(a *Account, set func(name, text string))) []Pair {
	var texts [2]map[string]string
	names := map[string]bool{}
	for k, a := range sides {
		texts[k] = map[string]string{}
		read(a, func(name, text string) { texts[k][name], names[name] = text, true })
	}
	var out []Pair
	for name := range names {
		if a, b := texts[0][name], texts[1][name]; a != b {
			out = append(out, Pair{name, a, b})
		}
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Name < out[j].Name })
	return out
}
