package shell

import "hushframe/core/mechanics/element"

// Drill returns a built-in type whose drilling stiffness is factor times the usual.
func Drill(t element.Type, factor float64) element.Type {
	c := *t.(*triangle)
	c.drilling *= factor
	return &c
}
