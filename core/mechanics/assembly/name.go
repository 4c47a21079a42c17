package assembly

import (
	"fmt"
	"slices"
)

// Name says what an unknown is: the part or body it belongs to, its place and what moves there.
func (s *System) Name(unknown int) string {
	src, at := s.layout.source[unknown], s.layout.where[unknown]
	what := [6]string{"displacement along x", "displacement along y", "displacement along z", "rotation about x", "rotation about y", "rotation about z"}[src.component]
	owner := ""
	if src.node < 0 {
		owner = fmt.Sprintf("body %q", s.layout.bodies[src.body].name)
	} else if g := s.layout.groupOf(src.node); g >= 0 {
		owner = fmt.Sprintf("part %q", s.layout.problem.Groups[g].Name)
	}
	return fmt.Sprintf("%s near (%.4g, %.4g, %.4g) mm, %s", owner, 1e3*at[0], 1e3*at[1], 1e3*at[2], what)
}

// Place is where an unknown acts, m.
func (s *System) Place(unknown int) Vec { return s.layout.where[unknown] }

// groupOf returns the group of the first part that has a node, -1 for none.
func (l *layout) groupOf(node int32) int {
	for i := range l.problem.Plates {
		part := &l.problem.Plates[i]
		list := part.lists()
		for e := range part.Elements {
			if slices.Contains(list(e), node) {
				return part.Group
			}
		}
	}
	for i := range l.problem.Beams {
		for _, e := range l.problem.Beams[i].Elements {
			if e[0] == node || e[1] == node {
				return l.problem.Beams[i].Group
			}
		}
	}
	return -1
}
