package planar

import "hushframe/core/mechanics/outline"

// crescent is the space between a segment's curve and its chord, a tenth deeper than it is.
type crescent struct {
	corners [10]outline.Point // along the curve, both ends included
	bounds  outline.Box
	thin    float64 // width (m) of the strip about the chord that counts too
}

func newCrescent(p *piece, t0, t1 float64) crescent {
	a, b := p.at(t0), p.at(t1)
	c := crescent{bounds: outline.EmptyBox()}
	n := len(c.corners) - 1
	deepest := 0.0
	for k := range c.corners {
		u := float64(k) / float64(n)
		q := p.at(t0 + u*(t1-t0))
		if k == 0 || k == n {
			q = a
			if k == n {
				q = b
			}
		} else {
			foot := foot(a, b, q)
			deepest = max(deepest, q.Distance(foot))
			q = foot.Add(q.Sub(foot).Scale(1.1))
		}
		c.corners[k] = q
		c.bounds = c.bounds.With(q)
	}
	c.thin = 1e-2 * deepest
	c.bounds = c.bounds.Grow(c.thin)
	return c
}

// foot returns the place on the line through a and b that is nearest to q.
func foot(a, b, q outline.Point) outline.Point {
	d := b.Sub(a)
	return a.Add(d.Scale(q.Sub(a).Dot(d) / d.Dot(d)))
}

// holds reports whether q, which is not an end of the segment, lies in the crescent.
func (c *crescent) holds(q outline.Point) bool {
	n := len(c.corners)
	a, b := c.corners[0], c.corners[n-1]
	if q == a || q == b || !c.bounds.Holds(q) {
		return false
	}
	if _, d := outline.Line(a, b).Nearest(q); d <= c.thin {
		return q.Distance(a) > c.thin && q.Distance(b) > c.thin
	}
	in := false
	for i := range n {
		u, v := c.corners[i], c.corners[(i+1)%n]
		if (u.Y > q.Y) != (v.Y > q.Y) && q.X < u.X+(v.X-u.X)*(q.Y-u.Y)/(v.Y-u.Y) {
			in = !in
		}
	}
	return in
}
