package assemble

import (
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
)

// Totals are mass, centre of gravity and inertia tensor (about that centre, airframe axes, elements xx, yy, zz, xy, xz,
// yz) of the whole frame.
type Totals struct {
	Mass    float64
	Centre  airframe.Vec
	Inertia [6]float64
}

// item is a thing with mass in space.
type item struct {
	mass    float64
	centre  vec
	inertia tensor
}

// total sums plates, bolts, standoffs and bodies in their order.
func total(g *airframe.Geometry, p *airframe.Properties) Totals {
	var items []item
	for i, pl := range g.Plates {
		items = append(items, plateItem(pl, p.Plates[i].Mass))
	}
	for i, s := range g.Standoffs {
		m := p.Standoffs[i].Mass
		d := sub(s.Ends[1], s.Ends[0])
		n := norm(d)
		// A rod: m l²/12 across, and m (D²+d²)/8 along its axis.
		across := m*n*n/12 + m*(s.Outer*s.Outer+s.Inner*s.Inner)/16
		spin := m * (s.Outer*s.Outer + s.Inner*s.Inner) / 8
		e := scale(d, 1/n)
		var t tensor
		for k, ij := range [6][2]int{{0, 0}, {1, 1}, {2, 2}, {0, 1}, {0, 2}, {1, 2}} {
			if k < 3 {
				t[k] = across
			}
			t[k] += (spin - across) * e[ij[0]] * e[ij[1]]
		}
		items = append(items, item{m, scale(add(s.Ends[0], s.Ends[1]), 0.5), t})
	}
	for i, bolt := range g.Bolts {
		items = append(items, item{mass: p.Bolts[i].Mass, centre: bolt.Point})
	}
	for _, body := range p.Bodies {
		items = append(items, item{body.Mass, body.Centre, body.Inertia})
	}
	var t Totals
	var sum tensor
	t.Mass, t.Centre, sum = combine(items)
	t.Inertia = sum
	return t
}

// plateItem integrates over a plate's region, within 1e-4 of itself.
func plateItem(pl airframe.Plate, mass float64) item {
	var a, sx, sy, xx, yy, xy float64
	for _, l := range pl.Region.Loops() {
		pts := l.Flatten(1e-6)
		for i, p := range pts {
			q := pts[(i+1)%len(pts)]
			c := p.Cross(q)
			a += c / 2
			sx += c * (p.X + q.X) / 6
			sy += c * (p.Y + q.Y) / 6
			xx += c * (p.X*p.X + p.X*q.X + q.X*q.X) / 12
			yy += c * (p.Y*p.Y + p.Y*q.Y + q.Y*q.Y) / 12
			xy += c * (p.X*q.Y + 2*p.X*p.Y + 2*q.X*q.Y + q.X*p.Y) / 24
		}
	}
	centre := outline.Point{X: sx / a, Y: sy / a}
	xx, yy, xy = xx/a-centre.X*centre.X, yy/a-centre.Y*centre.Y, xy/a-centre.X*centre.Y
	h := pl.Thickness * pl.Thickness / 12
	f := pl.Frame
	it := item{mass: mass, centre: inSpace(f, centre, 0)}
	it.inertia = principal(vec{mass * (yy + h), mass * (xx + h), mass * (xx + yy)}, [3]vec{f.X, f.Y, f.Z})
	// The product of inertia −m·xy of the plate's axes, turned into airframe axes.
	for k, ij := range [6][2]int{{0, 0}, {1, 1}, {2, 2}, {0, 1}, {0, 2}, {1, 2}} {
		it.inertia[k] -= mass * xy * (f.X[ij[0]]*f.Y[ij[1]] + f.Y[ij[0]]*f.X[ij[1]])
	}
	return it
}

// compareMass notes how the sum of the parts compares with the all-up mass that the file states.
func (b *builder) compareMass() {
	stated, sum := b.file.AllUpMass, b.out.Totals.Mass
	if stated == 0 {
		return
	}
	d := stated - sum
	if math.Abs(d) > 0.01*stated {
		b.warn("mass-differs", "all_up_mass", "weigh the parts, or add what is missing as lumps",
			"the parts add up to %s, and all_up_mass is %s: a difference of %+.3g g (%+.2g %%)", grams(sum), grams(stated), d*1e3, 100*d/stated)
	}
}
