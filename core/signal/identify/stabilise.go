package identify

import (
	"math"
	"math/cmplx"
	"slices"
	"sync"
)

// Entry is one pole in the stabilisation diagram.
type Entry struct {
	Order int
	Pole
	// Stable tells that the order before has a pole with nearly this frequency, damping and shape.
	Stable bool
	// Mode is the index of the cluster that holds it, -1 for none.
	Mode int
}

// Diagram holds the poles of models of rising order.
type Diagram struct {
	Orders  []int
	Entries []Entry // by order, then frequency
}

// bounds say which poles are looked at.
type bounds struct {
	from, to float64 // Hz
	damping  float64 // highest ζ
}

func (b bounds) hold(p Pole) bool {
	return p.Frequency >= b.from && p.Frequency <= b.to && p.Damping > 0 && p.Damping <= b.damping
}

// distance between two poles: relative distance in the complex plane, and disagreement of the shapes at half weight.
func distance(a, b Pole) float64 {
	return cmplx.Abs(a.Lambda-b.Lambda)/math.Max(cmplx.Abs(a.Lambda), cmplx.Abs(b.Lambda)) + (1-Agreement(a.Shape, b.Shape))/2
}

// diagram computes the models of all even orders from 2 to highest and marks what is stable within a distance.
func (s *Subspace) diagram(highest int, b bounds, near float64, threads int) (*Diagram, map[int]*model) {
	var orders []int
	for n := 2; n <= highest; n += 2 {
		orders = append(orders, n)
	}
	models := make([]*model, len(orders))
	var wait sync.WaitGroup
	next := make(chan int, len(orders))
	for k := len(orders) - 1; k >= 0; k-- { // the largest first, so that the work ends together
		next <- k
	}
	close(next)
	for range max(1, threads) {
		wait.Go(func() {
			for k := range next {
				if m, ok := s.model(orders[k]); ok {
					models[k] = m
				}
			}
		})
	}
	wait.Wait()
	d := &Diagram{}
	byOrder := map[int]*model{}
	var before []Pole
	for k, m := range models {
		if m == nil {
			continue
		}
		d.Orders = append(d.Orders, orders[k])
		byOrder[orders[k]] = m
		var here []Pole
		for _, p := range s.poles(m) {
			if !b.hold(p) {
				continue
			}
			here = append(here, p)
			stable := slices.ContainsFunc(before, func(q Pole) bool { return distance(p, q) <= near })
			d.Entries = append(d.Entries, Entry{Order: orders[k], Pole: p, Stable: stable, Mode: -1})
		}
		before = here
	}
	return d, byOrder
}

// cluster groups the stable poles. The pole with the most orders that have a stable pole within reach leads; each of these orders
// gives its nearest; the rest goes on until the leader has fewer orders than least. Clusters are sorted by frequency.
func (d *Diagram) cluster(reach float64, least int) [][]int {
	var stable []int
	for i, e := range d.Entries {
		if e.Stable {
			stable = append(stable, i)
		}
	}
	neighbours := make([][]int, len(stable))
	for a := range stable {
		for b := range stable {
			if distance(d.Entries[stable[a]].Pole, d.Entries[stable[b]].Pole) <= reach {
				neighbours[a] = append(neighbours[a], b)
			}
		}
	}
	taken := make([]bool, len(stable))
	// gather takes the nearest free neighbour of every order.
	gather := func(a int) (members []int, spread float64) {
		order := -1
		best, nearest := -1, 0.0
		flush := func() {
			if best >= 0 {
				members = append(members, best)
				spread += nearest
			}
			best = -1
		}
		for _, b := range neighbours[a] {
			e := d.Entries[stable[b]]
			if taken[b] {
				continue
			}
			if e.Order != order {
				flush()
				order = e.Order
			}
			if by := distance(d.Entries[stable[a]].Pole, e.Pole); best < 0 || by < nearest {
				best, nearest = b, by
			}
		}
		flush()
		return members, spread
	}
	var out [][]int
	for {
		var lead []int
		closest := 0.0
		for a := range stable {
			if taken[a] || len(neighbours[a]) < least || len(neighbours[a]) < len(lead) {
				continue
			}
			members, spread := gather(a)
			if len(members) > len(lead) || len(members) == len(lead) && spread < closest {
				lead, closest = members, spread
			}
		}
		if len(lead) < max(1, least) {
			break
		}
		var entries []int
		for _, b := range lead {
			taken[b] = true
			entries = append(entries, stable[b])
		}
		out = append(out, entries)
	}
	sortBy(out, func(c []int) float64 { return d.median(c, func(p Pole) float64 { return p.Frequency }) })
	return out
}

// median of a number over the poles of a cluster.
func (d *Diagram) median(entries []int, of func(Pole) float64) float64 {
	var v []float64
	for _, i := range entries {
		v = append(v, of(d.Entries[i].Pole))
	}
	return median(v)
}

func median(v []float64) float64 {
	if len(v) == 0 {
		return math.NaN()
	}
	v = slices.Clone(v)
	slices.Sort(v)
	return (v[(len(v)-1)/2] + v[len(v)/2]) / 2
}
