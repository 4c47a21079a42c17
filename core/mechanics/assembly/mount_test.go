package assembly_test

import (
	"context"
	"math"
	"slices"
	"testing"

	"hushframe/core/known"
	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/assembly"
)

func TestMountClasses(t *testing.T) {
	points := []airframe.MountPoint{{Stiffness: [6]float64{1, 1, 2, 0, 0, 3}}}
	for name, c := range map[string]struct {
		m    airframe.Mount
		want [][]int
	}{
		"alike":         {airframe.Mount{Points: points, Loss: [6]float64{0.1, 0.1, 0.1, 0, 0, 0.1}}, [][]int{{0, 1, 2, 5}}},
		"by direction":  {airframe.Mount{Points: points, Loss: [6]float64{0.1, 0.1, 0.3, 0.9, 0, 0.3}}, [][]int{{0, 1}, {2, 5}}},
		"own losses":    {airframe.Mount{Points: points, Loss: [6]float64{0.1, 0.2, 0.3}, Law: airframe.Law{Kind: airframe.Solid, Reference: 1, Rise: 2, PeakAt: 1}}, [][]int{{0, 1, 2, 5}}},
		"fractional":    {airframe.Mount{Points: points, Loss: [6]float64{0.1, 0.1, 0.2, 0, 0, 0.2}, Law: airframe.Law{Kind: airframe.Fractional, Reference: 1, Order: 0.5}}, [][]int{{0, 1}, {2, 5}}},
		"nothing there": {airframe.Mount{}, nil},
	} {
		if got := assembly.MountClasses(&c.m); !slices.EqualFunc(got, c.want, slices.Equal) {
			t.Errorf("%s: %v, want %v", name, got, c.want)
		}
	}
}

// A mount with a loss factor per direction is one group per class, whose stiffness adds up to that of the mount as one
// group: damping does not change K.
func TestMountGroups(t *testing.T) {
	m, p := known.Airframe(0.03)
	whole, err := assembly.FromAirframe(m, p, elementType)
	if err != nil {
		t.Fatal(err)
	}
	split := *p
	split.Bodies = slices.Clone(p.Bodies)
	for i := range split.Bodies {
		if b := &split.Bodies[i]; b.Name == "stack" {
			mount := *b.Mount
			mount.Loss = [6]float64{0.1, 0.1, 0.4}
			mount.Law = airframe.Law{Kind: airframe.Fractional, Reference: 100, Order: 0.5}
			b.Mount = &mount
		}
	}
	parts, err := assembly.FromAirframe(m, &split, elementType)
	if err != nil {
		t.Fatal(err)
	}
	at := func(f *assembly.Frame, name string) int {
		return slices.IndexFunc(f.Groups, func(g assembly.Group) bool { return g.Name == name })
	}
	across, along := at(parts, "grommets x y"), at(parts, "grommets z")
	if across < 0 || along < 0 || at(parts, "grommets") >= 0 || parts.Laws[along].LossFactor != 0.4 || parts.Laws[across].LossFactor != 0.1 || parts.Loss[along] != 0 {
		t.Fatalf("groups %v with laws %+v", parts.Groups, parts.Laws)
	}
	var sums []float64
	for _, f := range []*assembly.Frame{whole, parts} {
		s, err := assembly.Assemble(context.Background(), &f.Problem, 2)
		if err != nil {
			t.Fatal(err)
		}
		y := make([]float64, s.N)
		for i := range y {
			y[i] = math.Sin(float64(i))
		}
		k, err := s.GroupStiffness(context.Background(), [][]float64{y}, 2)
		if err != nil {
			t.Fatal(err)
		}
		sum := 0.0
		for g, x := range f.Groups {
			if len(x.Name) >= 8 && x.Name[:8] == "grommets" {
				sum += k[g][0]
			}
		}
		sums = append(sums, sum)
	}
	if !(sums[0] > 0) || math.Abs(sums[1]/sums[0]-1) > 1e-12 {
		t.Errorf("the mount in parts does the work %g, as one %g", sums[1], sums[0])
	}
}
