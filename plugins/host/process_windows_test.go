package host

import "testing"

// children cannot be listed with what is at hand here.
func children(testing.TB) []int { return nil }

func freeze([]int) {}
