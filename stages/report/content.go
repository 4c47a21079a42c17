package report

import (
	"math"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/mesh"
	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/report/draw"
)

// content is what the artifacts hold; whatever was not included is nil.
type content struct {
	geometry   *airframe.Geometry
	properties *airframe.Properties
	mesh       *mesh.Mesh
	modes      *kinds.Modes
	response   *kinds.Response
	spectra    *kinds.Spectra
	comparison *kinds.Comparison
	filtered   *kinds.Filtered
	verified   *kinds.Verification
	identified *kinds.Identified
	difference *kinds.Difference
	transfer   *kinds.Transfer
	changes    *Changes
	run        *account.Account
	sources    []kinds.DocumentSource

	charts  []*draw.Chart // in the order of the page
	surface *draw.Surface
	view    *draw.View
}

// restName names the outline at rest, which all pictures of shapes share.
const restName = "outline-at-rest"

// coarse is the length of edges that a picture can show, m.
const coarse = 6e-3

// drawing gives the mesh as it is drawn, made on first use.
func (c *content) drawing() (*draw.Surface, *draw.View) {
	if c.view == nil {
		var more []airframe.Vec
		if c.modes != nil {
			for _, site := range c.modes.Basis.Sites {
				more = append(more, site.Point)
				corners := draw.Box{Hub: draw.Hub{At: site.Point}, Half: c.half(site.Name)}.Corners()
				more = append(more, corners[:]...)
			}
		}
		c.surface = draw.NewSurface(c.mesh, coarse)
		c.view = draw.NewView(c.surface, more)
	}
	return c.surface, c.view
}

// add reads one artifact.
func (c *content) add(in stage.Input) error {
	a, err := artifact.Open(in.Folder, registry())
	if err != nil {
		return err
	}
	c.sources = append(c.sources, kinds.DocumentSource{Kind: a.Kind.Name, From: in.From, Hash: in.Hash})
	switch a.Kind.Name {
	case "geometry":
		err = once(in, &c.geometry, a, kinds.DecodeGeometry)
	case "properties":
		err = once(in, &c.properties, a, kinds.DecodeProperties)
	case "mesh":
		err = once(in, &c.mesh, a, kinds.DecodeMesh)
	case "modes":
		err = once(in, &c.modes, a, kinds.DecodeModes)
	case "response":
		err = once(in, &c.response, a, kinds.DecodeResponse)
	case "spectra":
		err = once(in, &c.spectra, a, kinds.DecodeSensor)
	case "comparison":
		err = once(in, &c.comparison, a, kinds.DecodeComparison)
	case "filtered":
		err = once(in, &c.filtered, a, kinds.DecodeFiltered)
	case "verification":
		err = once(in, &c.verified, a, kinds.DecodeVerification)
	case "identified":
		err = once(in, &c.identified, a, kinds.DecodeIdentified)
	case "difference":
		err = once(in, &c.difference, a, kinds.DecodeDifference)
	case "transfer":
		err = once(in, &c.transfer, a, kinds.DecodeTransfer)
	case account.KindName:
		c.run = account.Decode(a)
	default:
		err = fault.New(fault.Input, "a report cannot show an artifact of kind %s", a.Kind.Name).In("report", in.From).Of("include")
	}
	return err
}

// half gives half the sides of the homogeneous box that has the mass and the
// moments of inertia of a body; zero when it is a rotor or not known.
func (c *content) half(name string) airframe.Vec {
	var h airframe.Vec
	if c.properties == nil {
		return h
	}
	for _, b := range c.properties.Bodies {
		if b.Name != name || b.Kind == "rotor" || !(b.Mass > 0) {
			continue
		}
		for d := range h {
			square := 6 / b.Mass * (b.Inertia[(d+1)%3] + b.Inertia[(d+2)%3] - b.Inertia[d])
			h[d] = math.Sqrt(math.Max(0, square)) / 2
		}
	}
	return h
}

// once decodes an artifact into its place, which must be free.
func once[T any](in stage.Input, place **T, a *artifact.Artifact, decode func(*artifact.Artifact) (*T, error)) error {
	if *place != nil {
		return fault.New(fault.Input, "two artifacts of kind %s are included", a.Kind.Name).In("report", in.From).Of("include").
			Do("include one of each kind, and write a second report for the other")
	}
	x, err := decode(a)
	if err != nil {
		return err
	}
	*place = x
	return nil
}
