// Package airframe holds one frame as plain values in SI units: its geometry
// (all that meshing needs) and its properties (all the rest).
//
// Axes: x forward, y left, z up, right-handed. Rotations follow the right
// hand: roll about x, pitch about y (positive is nose down), yaw about z.
//
// A plate lies in the x-y plane of its own right-handed frame, whose z axis is
// the outward normal of its upper face; the frame's origin is on the
// mid-surface. Parts refer to each other by name; names are unique within
// their kind, patches included.
package airframe
