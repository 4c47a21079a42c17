package assembly

import (
	"fmt"
	"math"

	"hushframe/core/mechanics/element"
	"hushframe/core/numeric/dense"
)

// node is how one node of the problem follows the unknowns.
type node struct {
	axes     Axes
	global   bool     // the axes are those of the airframe
	body     int      // merged body, -1 for a free node
	own      [6]int32 // unknown of each component in axes, -1 when held or slaved
	slaved   [6]bool  // components that follow the body
	separate bool     // component 5 is a drilling rotation of its own
	solid    bool     // a point of a solid element: it has no rotations
}

// layout is the numbering of a problem.
type layout struct {
	problem *Problem
	used    []bool
	nodes   []node
	bodies  []merged
	bodyOf  []int // of the problem -> merged
	columns [][]column
	count   int
	where   []Vec // of each unknown
	// rigidValue[i] gives unknown i in a rigid motion.
	source []source
	merges []Merge
}

// source says what an unknown is: component of a node in its axes, or of a merged body.
type source struct {
	node, body int32
	component  int8
}

func usedNodes(p *Problem) []bool {
	used := make([]bool, len(p.Nodes))
	for i := range p.Plates {
		list := p.Plates[i].lists()
		for e := range p.Plates[i].Elements {
			for _, v := range list(e) {
				used[v] = true
			}
		}
	}
	for i := range p.Beams {
		for _, e := range p.Beams[i].Elements {
			used[e[0]], used[e[1]] = true, true
		}
	}
	return used
}

// parallel is how far the normals of plates at one node may differ for it to count as flat.
const parallel = 1e-9

// frames chooses the axes of every node.
func (l *layout) frames() {
	p := l.problem
	const unseen, flat, folded = 0, 1, 2
	state := make([]byte, len(p.Nodes))
	for i := range p.Plates {
		axes, list, solid := p.Plates[i].Axes, p.Plates[i].lists(), p.Plates[i].Points != nil
		for e := range p.Plates[i].Elements {
			for _, v := range list(e) {
				l.nodes[v].solid = solid
				switch {
				case state[v] == unseen:
					state[v], l.nodes[v].axes = flat, axes
				case length(cross(l.nodes[v].axes[2], axes[2])) > parallel:
					state[v] = folded
				}
			}
		}
	}
	for i := range p.Beams {
		for _, e := range p.Beams[i].Elements {
			state[e[0]], state[e[1]] = folded, folded
		}
	}
	for v := range l.nodes {
		l.nodes[v].separate = state[v] == flat
		if state[v] != flat {
			l.nodes[v].axes = Global
		}
	}
}

// number lays out the unknowns of a problem.
func number(p *Problem) (*layout, error) {
	l := &layout{problem: p, used: usedNodes(p), nodes: make([]node, len(p.Nodes))}
	l.frames()
	var err error
	if l.bodies, l.bodyOf, l.merges, err = mergeBodies(p, l.used); err != nil {
		return nil, err
	}
	for v := range l.nodes {
		l.nodes[v].body = -1
	}
	for b, m := range l.bodies {
		for _, v := range m.nodes {
			nd := &l.nodes[v]
			nd.body = b
			nd.slaved = [6]bool{true, true, true, !nd.solid, !nd.solid, !nd.solid && !nd.separate}
		}
	}
	held := map[int32][6]bool{}
	for _, s := range p.Supports {
		if !l.used[s.Node] {
			continue
		}
		nd := &l.nodes[s.Node]
		if nd.body >= 0 {
			return nil, fmt.Errorf("node %d is both supported and in body %q", s.Node, l.bodies[nd.body].name)
		}
		if s.Axes != nil {
			nd.separate = nd.separate && length(cross(nd.axes[2], s.Axes[2])) <= parallel
			nd.axes = *s.Axes
		}
		h := held[s.Node]
		for c := range 6 {
			h[c] = h[c] || s.Fixed[c]
		}
		held[s.Node] = h
	}
	for v := range l.nodes {
		nd := &l.nodes[v]
		nd.global = nd.axes == Global
		h := held[int32(v)]
		for c := range 6 {
			nd.own[c] = -1
			if l.used[v] && !nd.slaved[c] && !h[c] && !(nd.solid && c >= element.PointUnknowns) {
				nd.own[c] = l.unknown(source{node: int32(v), body: -1, component: int8(c)}, p.Nodes[v])
			}
		}
	}
	l.numberBodies()
	if l.count == 0 {
		return nil, fmt.Errorf("nothing can move: there are no unknowns")
	}
	return l, nil
}

