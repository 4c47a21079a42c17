// Package counterpart reads the mode shapes of two airframes, or of one before and after a change, at points that are
// the same in both, so that shapes on different meshes can be laid over each other.
//
// Terms and symbols
//
//	part      a plate or standoff; parts of equal name are the same part
//	solid     a rigid body with mass: motor and propeller, battery, gyro stack
//	point     a material point of a part or the centre of gravity of a solid
//	weight    mass (kg) of a displacement, moment of inertia (kg·m²) of a rotation
//
// Of a plate, the middle of each triangle of either mesh is a point, and its counterpart is the nearest point of the
// other mesh in the same part. Near is meant in airframe axes or, where that brings the plates closer over each other, in
// the frames of the two plates: an arm that is turned keeps its points. Displacements are then taken along the axes of
// the plate's own frame. Where a plate has become shorter or lost a corner, points beyond it go with its edge.
//
// Of a standoff, points lie evenly between its ends. A solid moves with six components at its centre of gravity.
//
// The weight of a point is its share of the mean of the two masses of its part, half of it spread over the triangles
// of each mesh by area, so that nothing changes when the two sides are swapped. Rotary inertia of plates and standoffs
// and products of inertia of solids are left out. What only one side has is named and does not count.
//
// Shapes are displacements in m per unit modal coordinate and rotations in rad; indices are those of modal.Basis.
package counterpart
