package assembly

import (
	"strings"

	"hushframe/core/mechanics/airframe"
)

// MountClasses sorts the components of a mount that have stiffness by damping: those of a class share
// their loss factor and law. Classes and components ascend.
func MountClasses(m *airframe.Mount) [][]int {
	var classes [][]int
	for c := range 6 {
		stiff := false
		for _, p := range m.Points {
			stiff = stiff || p.Stiffness[c] != 0
		}
		if !stiff {
			continue
		}
		loss, law := m.Component(c)
		found := false
		for k, class := range classes {
			other, otherLaw := m.Component(class[0])
			if loss == other && law.Equal(&otherLaw) {
				classes[k], found = append(class, c), true
				break
			}
		}
		if !found {
			classes = append(classes, []int{c})
		}
	}
	return classes
}

// mountGroup is a group and the components of the mount that belong to it.
type mountGroup struct {
	group      int
	components []int
}

// mountGroups makes a group of each class of a mount: "stack", or "stack x y" and "stack z".
func (b *builder) mountGroups(name string, m *airframe.Mount) ([]mountGroup, error) {
	var out []mountGroup
	classes := MountClasses(m)
	for _, class := range classes {
		own := name
		if len(classes) > 1 {
			var axes []string
			for _, c := range class {
				axes = append(axes, componentNames[c])
			}
			own += " " + strings.Join(axes, " ")
		}
		loss, law := m.Component(class[0])
		if err := law.Check(); err != nil {
			return nil, err
		}
		g := b.group(MountGroup, own, loss)
		b.frame.Laws[g] = law
		out = append(out, mountGroup{g, class})
	}
	return out, nil
}
