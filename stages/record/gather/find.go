package gather

import (
	"fmt"
	"path"
	"slices"
	"strconv"
	"strings"

	"hushframe/core/pipeline/nearest"
	"hushframe/core/signal/recording"
)

// Find returns the index of the column that a job means: by its name, which may lack the unit in brackets and differ in
// case; by its place, "#3"; or by a pattern with * and ? that fits one column only. Otherwise -1 and an error that names
// near columns.
func Find(names []string, wanted string) (int, error) {
	plain := make([]string, len(names))
	for i, n := range names {
		plain[i] = n
		for _, pair := range []string{"[]", "()"} {
			if open := strings.LastIndexByte(n, pair[0]); open > 0 && strings.HasSuffix(n, pair[1:]) {
				plain[i] = strings.TrimSpace(n[:open])
			}
		}
	}
	lower := strings.ToLower(wanted)
	for _, fits := range []func(i int) bool{
		func(i int) bool { return names[i] == wanted },
		func(i int) bool { return plain[i] == wanted },
		func(i int) bool { return strings.EqualFold(names[i], wanted) || strings.EqualFold(plain[i], wanted) },
		func(i int) bool { return wanted == "#"+strconv.Itoa(i+1) },
		func(i int) bool {
			if !strings.ContainsAny(wanted, "*?") {
				return false
			}
			whole, _ := path.Match(lower, strings.ToLower(names[i])) // a bad pattern fits nothing
			part, _ := path.Match(lower, strings.ToLower(plain[i]))
			return whole || part
		},
	} {
		var at []int
		for i := range names {
			if fits(i) {
				at = append(at, i)
			}
		}
		switch len(at) {
		case 0:
			continue
		case 1:
			return at[0], nil
		}
		return -1, &recording.Error{Column: wanted, Text: fmt.Sprintf("%d columns fit, the first two at #%d and #%d", len(at), at[0]+1, at[1]+1),
			Remedy: fmt.Sprintf("choose one by its place, such as \"#%d\"", at[0]+1)}
	}
	if n, err := strconv.Atoi(strings.TrimPrefix(wanted, "#")); err == nil && strings.HasPrefix(wanted, "#") {
		return -1, &recording.Error{Column: wanted, Text: fmt.Sprintf("the recording has %d columns, and none at place %d", len(names), n), Remedy: "places count from 1"}
	}
	remedy := "the columns are " + quoted(names)
	if near := nearest.Name(wanted, names); near != "" {
		remedy = fmt.Sprintf("did you mean %q? %s", near, remedy)
	}
	return -1, &recording.Error{Column: wanted, Text: "the recording has no such column", Remedy: remedy}
}

// quoted lists names, the first twenty of them.
func quoted(names []string) string {
	const most = 20
	var out []string
	for _, n := range names[:min(len(names), most)] {
		out = append(out, strconv.Quote(n))
	}
	if more := len(names) - most; more > 0 {
		out = append(out, fmt.Sprintf("and %d more", more))
	}
	return strings.Join(out, ", ")
}

// findSigned finds a column that may be written with a sign before it. A column whose own name begins with one wins.
func findSigned(h recording.Header, written string) (at int, sign float64, err error) {
	at, err = Find(h.Names(), written)
	if err == nil {
		return at, 1, nil
	}
	sign = 1
	rest, minus := strings.CutPrefix(written, "-")
	if minus {
		sign = -1
	} else {
		rest = strings.TrimPrefix(written, "+")
	}
	if rest == written {
		return -1, 0, err
	}
	at, err = Find(h.Names(), strings.TrimSpace(rest))
	return at, sign, err
}

// unitsByColumn turns the units of the job, whose keys may be names, places or patterns, into one per column. A pattern here
// may fit several columns.
func unitsByColumn(h recording.Header, units map[string]string) (map[string]string, error) {
	out := map[string]string{}
	names := h.Names()
	for _, key := range sorted(units) {
		if strings.ContainsAny(key, "*?") && !slices.Contains(names, key) {
			fits := 0
			for _, n := range names {
				if ok, _ := path.Match(strings.ToLower(key), strings.ToLower(n)); ok {
					out[n] = units[key]
					fits++
				}
			}
			if fits > 0 {
				continue
			}
		}
		i, err := Find(names, key)
		if err != nil {
			return nil, err
		}
		out[names[i]] = units[key]
	}
	return out, nil
}
