// Package project draws a scene as seen by a camera into a picture, and maps points of the picture back into the scene.
//
// Units: pictures in points, y down; scene positions as in package scene. "Near" is a depth that grows towards the viewer
// and is linear along straight lines on the screen: the distance along the view axis for an orthographic camera, the
// inverse distance from the eye's plane for a perspective one.
//
// What the convex body of the scene hides follows from one fact: the points it hides form a convex set, bounded by its
// front faces and by the planes of sight through its outline. A straight line is therefore visible, then hidden, then
// visible, and is cut at exactly two places (Cyrus, Beck 1978); a second cut against the body itself tells what lies
// inside from what lies beyond. Within a layer, pieces are drawn far to near by comparing those that cross.
//
// Memory: a Projector keeps its storage and remembers where labels stood. It may be called from any goroutine, one at a
// time in turn (a lock sees to it). A View is a value. Nothing panics on data; what is not finite is left out.
package project
