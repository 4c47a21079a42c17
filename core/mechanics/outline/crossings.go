package outline

import "sort"

// Crossing is a place where a loop meets itself: curves I and J (I ≤ J, indices in the loop) share the place At.
type Crossing struct {
	I, J int
	At   Point
}

// SelfCrossings returns the places where the loop crosses, touches or runs along itself, apart from the joints of
// neighbouring curves, sorted by I, then J. Places within 1e-9 of the loop's size count as shared.
func (l Loop) SelfCrossings() []Crossing {
	tol := 1e-9 * l.Bounds().Diagonal()
	if tol == 0 {
		return nil
	}
	var found []Crossing
	boxes := make([]Box, len(l))
	order := make([]int, len(l))
	for i, c := range l {
		boxes[i], order[i] = c.Bounds().Grow(tol), i
		if c.Kind == KindCubic {
			found = append(found, ownCrossings(i, c, tol)...)
		}
	}
	sort.SliceStable(order, func(a, b int) bool { return boxes[order[a]].Min.X < boxes[order[b]].Min.X })
	for n, i := range order {
		for _, j := range order[n+1:] {
			if boxes[j].Min.X > boxes[i].Max.X {
				break
			}
			if boxes[i].Meets(boxes[j]) {
				found = append(found, l.pairCrossings(min(i, j), max(i, j), tol)...)
			}
		}
	}
	sort.SliceStable(found, func(a, b int) bool {
		if found[a].I != found[b].I {
			return found[a].I < found[b].I
		}
		return found[a].J < found[b].J
	})
	return found
}

func (l Loop) pairCrossings(i, j int, tol float64) []Crossing {
	var found []Crossing
	for _, m := range Meet(l[i], l[j], tol) {
		follows := j == i+1 && m.At.Distance(l[i].P1) <= tol
		precedes := i == 0 && j == len(l)-1 && m.At.Distance(l[i].P0) <= tol
		if !follows && !precedes {
			found = append(found, Crossing{i, j, m.At})
		}
	}
	return found
}

// ownCrossings finds where one cubic crosses itself: a monotone piece cannot, two of them can.
func ownCrossings(i int, c Curve, tol float64) []Crossing {
	ts := c.monotone()
	var found []Crossing
	for a := 1; a < len(ts); a++ {
		for b := a + 1; b < len(ts); b++ {
			p, q := c.Part(ts[a-1], ts[a]), c.Part(ts[b-1], ts[b])
			for _, m := range Meet(p, q, tol) {
				joint := b == a+1 && m.At.Distance(p.P1) <= tol
				closing := a == 1 && b == len(ts)-1 && m.At.Distance(c.P0) <= tol && m.At.Distance(c.P1) <= tol
				if !joint && !closing {
					found = append(found, Crossing{i, i, m.At})
				}
			}
		}
	}
	return found
}
