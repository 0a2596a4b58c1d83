package present

import "bandwright/render/picture"

// Kind is the kind of thing that a picture's item stands for.
type Kind uint8

// What can be under the pointer.
const (
	Nothing      Kind = iota
	SpecialPoint      // I indexes Built.Points
	StarPoint         // I indexes Snapshot.HeldStar
	HeldPoint         // the held k point
	PathLeg           // I counts the legs of the path
	PathPoint         // I is the run, J the point in it
	ZoneFace          // I indexes Zone.Faces
	EdgePoint         // I is an EdgeKind, J a member of its star
	Level             // I is a level at the held k point
	Row               // I indexes the rows of the focused entry
	Remove            // a mark that removes path point I, J
	BreakAfter        // a mark that makes or mends a break after path point I, J
)

// EdgeKind says which band edge is meant.
type EdgeKind int

// The band edges that the window marks.
const (
	ValenceTop EdgeKind = iota
	ConductionBottom
	DirectGap
)

// Target is what an item of a picture stands for.
type Target struct {
	Kind Kind
	I, J int
}

// An id packs a Target: kind, I and J have 6, 14 and 12 bits.
func (t Target) id() picture.ID {
	return picture.ID(t.Kind)<<26 | picture.ID(t.I&0x3fff)<<12 | picture.ID(t.J&0xfff)
}

// TargetOf is what the items of an id stand for.
func TargetOf(id picture.ID) Target {
	return Target{Kind(id >> 26), int(id >> 12 & 0x3fff), int(id & 0xfff)}
}
