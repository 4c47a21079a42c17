package sparse

import (
	"math/rand/v2"
	"slices"
	"testing"
)

// The counts must be those of an elimination played on sets.
func TestCountsAgreeWithElimination(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 1))
	for trial := range 30 {
		n := 5 + 3*trial
		var elements [][]int32
		for range n {
			e := []int32{int32(r.IntN(n)), int32(r.IntN(n)), int32(r.IntN(n))}
			elements = append(elements, e[:2+r.IntN(2)])
		}
		c := compress(NewAssembler(n, elements).Pattern())
		order := make([]int32, c.order())
		for k, v := range r.Perm(len(order)) {
			order[k] = int32(v)
		}
		q := newSymbolic(&c.graph, order)

		near := make([]map[int32]bool, c.order())
		for v := range near {
			near[v] = map[int32]bool{}
			for _, w := range c.near(int32(v)) {
				near[v][w] = true
			}
		}
		for k, v := range q.vertex {
			want := c.weight[v]
			parent := int32(-1)
			for w := range near[v] {
				want += c.weight[w]
				if parent < 0 || q.step[w] < parent {
					parent = q.step[w]
				}
			}
			if q.count[k] != want || q.parent[k] != parent {
				t.Fatalf("trial %d step %d: %d rows and parent %d, want %d and %d", trial, k, q.count[k], q.parent[k], want, parent)
			}
			for w := range near[v] {
				delete(near[w], v)
				for x := range near[v] {
					if x != w {
						near[w][x] = true
					}
				}
			}
		}
	}
}

func TestCompressJoinsEqualNeighbourhoods(t *testing.T) {
	// Two elements of three nodes with two unknowns each, sharing a node: three sets of unknowns.
	p := NewAssembler(10, [][]int32{{0, 1, 2, 3, 4, 5}, {4, 5, 6, 7, 8, 9}}).Pattern()
	c := compress(p)
	if !slices.Equal(c.weight, []int32{4, 2, 4}) || !slices.Equal(c.adj, []int32{1, 0, 2, 1}) {
		t.Errorf("weights %v neighbours %v", c.weight, c.adj)
	}
}

// A halo vertex is in view but never in the order.
func TestHaloIsNotOrdered(t *testing.T) {
	c := compress(NewAssembler(6, [][]int32{{0, 1}, {1, 2}, {2, 3}, {3, 4}, {4, 5}}).Pattern())
	halo := make([]bool, 6)
	halo[0], halo[5] = true, true
	order := minimumDegree(&c.graph, halo)
	slices.Sort(order)
	if !slices.Equal(order, []int32{1, 2, 3, 4}) {
		t.Errorf("order %v", order)
	}
}

// No edge may join the two sides, before and after the moves.
func TestBisectionSeparates(t *testing.T) {
	const n = 30
	var elements [][]int32
	var places [][3]float64
	for j := range int32(n) {
		for i := range int32(n) {
			places = append(places, [3]float64{float64(i), float64(j)})
			if i+1 < n {
				elements = append(elements, []int32{j*n + i, j*n + i + 1})
			}
			if j+1 < n {
				elements = append(elements, []int32{j*n + i, (j+1)*n + i})
			}
		}
	}
	c := compress(NewAssembler(n*n, elements).Pattern())
	b := bisect(&c.graph, stretched(places))
	var weight [3]float64
	for v, s := range b.side {
		weight[s] += float64(c.weight[v])
		for _, w := range c.near(int32(v)) {
			if s != between && b.side[w] == 1-s {
				t.Fatalf("vertices %d and %d are on different sides", v, w)
			}
		}
	}
	if weight != b.weight {
		t.Errorf("weights %v, counted %v", b.weight, weight)
	}
	if weight[between] > n || min(weight[0], weight[1]) < n*n/4 {
		t.Errorf("separator of %g between %g and %g in a grid of width %d", weight[between], weight[0], weight[1], n)
	}
}
