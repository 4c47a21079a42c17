// Package dxf reads the flat geometry of ASCII DXF drawings, releases 10 to 2018, as lines, arcs and cubics.
//
// Read: LINE, ARC, CIRCLE, LWPOLYLINE and POLYLINE with bulges, ELLIPSE, SPLINE, and INSERT of blocks (nested, scaled,
// mirrored, turned, in rows and columns). All else is skipped and counted, as is what lies in paper space or in a
// plane that is not parallel to the drawing's. Coordinates come out in metres.
//
// Exactness. Lines, arcs and polynomial splines of degree up to three are exact; a circle under unequal scaling and an
// ellipse become cubics within 2e-7 of the longer half axis; rational splines and those of higher degree become cubics
// within Options.Tolerance.
//
// Terms of the format. A tag is a group code and a value on two lines. The extrusion direction of a flat entity is the
// normal of its own coordinate system; (0, 0, −1) means that its x axis is mirrored. $INSUNITS of the header states
// the unit of length; $MEASUREMENT does not (it chooses line patterns).
package dxf
