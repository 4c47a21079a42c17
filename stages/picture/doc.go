// Package picture draws a frame as SVG, from above and from its right side.
//
// Pictures are pure functions of geometry and properties and the same byte for byte for the same input. They are to
// scale, have a viewBox in millimetres and no fixed size, and carry their style in a style element whose class names
// begin with "af-", so that they work alone and inside a page. Ink follows currentColor; the fills can be changed by the
// custom properties --af-plate, --af-rotor, --af-load, --af-gyro and --af-bolt.
//
// A body is drawn as the homogeneous box that has its inertia, a rotor as such a cylinder, since the properties keep no
// sizes.
package picture
