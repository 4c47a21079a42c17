package planar

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

// Random polygons with holes and mesh lines, most of them nasty: the mesher must end with a sound mesh.
func TestRandomRegions(t *testing.T) {
	for seed := range uint64(400) {
		rng := rand.New(rand.NewPCG(seed, 77))
		region, lines := randomPolygon(rng)
		if check(region) != nil {
			continue
		}
		m, err := Triangulate(region, Options{Size: uniform(2e-3 + 6e-3*rng.Float64()), Lines: lines, MaxVertices: 60000})
		if err != nil {
			t.Errorf("seed %d: %v", seed, err)
			continue
		}
		t.Run(fmt.Sprint("seed ", seed), func(t *testing.T) { checkMesh(t, region, m) })
	}
}
