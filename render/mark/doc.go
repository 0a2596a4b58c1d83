// Package mark draws what charts and scenes share: marker shapes, arrow heads, fading of colours, and labels that keep
// clear of each other and of what they must not cover.
//
// Units: points, y down. A Placer keeps its storage between calls and remembers where each label stood, so that labels
// stay put while a drawing moves; it is used by one goroutine at a time. Nothing here panics on data: anchors that are not
// finite get no label.
//
// Sources: candidate positions around an anchor with a greedy start and local improvement are common practice of map
// lettering (Christensen, Marks, Shieber 1995 compare the family); the costs are our own.
package mark
