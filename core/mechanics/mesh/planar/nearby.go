package planar

import (
	"iter"
	"sort"

	"hushframe/core/mechanics/outline"
)

// nearby finds boxes by place.
type nearby struct {
	boxes  []outline.Box
	order  []int32 // by rising left edge
	widest float64
}

func newNearby(boxes []outline.Box) *nearby {
	n := &nearby{boxes: boxes, order: make([]int32, len(boxes))}
	for i, b := range boxes {
		n.order[i] = int32(i)
		n.widest = max(n.widest, b.Width())
	}
	sort.SliceStable(n.order, func(i, j int) bool { return boxes[n.order[i]].Min.X < boxes[n.order[j]].Min.X })
	return n
}

// in yields the indices of the boxes that meet b.
func (n *nearby) in(b outline.Box) iter.Seq[int32] {
	return func(yield func(int32) bool) {
		first := sort.Search(len(n.order), func(k int) bool { return n.boxes[n.order[k]].Min.X >= b.Min.X-n.widest })
		for _, i := range n.order[first:] {
			if n.boxes[i].Min.X > b.Max.X {
				return
			}
			if n.boxes[i].Meets(b) && !yield(i) {
				return
			}
		}
	}
}
