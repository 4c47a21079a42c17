package assembly

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/mat"

	"hushframe/core/mechanics/airframe"
)

// Loose says that the structure falls apart: Pieces lists the names of parts and bodies of each
// connected piece, the largest first.
type Loose struct {
	Pieces [][]string
}

func (e *Loose) Error() string {
	var apart []string
	for _, p := range e.Pieces[1:] {
		apart = append(apart, quoted(p))
	}
	return fmt.Sprintf("%s not connected to the rest, which begins with %q", strings.Join(apart, " and "), e.Pieces[0][0])
}

func quoted(names []string) string {
	var b strings.Builder
	for i, n := range names {
		if i == 4 {
			fmt.Fprintf(&b, " and %d more", len(names)-i)
			break
		}
		if i > 0 {
			b.WriteString(", ")
		}
		fmt.Fprintf(&b, "%q", n)
	}
	if len(names) == 1 {
		return b.String() + " is"
	}
	return b.String() + " are"
}

// checkConnected joins nodes and bodies through elements, membership and springs. Supported problems
// need not be in one piece.
func checkConnected(p *Problem, l *layout) error {
	if len(p.Supports) > 0 {
		return nil
	}
	nodes := len(p.Nodes)
	ground := nodes + len(l.bodies)
	f := newForest(ground + 1)
	type named struct {
		member int
		name   string
	}
	var all []named
	for i := range p.Plates {
		part := &p.Plates[i]
		list := part.lists()
		for e := range part.Elements {
			nodes := list(e)
			for _, v := range nodes[1:] {
				f.join(int(nodes[0]), int(v))
			}
			all = append(all, named{int(nodes[0]), p.Groups[part.Group].Name})
		}
	}
	for i := range p.Beams {
		for _, e := range p.Beams[i].Elements {
			f.join(int(e[0]), int(e[1]))
			all = append(all, named{int(e[0]), p.Groups[p.Beams[i].Group].Name})
		}
	}
	for b, m := range l.bodies {
		for _, v := range m.nodes {
			f.join(nodes+b, int(v))
		}
		all = append(all, named{nodes + b, m.name})
	}
	for _, sp := range p.Springs {
		if sp.Stiffness == [6]float64{} {
			continue
		}
		sp = l.merged(sp)
		ends := [2]int{ground, ground}
		for side, b := range []int{sp.A, sp.B} {
			if b != Ground {
				ends[side] = nodes + b
			}
		}
		f.join(ends[0], ends[1])
	}
	for i := range p.Contacts {
		if c := &p.Contacts[i]; c.Stiffness != [6]float64{} {
			for _, x := range c.Points {
				f.join(int(x.Sides[0].Nodes[0]), int(x.Sides[1].Nodes[0]))
			}
		}
	}
	byRoot := map[int]int{}
	var pieces [][]string
	var sizes []int
	for _, x := range all {
		r := f.root(x.member)
		k, ok := byRoot[r]
		if !ok {
			k = len(pieces)
			byRoot[r] = k
			pieces, sizes = append(pieces, nil), append(sizes, 0)
		}
		sizes[k]++
		if !slices.Contains(pieces[k], x.name) {
			pieces[k] = append(pieces[k], x.name)
		}
	}
	if len(pieces) <= 1 {
		return nil
	}
	largest := 0
	for k := range sizes {
		if sizes[k] > sizes[largest] {
			largest = k
		}
	}
	pieces[0], pieces[largest] = pieces[largest], pieces[0]
	return &Loose{pieces}
}

// Free says that a body can move on its mount against no stiffness at all.
type Free struct {
	Body string
}

func (e *Free) Error() string {
	return fmt.Sprintf("body %q can move freely on its mount: give the mount rotational stiffness, or points that do not lie in a line", e.Body)
}

// checkBodies holds inertia to what a body can have, and mounts to holding their bodies in all six
// components.
func checkBodies(p *Problem) error {
	for b, body := range p.Bodies {
		for _, in := range body.Inertia {
			if !(in.Mass >= 0) || math.IsInf(in.Mass, 1) {
				return fmt.Errorf("body %q has a mass of %g kg", body.Name, in.Mass)
			}
			if err := airframe.CheckInertia(in.Tensor); err != nil {
				return fmt.Errorf("body %q: %w", body.Name, err)
			}
		}
		if len(body.Nodes) == 0 {
			if err := checkHeld(p, b); err != nil {
				return err
			}
		}
	}
	return nil
}

// checkHeld looks at the stiffness of all springs on body b for motions of the body alone, with
// rotations scaled by the spread of the springs so that all is in N/m.
func checkHeld(p *Problem, b int) error {
	for _, w := range p.Welds {
		if w[0] == b || w[1] == b {
			return nil
		}
	}
	var springs []*Spring
	size := 0.0
	for i := range p.Springs {
		s := &p.Springs[i]
		if s.A == b || s.B == b {
			springs = append(springs, s)
			size = max(size, length(sub(s.Point, springs[0].Point)))
		}
	}
	if len(springs) == 0 {
		return nil // found loose elsewhere
	}
	if size == 0 {
		size = 1
	}
	stiffest := 0.0
	for _, s := range springs {
		for _, k := range s.Stiffness {
			if !math.IsInf(k, 1) {
				stiffest = max(stiffest, k)
			}
		}
	}
	sum := mat.NewSymDense(6, nil)
	for _, s := range springs {
		for c, k := range s.Stiffness {
			if math.IsInf(k, 1) {
				k = max(stiffest, 1)
			}
			row := relative(s, c, func(int) Vec { return springs[0].Point })
			side := 0
			if s.B == b {
				side = 1
			}
			var v [6]float64
			for j := range 6 {
				v[j] = row[side][j]
				if j >= 3 {
					v[j] /= size
				}
			}
			for i := range 6 {
				for j := range i + 1 {
					sum.SetSym(i, j, sum.At(i, j)+k*v[i]*v[j])
				}
			}
		}
	}
	var eig mat.EigenSym
	if eig.Factorize(sum, false) {
		if v := eig.Values(nil); !(v[0] > 1e-9*v[5]) {
			return &Free{p.Bodies[b].Name}
		}
	}
	return nil
}
