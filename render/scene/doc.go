// Package scene holds what a view of reciprocal or real space contains and the camera that looks at it: a convex body with
// translucent faces, further bodies inside it, axes, paths with direction, and labelled markers.
//
// Units: positions in the caller's length or inverse length, right-handed; sizes and widths in points; angles in radians.
// Camera coordinates: x to the right, y up, z towards the viewer. Items carry the ids of package picture, and every colour
// comes from the caller.
//
// Memory: scenes are plain values that package project only reads. Nothing panics; a body whose indices are out of range
// or whose faces do not close is reported by Check.
//
// Sources: the drag as a rotation about the axis in the view plane perpendicular to it is common practice; slerp from
// Shoemake 1985.
package scene
