package assemble

import (
	"fmt"
	"math"
	"strings"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/fastener"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/airframefile"
)

// contacts adds pressed faces, seams and keys, each a joint group of its own.
func (b *builder) contacts() *fault.Error {
	for i := range b.file.Contacts {
		c := &b.file.Contacts[i]
		group := airframe.Joint{Name: c.Name, LossFactor: c.LossFactor, Low: c.Low, High: c.High, Origin: c.Origin}
		var err *fault.Error
		switch c.Sort {
		case airframe.Pressed:
			err = b.pressed(c, &group)
		default:
			err = b.line(c, &group)
		}
		if err != nil {
			return err
		}
		if group.Origin == "" {
			group.Origin = "airframe file"
		}
		b.out.Properties.Joints = append(b.out.Properties.Joints, group)
	}
	return nil
}

func (b *builder) addContact(c *airframefile.Contact, contact airframe.Contact, own *[6]float64) {
	b.out.Geometry.Contacts = append(b.out.Geometry.Contacts, contact)
	b.out.Properties.Contacts = append(b.out.Properties.Contacts, airframe.ContactProperties{Contact: contact.Name, Joint: c.Name, Stiffness: own})
}

// pressed ties every two of the plates whose faces touch and overlap.
func (b *builder) pressed(c *airframefile.Contact, group *airframe.Joint) *fault.Error {
	group.Measure = airframe.PerArea
	var sum [6]float64
	var names []string
	for i, lower := range c.Plates {
		for _, upper := range c.Plates[i+1:] {
			p, q := b.index[lower], b.index[upper]
			face, ok := b.common(p, q)
			if !ok {
				continue
			}
			contact := airframe.Contact{Name: c.Name, Kind: airframe.Pressed, Plates: [2]int{p, q}, Axes: b.plates[p].frame}
			contact.Axes.Origin = face
			if err := b.shape(c, p, &contact); err != nil {
				return err
			}
			if !b.share(p, q, &contact) {
				continue
			}
			normal, shear := fastener.Faces(b.clamped(p), b.clamped(q))
			k := [6]float64{c.Shear.Or(shear), c.Shear.Or(shear), c.Normal.Or(normal)}
			if !c.Bonded {
				k[0], k[1] = 0, 0
			}
			contact.Name = fmt.Sprintf("%s %s+%s", c.Name, lower, upper)
			for n := range k {
				sum[n] += k[n]
			}
			names = append(names, contact.Name)
			b.addContact(c, contact, &k)
		}
	}
	if len(names) == 0 {
		return c.Fault("plates", "no two of the plates %s have faces that touch and overlap there", strings.Join(c.Plates, ", ")).
			Do("at of a plate is its LOWER face: pressed plates lie on each other; check at and size of the region")
	}
	for n := range sum {
		group.Stiffness[n] = sum[n] / float64(len(names))
	}
	if !c.Normal.Given || c.Bonded && !c.Shear.Given {
		if group.Origin == "" {
			group.Origin = "from the halves of the plates in a row, bonded faces (Goland and Reissner 1944)"
		}
		if group.Low == 0 {
			group.Low, group.High = pressedLow, 1
			b.assume(c.Part, "a computed pressed stiffness is a bound from above: the range goes from %g to 1 times it (a judgement: faces are rough)", pressedLow)
		}
	}
	return nil
}

// pressedLow is the least share of the stiffness of bonded faces that pressed ones are given; judgement, no source.
const pressedLow = 0.03

// common gives a point of the face that two parallel plates share.
func (b *builder) common(p, q int) (vec, bool) {
	axis := b.plates[p].frame.Z
	low, high, ok := b.plates[p].faces(b.plates[p].frame.Origin, axis)
	if !ok {
		return vec{}, false
	}
	under, over, ok := b.plates[q].faces(b.plates[p].frame.Origin, axis)
	if !ok || math.Abs(dot(b.plates[q].frame.Z, axis)) < 0.99996 {
		return vec{}, false
	}
	if math.Abs(dot(sub(under, high), axis)) < b.file.Bolts.Gap {
		return high, true
	}
	return low, math.Abs(dot(sub(over, low), axis)) < b.file.Bolts.Gap
}

// shape bounds a pressed contact by the declared shape.
func (b *builder) shape(c *airframefile.Contact, plate int, contact *airframe.Contact) *fault.Error {
	if c.At == nil {
		return nil
	}
	centre, err := b.locate(c.Part, "at", plate, *c.At)
	if err != nil {
		return err
	}
	contact.Centre = centre
	if c.Diameter.Given {
		contact.Shape, contact.Radius = airframe.Disc, c.Diameter.Value/2
		return nil
	}
	f := b.plates[plate].frame
	s, cos := math.Sincos(c.Turn)
	x := vec{cos, s, 0}
	contact.Shape, contact.Width, contact.Height = airframe.Rectangle, c.Size[0], c.Size[1]
	contact.Turn = math.Atan2(dot(x, f.Y), dot(x, f.X))
	return nil
}

// share tells whether two plates overlap within the region, by a grid of points half a millimetre apart or a
// hundred across.
func (b *builder) share(p, q int, contact *airframe.Contact) bool {
	const step = 0.5e-3
	region := b.plates[p].region
	box := outline.EmptyBox()
	if contact.Shape == "" {
		for _, x := range region.Outer.Flatten(1e-4) {
			box = box.With(x)
		}
	} else {
		for _, x := range footprint(airframe.Patch{Shape: contact.Shape, Centre: contact.Centre, Radius: contact.Radius, Width: contact.Width, Height: contact.Height, Turn: contact.Turn}) {
			box = box.With(x)
		}
	}
	across := math.Max(step, math.Sqrt(box.Width()*(box.Max.Y-box.Min.Y))/100)
	met := false
	b.scan(p, q, region, b.plates[q].region, box, across, func() bool { met = true; return false })
	return met
}

