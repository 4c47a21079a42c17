// Package assemble builds the geometry and the properties of a frame from its airframe file and cut files.
//
// Terms. The frame of a plate has its z axis upward (for plates that are not upright) and lies on the mid-surface; its x
// axis is the outline's. A hole is a round one of screw size. A stack is a run of plates with coaxial holes whose faces
// touch; it is a bolt. A site is a gap between two plates with coaxial holes, where a standoff is expected.
//
// Every value that is not in the airframe file is noted, with the rule it comes from.
package assemble
