package modal

import (
	"math"
	"sort"

	"hushframe/core/mechanics/airframe"
)

// MeshError is how far the mesh is thought to put the frequency of a mode off.
type MeshError struct {
	Mode  int     // number of the mode
	Other float64 // Hz, of the same mode on the other mesh
	Error float64 // Hz
}

// meshOrder is the order in the size of elements with which frequencies are taken to converge. Quadratic
// elements do better where the solution is smooth; rims of rigid footprints are not.
const meshOrder = 2

// alikeEnough is the likeness below which two modes are not the same, and reachOfMesh how far, relative,
// a mesh is thought to move a frequency at most.
const (
	alikeEnough = 0.3
	reachOfMesh = 0.2
)

// CompareMeshes compares the modes with those of another mesh of the same frame whose elements are larger by
// the given factor, not 1 (below 1: smaller), and extrapolates: with f = f₀ + c h² on both meshes, f is off
// by |f - g| / |ratio² - 1| (L. F. Richardson, The approximate arithmetical solution by finite differences,
// Philos. Trans. R. Soc. A 210, 1911). Modes are paired by likeness: the assurance of the motion of the
// sites times the overlap of the shares of strain and kinetic energy. Modes without a partner are left out.
func (s *Survey) CompareMeshes(b *Basis, other *Survey, otherBasis *Basis, ratio float64) []MeshError {
	type pair struct {
		i, j int
		like float64
	}
	var pairs []pair
	for i := range s.Modes {
		for j := range other.Modes {
			x, y := &s.Modes[i], &other.Modes[j]
			if math.Abs(y.Frequency-x.Frequency) > reachOfMesh*x.Frequency {
				continue
			}
			like := assurance(b, x.Vector, otherBasis, y.Vector) * overlap(x.ByGroup, y.ByGroup) * overlap(x.ByKind, y.ByKind) * overlap(x.ByCarrier, y.ByCarrier)
			if like >= alikeEnough {
				pairs = append(pairs, pair{i, j, like})
			}
		}
	}
	sort.SliceStable(pairs, func(a, c int) bool { return pairs[a].like > pairs[c].like })
	mine, theirs := make([]bool, len(s.Modes)), make([]bool, len(other.Modes))
	var out []MeshError
	for _, p := range pairs {
		if mine[p.i] || theirs[p.j] {
			continue
		}
		mine[p.i], theirs[p.j] = true, true
		f, g := s.Modes[p.i].Frequency, other.Modes[p.j].Frequency
		out = append(out, MeshError{Mode: s.Modes[p.i].Number, Other: g, Error: math.Abs(f-g) / math.Abs(math.Pow(ratio, meshOrder)-1)})
	}
	sort.Slice(out, func(a, c int) bool { return out[a].Mode < out[c].Mode })
	return out
}

// assurance is the modal assurance criterion over the motions of the sites, rotations at the mean distance of
// the sites from their middle. Zero when the sites differ.
func assurance(a *Basis, v int, b *Basis, w int) float64 {
	if len(a.Sites) != len(b.Sites) || len(a.Sites) == 0 {
		return 0
	}
	var middle airframe.Vec
	for _, s := range a.Sites {
		for k := range middle {
			middle[k] += s.Point[k] / float64(len(a.Sites))
		}
	}
	arm := 0.0
	for _, s := range a.Sites {
		arm += math.Sqrt(sq(s.Point[0]-middle[0])+sq(s.Point[1]-middle[1])+sq(s.Point[2]-middle[2])) / float64(len(a.Sites))
	}
	var ab, aa, bb float64
	for i := range a.Sites {
		if a.Sites[i].Name != b.Sites[i].Name {
			return 0
		}
		x, y := a.Sites[i].Motion[v], b.Sites[i].Motion[w]
		for k := range x {
			weight := 1.0
			if k >= 3 {
				weight = arm * arm
			}
			ab += weight * x[k] * y[k]
			aa += weight * x[k] * x[k]
			bb += weight * y[k] * y[k]
		}
	}
	return ratio(ab*ab, aa*bb)
}

// overlap is Σ √(pᵢqᵢ) of two sets of shares: one for equal ones, zero without any in common.
func overlap(p, q []float64) float64 {
	if len(p) != len(q) {
		return 0
	}
	sum := 0.0
	for i := range p {
		sum += math.Sqrt(max(p[i], 0) * max(q[i], 0))
	}
	return sum
}

func sq(x float64) float64 { return x * x }
