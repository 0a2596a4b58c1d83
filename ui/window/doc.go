// Package window is the window of Bandwright: it lays out the panels, turns
// pointer and keys into edits of the session, and shows each new snapshot.
//
// Everything here runs on the UI goroutine, but for the drawing of panels,
// which package view does in the background from immutable snapshots. The
// window computes nothing itself. Units on screen are Fyne's, of which one is
// one point of a picture.
//
// Nothing panics on what a user does; errors of edits and files are shown
// beside what they concern and leave the study as it was.
package window
