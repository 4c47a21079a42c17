package dxf

import (
	"sort"
	"strings"
)

// unit is one unit of length: its value of $INSUNITS, names and size in metres.
type unit struct {
	code  int
	names []string
	metre float64
}

const (
	inch       = 0.0254
	surveyFoot = 1200.0 / 3937
	au         = 149597870700.0
)

var units = []unit{
	{1, []string{"inch", "in"}, inch},
	{2, []string{"foot", "ft"}, 12 * inch},
	{3, []string{"mile", "mi"}, 63360 * inch},
	{4, []string{"mm"}, 1e-3},
	{5, []string{"cm"}, 1e-2},
	{6, []string{"m"}, 1},
	{7, []string{"km"}, 1e3},
	{8, []string{"microinch"}, inch * 1e-6},
	{9, []string{"mil", "thou"}, inch * 1e-3},
	{10, []string{"yard", "yd"}, 36 * inch},
	{11, []string{"angstrom"}, 1e-10},
	{12, []string{"nm"}, 1e-9},
	{13, []string{"um", "µm", "micron"}, 1e-6},
	{14, []string{"dm"}, 1e-1},
	{15, []string{"dam"}, 10},
	{16, []string{"hm"}, 100},
	{17, []string{"Gm"}, 1e9},
	{18, []string{"au"}, au},
	{19, []string{"light-year"}, 9460730472580800},
	{20, []string{"parsec"}, au * 648000 / 3.14159265358979323846},
	{21, []string{"us-survey-foot"}, surveyFoot},
	{22, []string{"us-survey-inch"}, surveyFoot / 12},
	{23, []string{"us-survey-yard"}, 3 * surveyFoot},
	{24, []string{"us-survey-mile"}, 5280 * surveyFoot},
}

// UnitLength gives the length in metres of a unit by name, such as "mm" or "inch".
func UnitLength(name string) (metres float64, ok bool) {
	for _, u := range units {
		for _, n := range u.names {
			if n == name || strings.EqualFold(n, name) && len(n) > 2 {
				return u.metre, true
			}
		}
	}
	return 0, false
}

// UnitNames lists the names UnitLength knows, the first of each unit, sorted.
func UnitNames() []string {
	var names []string
	for _, u := range units {
		names = append(names, u.names[0])
	}
	sort.Strings(names)
	return names
}

// unitOf finds the unit of a value of $INSUNITS.
func unitOf(code int) (unit, bool) {
	for _, u := range units {
		if u.code == code {
			return u, true
		}
	}
	return unit{}, false
}
