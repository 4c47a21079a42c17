// Package mesh divides the plates and standoffs of an airframe into elements.
//
// Terms. A part is a plate or a standoff. A patch is the set of nodes of a plate that moves as one rigid body: a clamp
// disc, a motor base, a pad. A link joins patches: a bolt or a standoff.
//
// Nodes are in airframe axes (m). Parts are numbered plates first, in the order of the geometry, then standoffs; nodes
// part by part, in a plate its corners before its mid-side nodes. Patches and their indices are those of the geometry.
// Plates never share nodes.
//
// Package planar, below, divides one flat region; it knows nothing of plates.
package mesh