func (l *layout) unknown(s source, at Vec) int32 {
	l.source = append(l.source, s)
	l.where = append(l.where, at)
	l.count++
	return int32(l.count - 1)
}

// numberBodies numbers the components of bodies that rigid springs leave free, and expresses every
// body's motion through them.
func (l *layout) numberBodies() {
	p := l.problem
	reference := make([]Vec, len(l.bodies))
	for b := range l.bodies {
		reference[b] = l.bodies[b].reference
	}
	var constraints []constraint
	for i := range p.Springs {
		s := l.merged(p.Springs[i])
		if s.A == s.B {
			continue
		}
		for c, k := range s.Stiffness {
			if math.IsInf(k, 1) {
				constraints = append(constraints, constraint{
					bodies: [2]int{s.A, s.B},
					row:    relative(&s, c, func(b int) Vec { return reference[b] }),
				})
			}
		}
	}
	d := resolve(len(l.bodies), reference, constraints)
	own := make([][6]int32, len(l.bodies))
	for b := range l.bodies {
		for c := range 6 {
			if own[b][c] = -1; d.free[b][c] {
				own[b][c] = l.unknown(source{node: -1, body: int32(b), component: int8(c)}, reference[b])
			}
		}
	}
	l.columns = make([][]column, len(l.bodies))
	for b := range l.bodies {
		set := columnSet{}
		for c := range 6 {
			var unit [6]float64
			unit[c] = 1
			if d.free[b][c] {
				set.add(own[b][c], unit, 1)
				continue
			}
			for _, t := range d.terms[b][c] {
				set.add(own[t.body][t.component], unit, t.factor)
			}
		}
		l.columns[b] = set.list
	}
}

// merged returns the spring with its bodies replaced by merged ones.
func (l *layout) merged(s Spring) Spring {
	if s.A != Ground {
		s.A = l.bodyOf[s.A]
	}
	if s.B != Ground {
		s.B = l.bodyOf[s.B]
	}
	return s
}

// columnSet gathers columns by unknown, in the order of first use.
type columnSet struct {
	list []column
}

func (s *columnSet) add(unknown int32, motion [6]float64, factor float64) {
	for i := range s.list {
		if s.list[i].unknown == unknown {
			for k := range 6 {
				s.list[i].motion[k] += factor * motion[k]
			}
			return
		}
	}
	c := column{unknown: unknown}
	for k := range 6 {
		c.motion[k] = factor * motion[k]
	}
	s.list = append(s.list, c)
}

// nodeColumns appends what moves node v: columns in the node's axes.
func (l *layout) nodeColumns(dst []column, v int32) []column {
	nd := &l.nodes[v]
	if nd.body >= 0 {
		r := sub(l.problem.Nodes[v], l.bodies[nd.body].reference)
		for _, c := range l.columns[nd.body] {
			m := nd.axes.in6(carried(c.motion, r))
			for k := range 6 {
				if !nd.slaved[k] {
					m[k] = 0
				}
			}
			dst = append(dst, column{c.unknown, m})
		}
	}
	for k := range 6 {
		if nd.own[k] >= 0 {
			c := column{unknown: nd.own[k]}
			c.motion[k] = 1
			dst = append(dst, c)
		}
	}
	return dst
}

// allColumns lists what moves each node in use, as nodeColumns does.
func (l *layout) allColumns(threads int) [][]column {
	all := make([][]column, len(l.nodes))
	const share = 512
	dense.Parallel(threads, (len(all)+share-1)/share, func(t int) {
		list := make([]column, 0, 7*share)
		for v := t * share; v < min(len(all), (t+1)*share); v++ {
			if !l.used[v] {
				continue
			}
			from := len(list)
			list = l.nodeColumns(list, int32(v))
			all[v] = list[from:len(list):len(list)]
		}
	})
	return all
}
