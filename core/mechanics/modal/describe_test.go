package modal_test

import (
	"slices"
	"testing"

	"hushframe/core/mechanics/modal"
)

// What leads a mode is of one kind: parts that bend, or mounts, not both.
func TestLeading(t *testing.T) {
	groups := []modal.LossGroup{{Name: "arm_rl", Kind: "part"}, {Name: "arm_rr", Kind: "part"}, {Name: "standoffs", Kind: "joint"}, {Name: "battery", Kind: "mount"}, {Name: "camera", Kind: "mount"}}
	for _, c := range []struct {
		shares []float64
		want   []string
	}{
		{[]float64{0.32, 0.32, 0.01, 0.32, 0.03}, []string{"arm_rl", "arm_rr"}},
		{[]float64{0.1, 0.1, 0, 0.4, 0.4}, []string{"battery", "camera"}},
		{[]float64{0.1, 0.1, 0.4, 0.4, 0}, []string{"standoffs"}},
		{[]float64{0.1, 0.1, 0, 0.7, 0.1}, []string{"battery"}},
	} {
		m := modal.Mode{ByGroup: c.shares}
		if got := m.Leading(groups); !slices.Equal(got, c.want) {
			t.Errorf("%v: %v, want %v", c.shares, got, c.want)
		}
	}
}