// scan goes over the points of a grid on plate p that lie in a region of it and in one of plate q, until found tells to stop.
func (b *builder) scan(p, q int, own, other outline.Region, box outline.Box, across float64, found func() bool) {
	for y := box.Min.Y + across/2; y < box.Max.Y; y += across {
		for x := box.Min.X + across/2; x < box.Max.X; x += across {
			at := outline.Point{X: x, Y: y}
			if !own.Contains(at) {
				continue
			}
			d := sub(inSpace(b.plates[p].frame, at, 0), b.plates[q].frame.Origin)
			if other.Contains(outline.Point{X: dot(d, b.plates[q].frame.X), Y: dot(d, b.plates[q].frame.Y)}) && !found() {
				return
			}
		}
	}
}

// overlap gives the area (m²) over which two plates lie on each other, to some percent.
func (b *builder) overlap(p, q int) float64 {
	straight := func(r outline.Region) outline.Region {
		out := outline.Region{Outer: outline.Polygon(r.Outer.Flatten(1e-4)...)}
		for _, h := range r.Holes {
			out.Holes = append(out.Holes, outline.Polygon(h.Flatten(1e-4)...))
		}
		return out
	}
	own := straight(b.plates[p].region)
	box := own.Outer.Bounds()
	across := math.Sqrt(box.Width()*(box.Max.Y-box.Min.Y)) / 60
	points := 0
	b.scan(p, q, own, straight(b.plates[q].region), box, across, func() bool { points++; return true })
	return float64(points) * across * across
}

// leastBare is the area of touching faces (m²) below which nothing is said of them; judgement, no source.
const leastBare = 2e-4

// bareFaces warns of plates that lie on each other with nothing between the screws that keeps their faces apart.
func (b *builder) bareFaces() {
	tied := map[[2]int]bool{}
	for _, c := range b.out.Geometry.Contacts {
		if c.Kind == airframe.Pressed {
			tied[c.Plates], tied[[2]int{c.Plates[1], c.Plates[0]}] = true, true
		}
	}
	var list []string
	for p := range b.plates {
		for q := p + 1; q < len(b.plates); q++ {
			if _, touch := b.common(p, q); !touch || tied[[2]int{p, q}] {
				continue
			}
			if area := b.overlap(p, q); area > leastBare {
				list = append(list, fmt.Sprintf("%s and %s over %.1f cm²", b.plates[p].name, b.plates[q].name, 1e4*area))
			}
		}
	}
	if len(list) > 0 {
		b.warn("faces-bare", "pressed", "declare them pressed if they bear on each other",
			"faces touch but are tied at their screws alone, so that the plates bend through each other: %s", strings.Join(list, "; "))
	}
}

// line places a seam or a key.
func (b *builder) line(c *airframefile.Contact, group *airframe.Joint) *fault.Error {
	group.Measure = airframe.PerLength
	p, q := b.index[c.Plates[0]], b.index[c.Plates[1]]
	from, to := c.From, c.To
	face := b.plates[q].frame
	if c.Sort == airframe.Key {
		face = b.plates[p].frame
		if c.Flat {
			height, ok := b.between(p, q, from)
			if !ok {
				return c.Fault("between", "plates %q and %q do not lie flat side by side or on each other", c.Plates[0], c.Plates[1]).Do("give from and to with their height, as in [x, y, z]")
			}
			from[2], to[2] = height, height
		}
	}
	along := sub(to, from)
	length := norm(along)
	x := scale(along, 1/length)
	z := sub(face.Z, scale(x, dot(face.Z, x)))
	if norm(z) < 0.1 {
		return c.Fault("to", "the line runs square to plate %q, not along it", b.plates[q].name).Do("give both ends on the face")
	}
	z = scale(z, 1/norm(z))
	axes := airframe.Frame{Origin: from, X: x, Y: cross(z, x), Z: z}
	k := [6]float64{}
	switch {
	case c.Sort == airframe.Key:
		k[1] = c.Stiffness[0] / length
	case c.Glue != nil:
		var err error
		if k, err = (fastener.Glue{Modulus: c.Glue.Modulus, Poisson: c.Glue.Poisson, Thickness: c.Glue.Thickness, Width: c.Glue.Width}).Seam(); err != nil {
			return c.Fault("", "%v", err)
		}
		if group.Origin == "" {
			group.Origin = "from the bed of glue (Goland and Reissner 1944)"
		}
	default:
		for n, total := range c.Stiffness {
			k[n] = total / length
		}
	}
	group.Stiffness = k
	b.addContact(c, airframe.Contact{Name: c.Name, Kind: c.Sort, Plates: [2]int{p, q}, Axes: axes, Ends: [2]vec{from, to}}, nil)
	return nil
}

// between is the height in the middle of what two level plates have in common, or of the gap between them.
func (b *builder) between(p, q int, at vec) (float64, bool) {
	up := vec{0, 0, 1}
	lowP, highP, okP := b.plates[p].faces(at, up)
	lowQ, highQ, okQ := b.plates[q].faces(at, up)
	return (math.Max(lowP[2], lowQ[2]) + math.Min(highP[2], highQ[2])) / 2, okP && okQ
}
