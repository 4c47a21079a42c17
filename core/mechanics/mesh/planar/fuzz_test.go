package planar

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

// Random polygons with holes and mesh lines, most of them nasty: the mesher must end with a sound mesh.
func TestRandomRegions(t *testing.T) {
	tried, turns := 0, 0
	for seed := range uint64(500) {
		rng := rand.New(rand.NewPCG(seed, 77))
		region, lines := randomPolygon(rng)
		size := 2e-3 + 6e-3*rng.Float64()
		o := Options{Size: uniform(size), Lines: lines, MaxVertices: 60000}
		if seed%2 == 1 {
			o = withRows(o, size)
		}
		if check(region) != nil {
			continue
		}
		tried++
		turns += len(region.Holes)
		m, err := Triangulate(region, o)
		if err != nil {
			t.Errorf("seed %d: %v", seed, err)
			continue
		}
		t.Run(fmt.Sprint("seed ", seed), func(t *testing.T) { checkMesh(t, region, m) })
	}
	if tried < 300 || turns < 300 {
		t.Errorf("only %d regions with %d holes were tried", tried, turns)
	}
}
